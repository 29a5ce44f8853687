import { randomUUID } from 'node:crypto';
import { eq } from 'drizzle-orm';
import { beforeAll, beforeEach, describe, expect, it } from 'vitest';
import {
  lifeStates,
  samplePoints,
  sampleRequests,
  samplesNotTaken,
  sites,
  softSensors,
} from '../../server/db/schema/index.ts';
import type { Ask, Asked } from '../../shared/contracts/sampling.ts';
import { type Laboratory, makeLaboratory, problemOf } from '../support/laboratory.ts';
import { type Agent, useServer } from '../support/server.ts';
import { entryAt, fieldsOf } from '../support/typed-samples.ts';

const server = useServer();
let lab: Laboratory;
let elsewhere: Laboratory;
let engineer: Agent;
/** The night of 1 December at Copenhagen: 22:00 to 06:00, an hour ahead of UTC. */
const night = '2026-12-01T23:00:00.000Z';

beforeAll(async () => {
  lab = await makeLaboratory(server);
  elsewhere = await makeLaboratory(server, 'Ostrander');
  engineer = await server.signedIn({ name: 'Marco', roles: [{ siteId: lab.siteId, role: 'engineer' }] });
  await server.context.db.delete(sampleRequests).where(eq(sampleRequests.siteId, lab.siteId));
  await server.context.db
    .update(softSensors)
    .set({ samplingPlan: { count: 2, per: 'shift' } })
    .where(eq(softSensors.id, lab.softSensorId));
});
beforeEach(() => {
  server.now.value = new Date(night);
});

const asked = async (shift = 'current', agent: Agent = lab.technician): Promise<Asked> =>
  (await agent.get(`/api/v1/sites/${lab.siteId}/asked`).query({ shift }).expect(200)).body;
const kinds = ({ asks }: Asked) => asks.map(({ state }) => state.kind);
const enter = (own: object) =>
  lab.technician.post(`/api/v1/sites/${lab.siteId}/samples`).send(entryAt(lab, own)).expect(200);
const notTaken = (ask: Ask, own: object = {}) =>
  lab.technician.post(`/api/v1/sites/${lab.siteId}/not-taken`).send({
    entryKey: randomUUID(),
    samplePointId: ask.samplePointId,
    askedFor: ask.askedFor,
    reason: 'bottle-lost',
    note: '',
    ...own,
  });
const askFor = (wish: object, agent = engineer) =>
  agent.post(`/api/v1/soft-sensors/${lab.softSensorId}/sample-requests`).send(wish);
const openRequests = async () =>
  (await lab.technician.get(`/api/v1/sites/${lab.siteId}/sample-requests`).expect(200)).body.rows;

