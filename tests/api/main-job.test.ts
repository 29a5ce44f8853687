import { describe, expect, it } from 'vitest';
import { syncDuties } from '../../server/features/duties/service.ts';
import { fitLeastSquares } from '../../shared/numerics/regression.ts';
import {
  at,
  get,
  hour,
  inputA,
  inputB,
  labError,
  makePlant,
  modelOf,
  post,
  truth,
  writeInputs,
  writeSamples,
} from '../support/plant.ts';
import { useServer } from '../support/server.ts';
import { sheetFields } from '../support/sheet-fields.ts';

const server = useServer();
const hours = 24 * 60;
const taken = Array.from({ length: hours / 6 }, (_, i) => i * 6);
const split = 24 * 30;

describe('the main job, once through', () => {
  it('registers, fits, approves by a second person, estimates, pairs and judges', async () => {
    const plant = await makePlant(server);
    const { engineer, manager, siteId } = plant;
    await writeInputs(plant, 0, hours);
    await writeSamples(plant, taken);
    server.now.value = at(hours + 1);

    const fields = sheetFields({ unitId: plant.unitId, samplePointId: plant.pointId });
    const sheet = await post(engineer, `/sites/${siteId}/soft-sensors`, fields);
    expect(sheet.life).toBe('draft');
    const model = { ...modelOf(plant, 0, [0, 0]), residualSd: null };
    const draft = (
      await engineer.put(`/api/v1/soft-sensors/${sheet.id}/draft`).send({ model, version: null }).expect(200)
    ).body;
    const period = { from: at(0).toISOString(), to: at(split).toISOString() };
    const run = await post(engineer, `/soft-sensors/${sheet.id}/draft/fit`, {
      ...period,
      version: draft.version,
    });
    await server.drainJobs();
    expect(await get(engineer, `/runs/${run.id}`)).toMatchObject({ state: 'done', problem: null });

    const fitted = await get(engineer, `/soft-sensors/${sheet.id}`);
    const training = taken.filter((k) => k < split);
    const direct = fitLeastSquares({
      columns: [training.map(inputA), training.map(inputB)],
      names: ['A', 'B'],
      y: training.map((k, i) => truth(k) + labError(i)),
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
    const own = await engineer
      .post(`/api/v1/revisions/${revision.id}/decision`)
      .send({ decision: 'approved', reason: '' });
    expect(own.status).toBe(403);
    expect(own.body.detail).toContain('somebody else decides');
    server.now.value = new Date(server.now.value.getTime() + 60_000);
    await post(manager, `/revisions/${revision.id}/decision`, { decision: 'approved', reason: '' });
    await server.drainJobs();

    const judged = await get(engineer, `/soft-sensors/${sheet.id}`);
    expect(judged).toMatchObject({ life: 'in-service', working: false });
    expect(judged.status).toMatchObject({ health: 'fit', counted: taken.length - training.length });
    expect(judged.status.lastErrors).toHaveLength(20);
    const performance = await get(engineer, `/soft-sensors/${sheet.id}/performance`, {
      from: at(split).toISOString(),
      to: at(hours).toISOString(),
    });
    const errors = taken.flatMap((k, i) => {
      if (k < split) return [];
      const estimate =
        direct.intercept + direct.coefficients[0]! * inputA(k) + direct.coefficients[1]! * inputB(k);
      return [estimate - (truth(k) + labError(i))];
    });
    const rmse = Math.sqrt(errors.reduce((sum, error) => sum + error * error, 0) / errors.length);
    expect(performance.judgement.bias).toMatchObject({ ok: true, n: errors.length });
    expect(performance.judgement.bias.rmse).toBeCloseTo(rmse, 9);

    const board = await get(manager, '/board', { health: 'all' });
    expect(board.counts).toMatchObject({ total: 1, fit: 1 });
    expect(board.rows[0]).toMatchObject({ softSensorId: sheet.id, health: 'fit' });
    expect((await get(engineer, '/board')).waiting).toEqual([]);
    await syncDuties(server.context);
    expect((await get(manager, '/board')).waiting).toEqual([
      expect.objectContaining({ kind: 'name-owner', softSensorId: sheet.id }),
    ]);
  });

  it('replays a draft over a period without touching the recorded estimate', async () => {
    const plant = await makePlant(server);
    await writeInputs(plant, 0, 200);
    const samplesAt = Array.from({ length: 40 }, (_, i) => i * 5);
    await writeSamples(plant, samplesAt);
    server.now.value = at(201);
    const fields = sheetFields({ unitId: plant.unitId, samplePointId: plant.pointId });
    const sheet = await post(plant.engineer, `/sites/${plant.siteId}/soft-sensors`, fields);
    await plant.engineer
      .put(`/api/v1/soft-sensors/${sheet.id}/draft`)
      .send({ model: modelOf(plant, 6), version: null })
      .expect(200);
    const replay = await post(plant.engineer, `/soft-sensors/${sheet.id}/replays`, {
      from: at(0).toISOString(),
      to: at(199).toISOString(),
      judgedFrom: at(100).toISOString(),
      updateFactor: 0.3,
      model: 'draft',
    });
    await server.drainJobs();
    const { figures } = await get(plant.engineer, `/replays/${replay.id}`);
    const judged = samplesAt.filter((k) => k >= 100);
    expect(figures).toMatchObject({ steps: 200, estimated: 200, withoutEstimate: [] });
    expect(figures.errors).toHaveLength(judged.length);
    // The model reads 1 too high by construction.
    expect(figures.judgement.bias.bias).toBeCloseTo(1, 1);
    expect(figures.judgement.exponential).toMatchObject({ factor: 0.3, n: judged.length });
    let correction = 0;
    const corrected = figures.errors.map(({ error }: { error: number }) => {
      const scored = error + correction;
      correction -= 0.3 * scored;
      return scored;
    });
    const rmse = Math.sqrt(
      corrected.reduce((sum: number, error: number) => sum + error * error, 0) / corrected.length,
    );
    expect(figures.judgement.exponential.rmse).toBeCloseTo(rmse, 9);
    const series = await get(plant.engineer, `/soft-sensors/${sheet.id}/series`, {
      from: at(0).toISOString(),
      to: at(199).toISOString(),
    });
    expect(series.at).toEqual([]);
    expect(hour).toBe(figures.chart.at[1] - figures.chart.at[0]);
  });
});
