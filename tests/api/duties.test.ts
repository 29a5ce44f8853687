import { beforeAll, beforeEach, describe, expect, it } from 'vitest';
import type { Duty } from '../../shared/contracts/duties.ts';
import type { SheetFields } from '../../shared/contracts/register.ts';
import { syncDuties } from '../../server/features/duties/service.ts';
import { type Plant, get, makePlant, post, putInService } from '../support/plant.ts';
import { sheetFields } from '../support/sheet-fields.ts';
import { type Agent, useServer } from '../support/server.ts';

const server = useServer();
const external = { form: 'external', holdLimitMs: 600_000, residualSd: null };
const threeMonths = { every: 3, unit: 'months' as const, counted: 'last-done' as const, anchorOn: null };
const inOrder = { purpose: true, consumers: true, inputs: true, validity: true, owner: true };
let plant: Plant;
let deputy: Agent;

beforeAll(async () => {
  server.now.value = new Date('2026-11-30T11:00:00Z');
  plant = await makePlant(server);
  deputy = await server.signedIn({ name: 'The deputy', roles: [{ siteId: plant.siteId, role: 'engineer' }] });
});
beforeEach(() => {
  server.now.value = new Date('2026-11-30T11:00:00Z');
});

async function inService(own: Partial<SheetFields> = {}): Promise<number> {
  const people = { ownerId: plant.engineer.personId, deputyId: deputy.personId };
  const fields = { recalibrationInterval: threeMonths, samplePointId: null, ...people, ...own };
  return (await putInService(plant, external, fields)).id;
}

async function dutiesOf(agent: Agent, softSensorId: number, query: object = {}): Promise<Duty[]> {
  return (await get(agent, '/duties', { softSensorId, ...query })).rows;
}

async function openDuty(softSensorId: number, kind: Duty['kind'] = 'recalibration'): Promise<Duty> {
  return (await dutiesOf(plant.manager, softSensorId, { kind }))[0]!;
}

describe('a soft sensor that comes into service', () => {
  it('has a recalibration and a review due, an interval from that day, clamped to the end of the month', async () => {
    const id = await inService();
    expect(await dutiesOf(plant.engineer, id)).toMatchObject([
      { kind: 'recalibration', dueOn: '2027-02-28', openedOn: '2026-11-30', daysLate: -90, mayAttend: true },
      { kind: 'review', dueOn: '2027-11-30', assignees: [{ id: plant.engineer.personId }] },
    ]);
    const sheet = await get(plant.engineer, `/soft-sensors/${id}`);
    expect(sheet.dueOn).toEqual({ recalibration: '2027-02-28', review: '2027-11-30' });
  });

  it('has no duty while it is a draft, and none twice however often they are looked for', async () => {
    const fields = sheetFields({ unitId: plant.unitId });
    const draft = await post(plant.engineer, `/sites/${plant.siteId}/soft-sensors`, fields);
    const id = await inService();
    await Promise.all([1, 2, 3].map(() => syncDuties(server.context)));
    expect(await dutiesOf(plant.engineer, draft.id)).toEqual([]);
    expect(await dutiesOf(plant.engineer, id)).toHaveLength(2);
    expect(await dutiesOf(plant.engineer, id, { state: 'closed' })).toEqual([]);
  });

  it('moves its due date with the interval on its data sheet', async () => {
    const id = await inService();
    const { fields, version } = await get(plant.engineer, `/soft-sensors/${id}`);
    const anchored = { every: 1, unit: 'months', counted: 'anchored', anchorOn: '2026-01-31' };
    const changed = { ...fields, recalibrationInterval: anchored };
    await plant.engineer.put(`/api/v1/soft-sensors/${id}`).send({ fields: changed, version }).expect(200);
    expect(await openDuty(id)).toMatchObject({ dueOn: '2026-11-30', daysLate: 0 });
  });

  it('refuses an interval of zero and a day that does not exist beside their fields', async () => {
    const wrong = { every: 0, unit: 'months', counted: 'anchored', anchorOn: '2027-02-31' };
    const fields = { ...sheetFields({ unitId: plant.unitId }), recalibrationInterval: wrong };
    const answer = await plant.engineer
      .post(`/api/v1/sites/${plant.siteId}/soft-sensors`)
      .send(fields)
      .expect(400);
    const paths = answer.body.fields.map(({ path }: { path: string }) => path).sort();
    expect(paths).toEqual(['recalibrationInterval.anchorOn', 'recalibrationInterval.every']);
    expect(answer.body.fields.map(({ message }: { message: string }) => message)).toContain(
      'Write a day that exists, such as 2026-11-29.',
    );
  });
});

