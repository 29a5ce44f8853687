import { and, eq } from 'drizzle-orm';
import { describe, expect, it } from 'vitest';
import { calibrations, ownerships, readings, samples, softSensors } from '../../server/db/schema/index.ts';
import { samplesChanged } from '../../server/features/judging/changed.ts';
import type { CalibrationEvidence } from '../../shared/contracts/calibration-evidence.ts';
import type { CalibrationRecord } from '../../shared/contracts/calibrations.ts';
import type { Sheet, SheetFields } from '../../shared/contracts/register.ts';
import { ensurePartitions } from '../../server/db/partitions.ts';
import {
  approveModel,
  at,
  get,
  hour,
  labError,
  makePlant,
  modelOf,
  type Plant,
  post,
  putInService,
  truth,
  writeInputs,
  writeSamples,
} from '../support/plant.ts';
import { type Agent, useServer } from '../support/server.ts';

const server = useServer();
const bias = 1.4;
const sampled = (n: number, from = 5) => Array.from({ length: n }, (_, i) => from + 8 * i);

/** A plant whose soft sensor reads `bias` high, with `n` samples behind it, judged. */
async function plantWith(n: number, own: Partial<SheetFields> = {}, reads = bias) {
  const plant = await makePlant(server);
  const hours = sampled(n);
  const end = (hours.at(-1) ?? 50) + 4;
  server.now.value = at(end);
  await writeInputs(plant, 0, end);
  await writeSamples(plant, hours);
  const sensor = await putInService(plant, modelOf(plant, 5 + reads), {
    promisedReferenceMs: 400 * hour,
    ...own,
  });
  await server.drainJobs();
  return { plant, id: sensor.id, estimateTagId: sensor.estimateTagId, end };
}
type Judged = Awaited<ReturnType<typeof plantWith>>;

async function evidenceOf(plant: Plant, id: number): Promise<CalibrationEvidence> {
  const reply = await get(plant.engineer, `/soft-sensors/${id}/recalibration`);
  if (!reply.ok) throw new Error(JSON.stringify(reply));
  return reply.evidence;
}

async function propose(plant: Plant, id: number, kind = 'bias', agent: Agent = plant.engineer) {
  const { used, to } = await evidenceOf(plant, id);
  return agent
    .post(`/api/v1/soft-sensors/${id}/calibrations`)
    .send({ kind, reason: 'Reads high', seen: { used, to } });
}

const decide = (agent: Agent, id: number, own: object = {}) =>
  agent
    .post(`/api/v1/calibrations/${id}/decision`)
    .send({ decision: 'approved', reason: '', ownerId: null, effectiveFrom: null, ...own });

const sheetOf = (plant: Plant, id: number): Promise<Sheet> => get(plant.engineer, `/soft-sensors/${id}`);

async function hoursLater(judged: Judged, hours: number, from = judged.end): Promise<void> {
  const { plant } = judged;
  await writeInputs(plant, from, from + hours);
  const taken = sampled(Math.floor(hours / 8), from + 2);
  await writeSamples(plant, taken);
  server.now.value = at(from + hours);
  await server.context.db.transaction(async (tx) => {
    const { readingsChanged } = await import('../../server/features/history/changed.ts');
    await readingsChanged(tx, {
      siteId: plant.siteId,
      tagIds: plant.tagIds,
      from: at(from),
      to: at(from + hours),
    });
    await samplesChanged(tx, { siteId: plant.siteId, samplePointIds: [plant.pointId] });
  });
  await server.drainJobs();
}

