import { eq } from 'drizzle-orm';
import { beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { auditEntries, methods, samplePoints, samples } from '../../server/db/schema/index.ts';
import { type Laboratory, makeLaboratory } from '../support/laboratory.ts';
import { type Agent, useServer } from '../support/server.ts';
import { entryAt, fieldsOf } from '../support/typed-samples.ts';

const server = useServer();
let lab: Laboratory;
let elsewhere: Laboratory;
let engineer: Agent;
const now = '2026-12-01T23:00:00.000Z';

beforeAll(async () => {
  lab = await makeLaboratory(server);
  elsewhere = await makeLaboratory(server, 'Ostrander');
  engineer = await server.signedIn({ roles: [{ siteId: lab.siteId, role: 'engineer' }] });
});
beforeEach(() => {
  server.now.value = new Date(now);
});

const entry = (own: object = {}) => entryAt(lab, own);
const enter = (body: object, agent: Agent = lab.technician, siteId = lab.siteId) =>
  agent.post(`/api/v1/sites/${siteId}/samples`).send(body);

describe('a value entered by hand', () => {
  it('is added once, however often and however much at once its key is sent', async () => {
    const body = entry({ value: '1490.5' });
    const answers = await Promise.all([enter(body), enter(body), enter(body)]);
    expect(answers.map(({ status }) => status)).toEqual([200, 200, 200]);
    expect(new Set(answers.map((answer) => answer.body.sample.id)).size).toBe(1);
    expect(answers.filter((answer) => !answer.body.again)).toHaveLength(1);
    expect((await enter(body).expect(200)).body).toMatchObject({ again: true, sample: { value: 1490.5 } });
  });

  it('takes a decimal comma or point, a limit, and another unit of the kind', async () => {
    const valueOf = async (own: object) => (await enter(entry(own)).expect(200)).body.sample;
    expect(await valueOf({ value: '1484,5' })).toMatchObject({ value: 1484.5, asWritten: '1484,5' });
    expect(await valueOf({ value: '< 900' })).toMatchObject({
      value: 900,
      qualifier: '<',
      flags: ['censored'],
    });
    expect(await valueOf({ value: '2678', unit: '°F' })).toMatchObject({
      value: 1470,
      unit: '°C',
      statedUnit: '°F',
      statedValue: 2678,
      flags: ['converted'],
    });
  });

  it('is refused beside each field that is wrong, all at once', async () => {
    const wrong = await enter(entry({ value: '1,482', takenAt: '2026-12-02T03:00:00.000Z' })).expect(400);
    expect(fieldsOf(wrong)).toMatchObject({
      value: 'Write 1.482 or 1482: a comma before three digits can mean either.',
      takenAt: 'This time is still to come. Give the time the sample was taken.',
    });
    expect(fieldsOf(await enter(entry({ unit: 'kg' })).expect(400))).toHaveProperty('unit');
    expect(fieldsOf(await enter(entry({ value: 'spilt' })).expect(400))).toHaveProperty('value');
    await enter(entry({ sampleNumber: 'T-9' })).expect(200);
    expect(fieldsOf(await enter(entry({ sampleNumber: 'T-9' })).expect(400))).toHaveProperty('sampleNumber');
  });

  it('far from the last ones is held and says so', async () => {
    for (let n = 0; n < 10; n++) await enter(entry({ value: `148${n}` })).expect(200);
    const { body } = await enter(entry({ value: '2678' })).expect(200);
    expect(body.held).toMatch(/^2,678\u00a0°C lies far from the last results.+in °F/);
    expect(body.sample).toMatchObject({ flags: ['far-from-last'], heldSince: now });
    const near = await enter(entry({ value: '1485,5' })).expect(200);
    expect(near.body).toMatchObject({ held: null, sample: { heldSince: null } });
  });

  it('is refused where its point or method is archived', async () => {
    const { db } = server.context;
    const archivedAt = new Date('2026-11-30T00:00:00Z');
    const at = { siteId: lab.siteId, archivedAt };
    const [point] = await db
      .insert(samplePoints)
      .values({ ...at, name: 'Old point' })
      .returning();
    const [method] = await db
      .insert(methods)
      .values({ ...at, name: 'Old method', unit: '°C' })
      .returning();
    const answer = await enter(entry({ samplePointId: point!.id, methodId: method!.id })).expect(400);
    expect(Object.keys(fieldsOf(answer))).toEqual(['samplePointId', 'methodId']);
  });

  it('is of a time from 1970 on, and at most ten minutes ahead of the clock', async () => {
    const answerTo = async (takenAt: string) => fieldsOf(await enter(entry({ takenAt })));
    expect(await answerTo('2026-12-01T23:10:00.000Z')).toEqual({});
    expect(await answerTo('2026-12-01T23:10:01.000Z')).toHaveProperty('takenAt');
    expect(await answerTo('1969-12-31T23:59:59.000Z')).toHaveProperty('takenAt');
  });

  it('gets a number that no other of the point bears, those of other years included', async () => {
    const takenAt = '2025-06-03T10:00:00.000Z';
    const numberOf = async (own: object) =>
      (await enter(entry({ takenAt, ...own })).expect(200)).body.sample.sampleNumber;
    const own = await Promise.all([numberOf({}), numberOf({}), numberOf({ methodId: null })]);
    expect(own.sort()).toEqual(['Tarnby-0603-1', 'Tarnby-0603-2', 'Tarnby-0603-3']);
    expect(await numberOf({ takenAt: '2024-06-03T10:00:00.000Z' })).toBe('Tarnby-0603-4');
  });

  it('with a number that is typed twice at once is added once, and said beside the number', async () => {
    const answers = await Promise.all([1, 2].map(() => enter(entry({ sampleNumber: 'T-77' }))));
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 400]);
    const refused = answers.find(({ status }) => status === 400)!;
    expect(fieldsOf(refused).sampleNumber).toContain('There is a sample T-77 at Tarnby already.');
  });

  it('with a number and a key that come twice at once is the same one', async () => {
    const body = entry({ sampleNumber: 'T-78' });
    const answers = await Promise.all([enter(body), enter(body)]);
    expect(answers.map(({ status, body: { again } }) => [status, again]).sort()).toEqual([
      [200, false],
      [200, true],
    ]);
  });

  it('stands in the audit trail with its note, and is judged', async () => {
    const { db } = server.context;
    const body = entry({ sampleNumber: 'T-80', value: '2678', unit: '°F', note: 'Bottle half full' });
    const { sample } = (await enter(body).expect(200)).body;
    const [noted] = await db.select().from(auditEntries).where(eq(auditEntries.entityName, 'T-80'));
    expect(noted).toMatchObject({
      action: 'add',
      personId: lab.technician.personId,
      after: { value: '2678', unit: '°F', held: false },
      reason: 'Bottle half full',
    });
    expect(sample).toMatchObject({ importId: null, goesTo: [{ softSensorId: lab.softSensorId }] });
    const jobs = await server.context.pool.query(
      `select count(*)::int as n from graphile_worker.jobs where key = $1`,
      [`judge:${lab.softSensorId}`],
    );
    expect(jobs.rows).toEqual([{ n: 1 }]);
  });

  it('is entered by technicians and engineers, and by no reader', async () => {
    const reader = await server.signedIn({ roles: [{ siteId: lab.siteId, role: 'reader' }] });
    await enter(entry(), reader).expect(403);
    await enter(entry(), engineer).expect(200);
  });

  it('reaches nobody across sites', async () => {
    await enter(entry(), lab.technician, elsewhere.siteId).expect(404);
    const foreign = await enter(entry({ samplePointId: elsewhere.samplePointId, methodId: null })).expect(
      400,
    );
    expect(fieldsOf(foreign)).toHaveProperty('samplePointId');
    expect(fieldsOf(await enter(entry({ methodId: elsewhere.methodId })).expect(400))).toHaveProperty(
      'methodId',
    );
    expect(await server.context.db.$count(samples, eq(samples.siteId, elsewhere.siteId))).toBe(1);
  });
});