describe('the list of duties', () => {
  it('shows mine, or those of my sites, with how many are late, due today and soon', async () => {
    const id = await inService({ recalibrationInterval: { ...threeMonths, every: 1, unit: 'days' } });
    const other = await inService({ ownerId: deputy.personId, deputyId: plant.engineer.personId });
    server.now.value = new Date('2026-12-03T09:00:00Z');
    const mine = await get(plant.engineer, '/duties', { whose: 'mine', perPage: 200 });
    expect(mine.rows.some((row: Duty) => row.softSensorId === id && row.daysLate === 2)).toBe(true);
    expect(mine.rows.some((row: Duty) => row.softSensorId === other)).toBe(false);
    expect(mine.late).toBeGreaterThan(0);
    const sites = await get(plant.engineer, '/duties', { perPage: 200 });
    expect(sites.rows.some((row: Duty) => row.softSensorId === other)).toBe(true);
    expect(sites.total).toBeGreaterThan(mine.total);
    const dates = sites.rows.map(({ dueOn }: Duty) => dueOn);
    expect(dates).toEqual([...dates].sort());
    const paged = await get(plant.engineer, '/duties', { perPage: 1, page: 2 });
    expect(paged.rows).toEqual([sites.rows[1]]);
  });

  it('counts days by the clock of the site: an hour before midnight UTC it is tomorrow there', async () => {
    const id = await inService();
    server.now.value = new Date('2027-02-28T23:30:00Z');
    expect(await dutiesOf(plant.manager, id, { kind: 'recalibration' })).toMatchObject([
      { today: '2027-03-01', daysLate: 1 },
    ]);
    expect((await get(plant.manager, '/duties', { softSensorId: id })).late).toBe(1);
  });
});

describe('a review', () => {
  it('closes its duty with who did it, opens the next, and is what was decided last time', async () => {
    const id = await inService();
    server.now.value = new Date('2027-10-15T09:00:00Z');
    const body = { conclusion: 'keep', answers: inOrder, note: '' };
    const review = await post(plant.engineer, `/soft-sensors/${id}/reviews`, body);
    const [closed] = await dutiesOf(plant.engineer, id, { state: 'closed' });
    expect(closed).toMatchObject({
      kind: 'review',
      closedAs: 'done',
      closedBy: { id: plant.engineer.personId },
    });
    expect(await openDuty(id, 'review')).toMatchObject({
      dueOn: '2028-10-15',
      lastDecision: { what: 'review', reviewId: review.id, conclusion: 'keep' },
    });
    const { rows } = await get(plant.engineer, `/soft-sensors/${id}/reviews`);
    expect(rows).toEqual([review]);
    expect(await syncDuties(server.context)).toBeUndefined();
    expect((await openDuty(id, 'review')).dueOn).toBe('2028-10-15');
  });

  it('says what is not in order', async () => {
    const id = await inService();
    const body = { conclusion: 'keep', answers: { ...inOrder, owner: false }, note: '' };
    const answer = await plant.engineer.post(`/api/v1/soft-sensors/${id}/reviews`).send(body).expect(400);
    expect(answer.body.fields).toEqual([
      { path: 'note', message: 'Write what is not in order, and what is done about it.' },
    ]);
  });
});