describe('a recalibration', () => {
  it('goes from a bad error to a mended estimate, with as found and as left kept', async () => {
    const judged = await plantWith(30);
    const { plant, id } = judged;
    expect((await sheetOf(plant, id)).status).toMatchObject({ health: 'unfit', referencesSince: 30 });
    const evidence = await evidenceOf(plant, id);
    expect(evidence.recommended).toBe('bias');
    const made = (await propose(plant, id)).body;
    expect(made).toMatchObject({ number: 1, decision: null, slope: 1, slopeBefore: 1, offsetBefore: 0 });
    expect(made.offset).toBeCloseTo(-bias, 1);
    const approved = await decide(plant.manager, made.id);
    expect(approved.body).toMatchObject({
      decision: 'approved',
      effectiveFrom: server.now.value!.toISOString(),
    });
    await server.drainJobs();
    const after = await sheetOf(plant, id);
    expect(after.correction).toMatchObject({ offset: made.offset, calibrationId: made.id });
    expect(after.status).toMatchObject({ health: 'unproven', counted: 0, referencesSince: 0 });
    await hoursLater(judged, 100);
    expect((await sheetOf(plant, id)).status).toMatchObject({
      health: 'fit',
      counted: 12,
      referencesSince: 12,
    });
    const record: CalibrationRecord = await get(plant.engineer, `/calibrations/${made.id}`);
    expect(record.evidence).toEqual(evidence);
    expect(record.errors).toHaveLength(30);
    expect(record.errors[3]).toMatchObject({ error: expect.closeTo(bias, 0), sampleNumber: 'S29' });
    expect(record.since).toMatchObject({ ok: true, n: 12, bias: expect.closeTo(0, 1) });
    const db = server.context.db;
    await expect(
      db.update(calibrations).set({ offset: 0 }).where(eq(calibrations.id, made.id)),
    ).rejects.toThrow();
    await expect(db.delete(calibrations).where(eq(calibrations.id, made.id))).rejects.toThrow();
  });

  it('corrects what is read from its approval on, and leaves the raw estimate as it was', async () => {
    const judged = await plantWith(30);
    const { plant, id, estimateTagId, end } = judged;
    const made = (await propose(plant, id)).body;
    const approved = await decide(plant.manager, made.id);
    await hoursLater(judged, 20);
    const series = await get(plant.engineer, `/soft-sensors/${id}/series`, {
      from: at(end - 3).toISOString(),
      to: at(end + 10).toISOString(),
    });
    const raw = await server.context.db
      .select()
      .from(readings)
      .where(and(eq(readings.siteId, plant.siteId), eq(readings.tagId, estimateTagId)));
    const rawAt = new Map(raw.map((reading) => [reading.at.getTime(), reading.value]));
    const added = (series.at as number[]).map((ms, i) => series.value[i] - rawAt.get(ms)!);
    const inForce = Date.parse(approved.body.effectiveFrom);
    for (const [i, ms] of (series.at as number[]).entries())
      expect(added[i]).toBeCloseTo(ms < inForce ? 0 : made.offset, 9);
    expect(new Set(added.map((value) => Math.sign(Math.round(value)))).size).toBe(2);
    const corrected = (await sheetOf(plant, id)).status!.currentValue!;
    expect(corrected).toBeCloseTo(truth(end + 19) + bias + made.offset, 6);
  });

  it('is decided by the named approver or a manager, never by its proposer', async () => {
    const { plant, id } = await plantWith(30);
    const both = await server.signedIn({
      roles: [
        { siteId: plant.siteId, role: 'engineer' },
        { siteId: plant.siteId, role: 'manager' },
      ],
    });
    const made = (await propose(plant, id, 'bias', both)).body;
    const own = await decide(both, made.id);
    expect(own.status).toBe(403);
    expect(own.body.detail).toMatch(/^You proposed this recalibration/);
    const other = await server.signedIn({ roles: [{ siteId: plant.siteId, role: 'engineer' }] });
    expect((await decide(other, made.id)).status).toBe(403);
    await nameOwner(plant, id, { approverId: other.personId });
    expect((await decide(other, made.id)).status).toBe(200);
    const again = await decide(plant.manager, made.id, { decision: 'declined', reason: 'No' });
    expect(again.body.detail).toBe('Recalibration 1 was approved already.');
  });

  it('is declined with a reason, and nothing changes', async () => {
    const { plant, id } = await plantWith(30);
    const made = (await propose(plant, id)).body;
    const bare = await decide(plant.manager, made.id, { decision: 'declined' });
    expect(bare.body.fields).toEqual([
      { path: 'reason', message: 'Write why it is declined, so that the proposer knows what to change.' },
    ]);
    const declined = await decide(plant.manager, made.id, {
      decision: 'declined',
      reason: 'Ask the laboratory first',
    });
    expect(declined.body).toMatchObject({ decision: 'declined', effectiveFrom: null });
    expect(await sheetOf(plant, id)).toMatchObject({ correction: null, waitingCalibration: null });
  });

  it('stands alone: a second proposal at the same moment is refused with a sentence', async () => {
    const { plant, id } = await plantWith(30);
    const answers = await Promise.all([propose(plant, id), propose(plant, id, 'as-found')]);
    const [refused] = answers.filter(({ status }) => status === 409);
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 409]);
    expect(refused!.body.detail).toMatch(/^Recalibration 1 waits for a decision already/);
  });

  it('can’t be approved once its samples were revised, and says which', async () => {
    const { plant, id } = await plantWith(30);
    const made = (await propose(plant, id)).body;
    await revise(plant, 'S29', 3);
    const refused = await decide(plant.manager, made.id);
    expect(refused.status).toBe(409);
    expect(refused.body.detail).toMatch(/^Sample S29 changed after this was proposed/);
    const record: CalibrationRecord = await get(plant.engineer, `/calibrations/${made.id}`);
    expect(record.revisedSamples).toEqual(['S29']);
    expect((await decide(plant.manager, made.id, { decision: 'declined', reason: 'Revised' })).status).toBe(
      200,
    );
  });

  it('can’t be approved unseen by whoever did not know that the owner changed', async () => {
    const { plant, id } = await plantWith(30);
    const made = (await propose(plant, id)).body;
    await nameOwner(plant, id, { ownerId: plant.engineer.personId });
    const refused = await decide(plant.manager, made.id);
    expect(refused.body).toMatchObject({ code: 'stale', current: { ownerId: plant.engineer.personId } });
    const seen = await decide(plant.manager, made.id, { ownerId: plant.engineer.personId });
    expect(seen.status).toBe(200);
  });

  it('can’t be in force before its approval, nor far ahead of it', async () => {
    const { plant, id, end } = await plantWith(30);
    const made = (await propose(plant, id)).body;
    const tries = [at(end - 1), at(end + 32 * 24)].map((when) =>
      decide(plant.manager, made.id, { effectiveFrom: when.toISOString() }),
    );
    for (const answer of await Promise.all(tries)) expect(answer.body.fields[0].path).toBe('effectiveFrom');
    const later = await decide(plant.manager, made.id, { effectiveFrom: at(end + 5).toISOString() });
    expect(later.body.effectiveFrom).toBe(at(end + 5).toISOString());
  });

  it('is overtaken by a new revision, which starts uncorrected', async () => {
    const judged = await plantWith(30);
    const { plant, id } = judged;
    const first = (await propose(plant, id)).body;
    await decide(plant.manager, first.id);
    await hoursLater(judged, 100);
    const second = (await propose(plant, id, 'as-found')).body;
    expect(second).toMatchObject({ slope: 1, offset: first.offset, offsetBefore: first.offset });
    await approveModel(plant, id, modelOf(plant), 1);
    const refused = await decide(plant.manager, second.id);
    expect(refused.body.detail).toMatch(/^Revision 2 came into force after this was proposed/);
    expect((await sheetOf(plant, id)).correction).toBeNull();
  });

  it('is proposed on the evidence that was seen, or the newer evidence comes back', async () => {
    const judged = await plantWith(30);
    const { plant, id } = judged;
    const seen = await evidenceOf(plant, id);
    await hoursLater(judged, 16);
    const answer = await plant.engineer
      .post(`/api/v1/soft-sensors/${id}/calibrations`)
      .send({ kind: 'bias', reason: 'Reads high', seen: { used: seen.used, to: seen.to } });
    expect(answer.body).toMatchObject({ code: 'stale' });
    expect(answer.body.current.to).not.toBe(seen.to);
  });

  it('is only left as found where the soft sensor is monitored only', async () => {
    const { plant, id } = await plantWith(30, { correctionMode: 'monitor' });
    const refused = await propose(plant, id);
    expect(refused.status).toBe(400);
    expect(refused.body.fields).toEqual([
      { path: 'kind', message: expect.stringMatching(/^This soft sensor is monitored only/) },
    ]);
    expect((await propose(plant, id, 'as-found')).body).toMatchObject({ kind: 'as-found', decision: null });
  });

  it('asks who entered it where the estimate is computed elsewhere, and adds nothing itself', async () => {
    const { plant, id, end, estimateTagId } = await externalPlant();
    const made = (await propose(plant, id)).body;
    expect(made.toBeEntered).toBe(true);
    expect((await decide(plant.manager, made.id)).body.effectiveFrom).toBeNull();
    const waiting = await sheetOf(plant, id);
    expect(waiting.calibrationToEnter!.id).toBe(made.id);
    expect(waiting.correction).toBeNull();
    const enter = (enteredAt: Date) =>
      plant.engineer
        .post(`/api/v1/calibrations/${made.id}/entry`)
        .send({ enteredBy: 'Shift C, Ana Rivas', enteredAt: enteredAt.toISOString() });
    expect((await enter(at(end - 5))).body.fields[0].message).toMatch(/before it was approved/);
    expect((await enter(at(end + 5))).body.fields[0].message).toMatch(/yet to come/);
    server.now.value = at(end + 2);
    expect((await enter(at(end + 1))).body).toMatchObject({
      enteredBy: 'Shift C, Ana Rivas',
      effectiveFrom: at(end + 1).toISOString(),
    });
    expect((await enter(at(end + 2))).status).toBe(409);
    // Readings after the entry contain it; adding it here too would correct twice.
    const after = { siteId: plant.siteId, tagId: estimateTagId, at: at(end + 2), value: 42 };
    await server.context.db.insert(readings).values(after);
    await server.refreshSpan(plant.siteId, estimateTagId);
    await server.drainJobs();
    const sheet = await sheetOf(plant, id);
    expect(sheet.status!.currentValue).toBe(42);
    expect(sheet.correction).toMatchObject({ entered: true, offset: made.offset });
  });
});