describe('the samples asked for in a shift', () => {
  it('come from the plan of its soft sensors, with a number for each bottle', async () => {
    const { shift, asks } = await asked();
    expect(shift).toEqual({
      name: 'Night',
      fromAt: '2026-12-01T21:00:00.000Z',
      untilAt: '2026-12-02T05:00:00.000Z',
    });
    expect(asks).toHaveLength(2);
    expect(asks[0]).toMatchObject({
      samplePoint: 'Tarnby',
      unit: '°C',
      source: { kind: 'plan' },
      state: { kind: 'open' },
      softSensors: [{ id: lab.softSensorId }],
    });
    expect(asks.map(({ suggestedNumber }) => suggestedNumber)).toEqual(['Tarnby-1202-1', 'Tarnby-1202-2']);
    expect((await asked('next')).shift.name).toBe('Early');
    expect((await asked('previous')).shift.name).toBe('Late');
  });

  it('are answered by what is entered, or by why it was not taken', async () => {
    await enter({ takenAt: '2026-12-01T22:55:00.000Z' });
    expect(kinds(await asked())).toEqual(['taken', 'open']);
    const [, second] = (await asked()).asks;
    const bare = await notTaken(second!, { reason: 'other' }).expect(400);
    expect(fieldsOf(bare)).toEqual({ note: 'Write why it was not taken.' });
    await notTaken(second!, { reason: 'other', note: 'Ladder iced over' }).expect(200);
    const { asks } = await asked();
    expect(asks[1]!.state).toMatchObject({
      kind: 'not-taken',
      note: 'Ladder iced over',
      by: 'Tove Halbrook',
    });
  });

  it('say what was taken as it was written, and what was taken last', async () => {
    server.now.value = new Date('2026-12-02T07:00:00.000Z');
    const typed = { takenAt: '2026-12-02T06:50:00.000Z', value: '2678,2', unit: '°F' };
    const { sample } = (await enter(typed)).body;
    const [first] = (await asked()).asks;
    expect(first!.state).toEqual({
      kind: 'taken',
      sampleId: sample.id,
      sampleNumber: 'Tarnby-1202-1',
      takenAt: typed.takenAt,
      asWritten: '2678,2',
      unit: '°F',
    });
    expect(first).toMatchObject({
      suggestedNumber: '',
      last: { asWritten: '2678,2', unit: '°F', takenAt: typed.takenAt },
    });
  });

  it('are kept once as not taken, however much at once the key is sent', async () => {
    const [, second] = (await asked('next')).asks;
    const same = { entryKey: randomUUID() };
    const answers = await Promise.all([1, 2, 3].map(() => notTaken(second!, same)));
    expect(answers.map(({ status, body }) => [status, body.again]).sort()).toEqual([
      [200, false],
      [200, true],
      [200, true],
    ]);
    const own = eq(samplesNotTaken.entryKey, same.entryKey);
    expect(await server.context.db.$count(samplesNotTaken, own)).toBe(1);
    expect((await asked('next')).asks[1]!.state).toMatchObject({ reason: 'bottle-lost' });
  });

  it('are shared by soft sensors at one point with one method, and apart from those at another', async () => {
    const { db } = server.context;
    const [row] = await db.select().from(softSensors).where(eq(softSensors.id, lab.softSensorId));
    const [point] = await db.insert(samplePoints).values({ siteId: lab.siteId, name: 'A-1' }).returning();
    const { id: _id, estimateTagId: _tag, ...like } = row!;
    const made: number[] = [];
    for (const [tagName, samplePointId] of [
      ['TY-2', lab.samplePointId],
      ['TY-3', point!.id],
    ] as const) {
      const tag = { name: tagName, unit: '°C', unitId: lab.unitId, rangeLow: null, rangeHigh: null };
      const { body } = await engineer
        .post(`/api/v1/sites/${lab.siteId}/tags`)
        .send({ tags: [tag] })
        .expect(200);
      const values = { ...like, tagName, samplePointId, estimateTagId: body.rows[0].id };
      const [sensor] = await db.insert(softSensors).values(values).returning();
      const key = { siteId: lab.siteId, softSensorId: sensor!.id, recordedBy: engineer.personId };
      await db.insert(lifeStates).values({ ...key, state: 'in-validation', effectiveFrom: new Date(0) });
      made.push(sensor!.id);
    }
    const { asks } = await asked('next');
    const shared = asks.filter(({ samplePointId }) => samplePointId === lab.samplePointId);
    expect(shared.map(({ softSensors }) => softSensors.map(({ id }) => id).sort())).toEqual([
      [lab.softSensorId, made[0]],
      [lab.softSensorId, made[0]],
    ]);
    expect(asks).toHaveLength(4);
    expect(new Set(asks.map(({ key }) => key)).size).toBe(4);
    const effectiveFrom = new Date('2026-11-30T00:00:00Z');
    for (const softSensorId of made) {
      const key = { siteId: lab.siteId, softSensorId, recordedBy: engineer.personId };
      await db.insert(lifeStates).values({ ...key, state: 'retired', effectiveFrom });
    }
    expect((await asked('next')).asks).toHaveLength(2);
  });

  it('follow the shifts of the site', async () => {
    const { db } = server.context;
    const own = eq(sites.id, lab.siteId);
    const [before] = await db.select().from(sites).where(own);
    await db
      .update(sites)
      .set({ shifts: [{ name: 'Day', from: '07:30' }] })
      .where(own);
    expect((await asked()).shift).toEqual({
      name: 'Day',
      fromAt: '2026-12-01T06:30:00.000Z',
      untilAt: '2026-12-02T06:30:00.000Z',
    });
    await db.update(sites).set({ shifts: before!.shifts }).where(own);
  });

  it('are none while the unit stands, and it says since when', async () => {
    server.now.value = new Date('2026-12-03T12:00:00.000Z');
    const stop = { unitId: lab.unitId, kind: 'stop', at: '2026-12-03T11:00:00.000Z', until: null, note: '' };
    await engineer.post(`/api/v1/sites/${lab.siteId}/events`).send(stop).expect(200);
    expect((await asked()).asks.map(({ state }) => state)).toEqual([
      { kind: 'unit-stopped', since: '2026-12-03T11:00:00.000Z' },
    ]);
    server.now.value = new Date('2026-12-03T12:30:00.000Z');
    const start = { ...stop, kind: 'start', at: '2026-12-03T12:20:00.000Z' };
    await engineer.post(`/api/v1/sites/${lab.siteId}/events`).send(start).expect(200);
    expect(kinds(await asked())).toEqual(['open', 'open']);
  });

  it('are more where somebody asks, and fewer as they are taken', async () => {
    server.now.value = new Date('2026-12-05T07:00:00.000Z');
    const wish = {
      count: 4,
      fromAt: '2026-12-05T07:00:00.000Z',
      untilAt: '2026-12-05T13:00:00.000Z',
      reason: 'Reads high',
    };
    await askFor(wish, lab.technician).expect(403);
    expect(fieldsOf(await askFor({ ...wish, untilAt: wish.fromAt }).expect(400))).toHaveProperty('untilAt');
    const far = await askFor({ ...wish, untilAt: '2028-01-01T00:00:00.000Z' }).expect(400);
    expect(fieldsOf(far)).toHaveProperty('untilAt');
    expect(
      fieldsOf(await askFor({ ...wish, fromAt: '2026-12-01T00:00:00.000Z' }).expect(400)),
    ).toHaveProperty('fromAt');
    const { body: request } = await askFor(wish).expect(200);
    const { asks } = await asked();
    expect(asks).toHaveLength(4);
    expect(asks[0]!.source).toMatchObject({ kind: 'request', askedBy: 'Marco', reason: 'Reads high' });
    await enter({ takenAt: '2026-12-05T07:00:00.000Z' });
    expect(kinds(await asked()).filter((kind) => kind === 'taken')).toHaveLength(1);
    expect(await openRequests()).toMatchObject([{ count: 4, taken: 1 }]);
    const withdraw = (version: number, agent = engineer) =>
      agent.post(`/api/v1/sample-requests/${request.id}/withdraw`).send({ version });
    await withdraw(1).expect(200);
    expect(problemOf(await withdraw(1).expect(409)).current).toMatchObject({ version: 2 });
    expect((await asked()).asks).toHaveLength(2);
    expect(await openRequests()).toEqual([]);
  });

  it('of a request are over when they are taken, and none are asked of a soft sensor without a point', async () => {
    server.now.value = new Date('2026-12-05T15:00:00.000Z');
    const own = eq(softSensors.id, lab.softSensorId);
    const wish = {
      count: 1,
      fromAt: '2026-12-05T15:00:00.000Z',
      untilAt: '2026-12-08T15:00:00.000Z',
      reason: '',
    };
    await askFor(wish).expect(200);
    await enter({ takenAt: '2026-12-05T15:05:00.000Z' });
    expect(await openRequests()).toEqual([]);
    await server.context.db.update(softSensors).set({ samplePointId: null }).where(own);
    const refused = await askFor(wish).expect(409);
    expect(problemOf(refused).detail).toContain('has no sample point. Name one on its data sheet first.');
    await server.context.db.update(softSensors).set({ samplePointId: lab.samplePointId }).where(own);
  });

  it('are none for a soft sensor that is suspended, unless somebody asks for them', async () => {
    const { db } = server.context;
    const effectiveFrom = new Date('2026-12-06T00:00:00Z');
    const key = { siteId: lab.siteId, softSensorId: lab.softSensorId, recordedBy: engineer.personId };
    server.now.value = new Date('2026-12-06T12:00:00.000Z');
    await db.insert(lifeStates).values({ ...key, state: 'suspended', effectiveFrom });
    expect((await asked()).asks).toEqual([]);
    const wish = {
      count: 3,
      fromAt: '2026-12-06T12:00:00.000Z',
      untilAt: '2026-12-06T13:00:00.000Z',
      reason: 'Before it goes back',
    };
    const { body } = await askFor(wish).expect(200);
    expect((await asked()).asks).toHaveLength(3);
    await engineer.post(`/api/v1/sample-requests/${body.id}/withdraw`).send({ version: 1 }).expect(200);
    expect((await asked()).asks).toEqual([]);
    await db
      .insert(lifeStates)
      .values({ ...key, state: 'in-service', effectiveFrom: new Date('2026-12-06T01:00:00Z') });
    expect((await asked()).asks).toHaveLength(2);
  });

  it('are not said to be missing at a sample point of another site', async () => {
    const [one] = (await asked()).asks;
    const answer = await notTaken(one!, { samplePointId: elsewhere.samplePointId }).expect(400);
    expect(fieldsOf(answer)).toHaveProperty('samplePointId');
  });
});