describe('a waiver', () => {
  const waive = (agent: Agent, duty: Duty, own: object = {}) =>
    agent.post(`/api/v1/duties/${duty.id}/waiver`).send({
      reason: 'The furnace is rebuilt until May',
      dueOn: '2027-01-20',
      version: duty.version,
      ...own,
    });

  it('by a manager keeps the reason and opens the duty anew on the date, which stands', async () => {
    const id = await inService();
    const duty = await openDuty(id);
    const next = (await waive(plant.manager, duty).expect(200)).body as Duty;
    expect(next).toMatchObject({ dueOn: '2027-01-20', state: 'open', lastDecision: { what: 'waiver' } });
    await syncDuties(server.context);
    expect(await openDuty(id)).toMatchObject({ id: next.id, dueOn: '2027-01-20' });
    expect(await dutiesOf(plant.manager, id, { state: 'closed' })).toMatchObject([
      { id: duty.id, closedAs: 'waived', reason: 'The furnace is rebuilt until May' },
    ]);
    const again = await waive(plant.manager, duty).expect(409);
    expect(again.body.detail).toBe('This duty was waived meanwhile.');
  });

  it('is not the owner’s own, nor anybody’s who does not approve', async () => {
    const id = await inService();
    const duty = await openDuty(id);
    const own = await waive(plant.engineer, duty).expect(403);
    expect(own.body.detail).toContain('This duty is yours');
    expect((await waive(deputy, duty).expect(403)).body.detail).toContain('Only the named approver');
    expect(await openDuty(id)).toMatchObject({ id: duty.id, mayWaive: true });
    const approved = await inService({ approverId: deputy.personId, deputyId: null });
    await waive(deputy, await openDuty(approved)).expect(200);
  });

  it('needs a day ahead, an interval ahead at most, and a reason', async () => {
    const duty = await openDuty(await inService());
    for (const [own, path] of [
      [{ dueOn: '2026-11-30' }, 'dueOn'],
      [{ dueOn: '2027-03-01' }, 'dueOn'],
      [{ dueOn: '2027-02-31' }, 'dueOn'],
      [{ reason: ' ' }, 'reason'],
    ] as const) {
      const answer = await waive(plant.manager, duty, own).expect(400);
      expect(answer.body.fields.map((field: { path: string }) => field.path)).toEqual([path]);
    }
    const stale = await waive(plant.manager, duty, { version: 9 }).expect(409);
    expect(stale.body).toMatchObject({
      code: 'stale',
      current: { dueOn: duty.dueOn, version: duty.version },
    });
  });
});

describe('giving a duty away', () => {
  const give = (agent: Agent, duty: Duty, personId: number | null) =>
    agent.post(`/api/v1/duties/${duty.id}/assignee`).send({ personId, reason: '', version: duty.version });

  it('makes it somebody else’s, until it goes back to the owner', async () => {
    const id = await inService();
    const given = (await give(plant.engineer, await openDuty(id), deputy.personId).expect(200)).body as Duty;
    expect(given).toMatchObject({ reassigned: true, assignees: [{ id: deputy.personId }] });
    const mine = await dutiesOf(deputy, id, { whose: 'mine' });
    expect(mine.map((row) => row.id)).toEqual([given.id]);
    const back = (await give(plant.manager, given, null).expect(200)).body as Duty;
    expect(back).toMatchObject({ reassigned: false, assignees: [{ id: plant.engineer.personId }] });
  });

  it('goes to engineers of the site only, by owner, deputy or manager', async () => {
    const id = await inService();
    const duty = await openDuty(id);
    const stranger = await server.signedIn({ roles: [{ siteId: plant.siteId, role: 'engineer' }] });
    expect((await give(stranger, duty, stranger.personId).expect(403)).body.detail).toContain(
      'Only the owner',
    );
    const wrong = await give(plant.engineer, duty, plant.manager.personId).expect(400);
    expect(wrong.body.fields).toEqual([
      { path: 'personId', message: expect.stringContaining('no engineer') },
    ]);
  });
});