describe('too little to judge', () => {
  it('is answered with how many samples are needed, and nothing can be proposed', async () => {
    const { plant, id } = await plantWith(5);
    const reply = await get(plant.engineer, `/soft-sensors/${id}/recalibration`);
    expect(reply).toMatchObject({ ok: false, reason: 'too-few-samples', counted: 5, needed: 8 });
    const answer = await plant.engineer
      .post(`/api/v1/soft-sensors/${id}/calibrations`)
      .send({ kind: 'as-found', reason: 'x', seen: { used: 5, to: at(0).toISOString() } });
    expect(answer.status).toBe(422);
    expect(answer.body.detail).toMatch(/^Only 5 samples count since the beginning; 8 are needed to judge/);
  });

  it.each([
    ['censored', { qualifier: '<' as const }, 'only-censored'],
    ['held for a re-test', { heldSince: at(0) }, 'only-held'],
  ])('says that all samples are %s', async (_what, flaw, reason) => {
    const plant = await makePlant(server);
    server.now.value = at(200);
    await writeInputs(plant, 0, 200);
    await server.context.db.insert(samples).values(
      sampled(12).map((k, i) => ({
        siteId: plant.siteId,
        samplePointId: plant.pointId,
        sampleNumber: `S${k}`,
        takenAt: at(k),
        reportedAt: at(k + 1),
        value: truth(k) + labError(i),
        unit: '%',
        asWritten: '',
        enteredBy: plant.engineer.personId,
        enteredAt: at(0),
        ...flaw,
      })),
    );
    const { id } = await putInService(plant, modelOf(plant));
    await server.drainJobs();
    expect(await get(plant.engineer, `/soft-sensors/${id}/recalibration`)).toMatchObject({
      ok: false,
      reason,
    });
  });
});

