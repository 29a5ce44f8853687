import { describe, expect, it } from 'vitest';
import { fitLeastSquares } from '../../shared/numerics/regression.ts';
import { readings, samplePoints, samples, sites } from '../../server/db/schema/index.ts';
import { ensurePartitions } from '../../server/db/partitions.ts';
import { type Agent, useServer } from '../support/server.ts';
import { sheetFields } from '../support/sheet-fields.ts';

const server = useServer();
const hour = 3_600_000;
const start = Date.UTC(2026, 0, 1);

/** A plant whose truth is known: quality = 5 + 2 a − 3 b, sampled every 6 hours with a small laboratory error. */
async function plant() {
  const { db } = server.context;
  const [site] = await db.insert(sites).values({ name: `Site ${Math.random()}`, zone: 'Europe/Copenhagen' }).returning();
  const siteId = site!.id;
  const engineer = await server.signedIn({ roles: [{ siteId, role: 'engineer' }] });
  const manager = await server.signedIn({ roles: [{ siteId, role: 'manager' }] });
  const post = async (agent: Agent, path: string, body: object) => (await agent.post(`/api/v1${path}`).send(body).expect(200)).body;
  const area = await post(engineer, `/sites/${siteId}/areas`, { name: 'Hot end' });
  const unit = await post(engineer, `/sites/${siteId}/units`, { name: 'Kiln', areaId: area.id });
  const tags = await post(engineer, `/sites/${siteId}/tags`, {
    tags: ['A', 'B'].map((name) => ({ name, unit: 't/h', unitId: unit.id, rangeLow: null, rangeHigh: null, description: '' })),
  });
  const [point] = await db.insert(samplePoints).values({ siteId, name: 'P1', unitId: unit.id }).returning();
  return { siteId, engineer, manager, unit, point: point!, post, tagIds: tags.rows.map((row: { id: number }) => row.id) as number[] };
}

const inputA = (k: number) => 10 + Math.sin(k / 7) + 0.5 * Math.cos(k / 3);
const inputB = (k: number) => 4 + Math.cos(k / 11);
const labError = (i: number) => 0.1 * Math.sin(i * 12.9898);

describe('the main job, once through', () => {
  it('registers, fits, approves by a second person, estimates, pairs and judges', async () => {
    const { siteId, engineer, manager, unit, point, post, tagIds } = await plant();
    const { db } = server.context;
    const n = 24 * 60;
    await ensurePartitions(db, start, start + n * hour);
    const rows = Array.from({ length: n }, (_, k) => k).flatMap((k) => [
      { siteId, tagId: tagIds[0]!, at: new Date(start + k * hour), value: inputA(k) },
      { siteId, tagId: tagIds[1]!, at: new Date(start + k * hour), value: inputB(k) },
    ]);
    await db.insert(readings).values(rows);
    for (const tagId of tagIds) await server.refreshSpan(siteId, tagId);
    const taken = Array.from({ length: n / 6 }, (_, i) => i * 6);
    await db.insert(samples).values(
      taken.map((k, i) => ({
        siteId,
        samplePointId: point.id,
        sampleNumber: `S${i}`,
        takenAt: new Date(start + k * hour),
        reportedAt: new Date(start + k * hour + hour),
        value: 5 + 2 * inputA(k) - 3 * inputB(k) + labError(i),
        unit: '%',
        asWritten: '',
        enteredBy: engineer.personId,
        enteredAt: new Date(start),
      })),
    );

    server.now.value = new Date(start + (n - 1) * hour + 2 * hour);
    const sheet = await post(engineer, `/sites/${siteId}/soft-sensors`, sheetFields({ unitId: unit.id, samplePointId: point.id }));
    expect(sheet.life).toBe('draft');
    const model = {
      form: 'regression',
      stepMs: hour,
      holdLimitMs: hour,
      intercept: 0,
      terms: tagIds.map((tagId) => ({ tagId, coefficient: 0 })),
      residualSd: null,
    };
    const draft = (await engineer.put(`/api/v1/soft-sensors/${sheet.id}/draft`).send({ model, version: null }).expect(200)).body;
    const split = new Date(start + 30 * 24 * hour).toISOString();
    const run = await post(engineer, `/soft-sensors/${sheet.id}/draft/fit`, {
      from: new Date(start).toISOString(),
      to: split,
      version: draft.version,
    });
    await server.drainJobs();
    const ended = (await engineer.get(`/api/v1/runs/${run.id}`).expect(200)).body;
    expect(ended).toMatchObject({ state: 'done', problem: null });
    const fitted = (await engineer.get(`/api/v1/soft-sensors/${sheet.id}`).expect(200)).body;
    const training = taken.filter((k) => k < 30 * 24);
    const direct = fitLeastSquares({
      columns: [training.map(inputA), training.map(inputB)],
      names: ['A', 'B'],
      y: training.map((k, i) => 5 + 2 * inputA(k) - 3 * inputB(k) + labError(i)),
      intercept: true,
    });
    if (!direct.ok) throw new Error(direct.reason);
    expect(fitted.draft.model.terms[0].coefficient).toBeCloseTo(direct.coefficients[0]!, 9);
    expect(fitted.draft.fit.samples).toBe(training.length);

    const revision = await post(engineer, `/soft-sensors/${sheet.id}/revisions`, {
      version: fitted.draft.version,
      reason: 'First model',
      changeReference: '',
    });
    await engineer.post(`/api/v1/revisions/${revision.id}/decision`).send({ decision: 'approved', reason: '' }).expect(403);
    server.now.value = new Date(server.now.value.getTime() + 60_000);
    await post(manager, `/revisions/${revision.id}/decision`, { decision: 'approved', reason: '' });
    await server.drainJobs();

    const judged = (await engineer.get(`/api/v1/soft-sensors/${sheet.id}`).expect(200)).body;
    expect(judged).toMatchObject({ life: 'in-service', working: false });
    expect(judged.status).toMatchObject({ health: 'fit', counted: 120 });
    expect(judged.status.lastErrors).toHaveLength(20);
    const performance = (
      await engineer
        .get(`/api/v1/soft-sensors/${sheet.id}/performance`)
        .query({ from: split, to: new Date(start + n * hour).toISOString() })
        .expect(200)
    ).body;
    const later = taken.map((k, i) => ({ k, i })).filter(({ k }) => k >= 30 * 24);
    const errors = later.map(({ k, i }) => {
      const estimate = direct.intercept + direct.coefficients[0]! * inputA(k) + direct.coefficients[1]! * inputB(k);
      return estimate - (5 + 2 * inputA(k) - 3 * inputB(k) + labError(i));
    });
    const rmse = Math.sqrt(errors.reduce((sum, error) => sum + error * error, 0) / errors.length);
    expect(performance.judgement.bias.n).toBe(errors.length);
    expect(performance.judgement.bias.rmse).toBeCloseTo(rmse, 9);

    const board = (await manager.get('/api/v1/board?health=all').expect(200)).body;
    expect(board.counts).toMatchObject({ total: 1, fit: 1 });
    expect(board.rows[0]).toMatchObject({ softSensorId: sheet.id, health: 'fit' });
  });
});