describe('confirming as found', () => {
  it('makes one record each for those that are Fit with 15 references, and says why not for the others', async () => {
    const good = await plantWith(20, {}, 0);
    const bad = await putInService(good.plant, modelOf(good.plant, 5 + bias), {
      promisedReferenceMs: 400 * hour,
    });
    await server.drainJobs();
    const answer = await post(good.plant.engineer, '/confirmations', { softSensorIds: [good.id, bad.id] });
    expect(answer.confirmed).toEqual([{ softSensorId: good.id, calibrationId: expect.any(Number) }]);
    expect(answer.refused).toMatchObject([
      { softSensorId: bad.id, why: expect.stringMatching(/^It is not Fit/) },
    ]);
    const { lastCalibration, status } = await sheetOf(good.plant, good.id);
    expect(lastCalibration).toMatchObject({
      decision: 'confirmed',
      kind: 'as-found',
      reason: 'Confirmed as found',
    });
    expect(status).toMatchObject({ health: 'fit' });
    const again = await post(good.plant.engineer, '/confirmations', { softSensorIds: [good.id] });
    expect(again.refused[0].why).toBe('0 references since the last recalibration; 15 are needed.');
  });

  it('reaches no soft sensor of another site, and then confirms none at all', async () => {
    const own = await plantWith(20, {}, 0);
    const foreign = await plantWith(20, {}, 0);
    const answer = await own.plant.engineer
      .post('/api/v1/confirmations')
      .send({ softSensorIds: [own.id, foreign.id] });
    expect(answer.status).toBe(404);
    expect(await server.context.db.$count(calibrations, eq(calibrations.softSensorId, own.id))).toBe(0);
  });
});

describe('a suspension', () => {
  it('takes effect at once, its reason may follow, and only the approver puts the soft sensor back', async () => {
    const { plant, id } = await plantWith(20, {}, 0);
    const technician = await server.signedIn({ roles: [{ siteId: plant.siteId, role: 'technician' }] });
    server.now.value = new Date(server.now.value!.getTime() + hour);
    const suspended = await post(technician, `/soft-sensors/${id}/suspension`, { reason: '' });
    expect(suspended).toMatchObject({ life: 'suspended', lifeReason: '' });
    server.now.value = new Date(server.now.value.getTime() + hour);
    const why = { reason: 'Purge of the probe blocked' };
    const said = await technician.put(`/api/v1/soft-sensors/${id}/suspension`).send(why);
    expect(said.body).toMatchObject({ lifeReason: why.reason, lifeSince: suspended.lifeSince });
    const other = await technician.put(`/api/v1/soft-sensors/${id}/suspension`).send({ reason: 'Another' });
    expect(other.body.detail).toMatch(/stays as it was given/);
    expect((await plant.engineer.delete(`/api/v1/soft-sensors/${id}/suspension`)).status).toBe(403);
    expect((await plant.manager.delete(`/api/v1/soft-sensors/${id}/suspension`)).body.life).toBe(
      'in-service',
    );
  });
});

async function nameOwner(plant: Plant, softSensorId: number, who: Partial<typeof ownerships.$inferInsert>) {
  await server.context.db.insert(ownerships).values({
    siteId: plant.siteId,
    softSensorId,
    ...who,
    effectiveFrom: new Date(server.now.value!.getTime() + 1000),
    recordedBy: plant.manager.personId,
  });
}

async function revise(plant: Plant, sampleNumber: string, value: number): Promise<void> {
  const { db } = server.context;
  const which = and(eq(samples.siteId, plant.siteId), eq(samples.sampleNumber, sampleNumber));
  const [old] = await db.select().from(samples).where(which);
  await db.update(samples).set({ supersededAt: server.now.value }).where(which);
  const { id: _id, ...kept } = old!;
  await db.insert(samples).values({ ...kept, version: 2, value, supersededAt: null });
  await db.transaction((tx) => samplesChanged(tx, { siteId: plant.siteId, samplePointIds: [plant.pointId] }));
  await server.drainJobs();
}

/** The same plant, its estimate computed elsewhere and arriving as readings. */
async function externalPlant() {
  const plant = await makePlant(server);
  const hours = sampled(30);
  const end = hours.at(-1)! + 4;
  server.now.value = at(end);
  await writeSamples(plant, hours);
  const sensor = await putInService(
    plant,
    { form: 'external', holdLimitMs: hour, residualSd: 0.1 },
    { promisedReferenceMs: 400 * hour },
  );
  await ensurePartitions(server.context.db, at(0).getTime(), at(end).getTime());
  const [row] = await server.context.db.select().from(softSensors).where(eq(softSensors.id, sensor.id));
  await server.context.db.insert(readings).values(
    Array.from({ length: end }, (_, k) => ({
      siteId: plant.siteId,
      tagId: row!.estimateTagId,
      at: at(k),
      value: truth(k) + bias,
    })),
  );
  await server.refreshSpan(plant.siteId, row!.estimateTagId);
  await server.drainJobs();
  return { plant, id: sensor.id, end, estimateTagId: row!.estimateTagId };
}
