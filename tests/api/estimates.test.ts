import { and, asc, eq, isNull } from 'drizzle-orm';
import { describe, expect, it } from 'vitest';
import { pairs, readings, samples } from '../../server/db/schema/index.ts';
import { readingsChanged } from '../../server/features/history/changed.ts';
import { samplesChanged } from '../../server/features/judging/changed.ts';
import {
  approveModel,
  at,
  get,
  inputA,
  makePlant,
  modelOf,
  type Plant,
  post,
  putInService,
  truth,
  writeInputs,
  writeSamples,
} from '../support/plant.ts';
import { useServer } from '../support/server.ts';

const server = useServer();

const estimatesOf = (plant: Plant, tagId: number) =>
  server.context.db
    .select({ at: readings.at, value: readings.value })
    .from(readings)
    .where(and(eq(readings.siteId, plant.siteId), eq(readings.tagId, tagId)))
    .orderBy(asc(readings.at));

const pairsOf = (plant: Plant, softSensorId: number, standing = true) =>
  server.context.db
    .select()
    .from(pairs)
    .where(
      and(
        eq(pairs.siteId, plant.siteId),
        eq(pairs.softSensorId, softSensorId),
        standing ? isNull(pairs.supersededAt) : undefined,
      ),
    )
    .orderBy(asc(pairs.takenAt), asc(pairs.id));

async function changed(plant: Plant, from: number, to: number): Promise<void> {
  await server.context.db.transaction((tx) =>
    readingsChanged(tx, { siteId: plant.siteId, tagIds: plant.tagIds, from: at(from), to: at(to) }),
  );
  await server.drainJobs();
}

describe('estimates', () => {
  it('are computed step by step as they are at once', async () => {
    const plant = await makePlant(server);
    server.now.value = at(400);
    await writeInputs(plant, 0, 100);
    const grown = await putInService(plant, modelOf(plant));
    await server.drainJobs();
    await writeInputs(plant, 100, 130);
    await changed(plant, 100, 129);
    await writeInputs(plant, 130, 300);
    await changed(plant, 130, 299);
    const whole = await putInService(plant, modelOf(plant));
    await server.drainJobs();
    const stepByStep = await estimatesOf(plant, grown.estimateTagId);
    expect(stepByStep).toHaveLength(300);
    expect(stepByStep).toEqual(await estimatesOf(plant, whole.estimateTagId));
    expect(stepByStep[7]!.value).toBeCloseTo(truth(7), 12);
  });

  it('are computed again from the earliest reading that arrives late, and the pair of before is kept', async () => {
    const plant = await makePlant(server);
    server.now.value = at(100);
    await writeInputs(plant, 0, 50);
    await writeSamples(plant, [10, 20, 30, 40]);
    const sensor = await putInService(plant, modelOf(plant));
    await server.drainJobs();
    expect(await pairsOf(plant, sensor.id)).toHaveLength(4);
    await server.context.db
      .update(readings)
      .set({ value: inputA(30) + 1 })
      .where(and(eq(readings.tagId, plant.tagIds[0]!), eq(readings.at, at(30))));
    server.now.value = at(101);
    await changed(plant, 30, 30);
    const standing = await pairsOf(plant, sensor.id);
    expect(
      standing.map(
        (pair) => pair.estimate! - truth(pair.takenAt.getTime() / 3_600_000 - at(0).getTime() / 3_600_000),
      ),
    ).toEqual([expect.closeTo(0, 9), expect.closeTo(0, 9), expect.closeTo(2, 9), expect.closeTo(0, 9)]);
    const all = await pairsOf(plant, sensor.id, false);
    expect(all).toHaveLength(5);
    expect(all.filter((pair) => pair.supersededAt !== null)).toHaveLength(1);
  });

  it('leave a gap where an input is missing for longer than the hold limit', async () => {
    const plant = await makePlant(server);
    server.now.value = at(60);
    await writeInputs(plant, 0, 20);
    await writeInputs(plant, 30, 50);
    await writeSamples(plant, [5, 25, 40]);
    const sensor = await putInService(plant, modelOf(plant));
    await server.drainJobs();
    const hours = (await estimatesOf(plant, sensor.estimateTagId)).map(
      (row) => (row.at.getTime() - at(0).getTime()) / 3_600_000,
    );
    expect(hours).not.toContain(25);
    expect(hours).toHaveLength(41);
    const reasons = (await pairsOf(plant, sensor.id)).map((pair) => pair.notCounted);
    expect(reasons).toEqual([null, 'no-estimate', null]);
  });

  it('change with a new revision only from its approval on', async () => {
    const plant = await makePlant(server);
    server.now.value = at(50);
    await writeInputs(plant, 0, 100);
    const sensor = await putInService(plant, modelOf(plant));
    await server.drainJobs();
    const sheet = await get(plant.engineer, `/soft-sensors/${sensor.id}`);
    server.now.value = at(70);
    await approveModel(plant, sensor.id, modelOf(plant, 105), sheet.draft.version);
    await server.drainJobs();
    const values = await estimatesOf(plant, sensor.estimateTagId);
    const offsets = values.map((row) =>
      Math.round(row.value - truth((row.at.getTime() - at(0).getTime()) / 3_600_000)),
    );
    expect(offsets.slice(0, 71)).toEqual(Array(71).fill(0));
    expect(offsets.slice(71)).toEqual(Array(29).fill(100));
  });
});

describe('pairs', () => {
  it('fall with a withdrawn sample and are never changed or removed', async () => {
    const plant = await makePlant(server);
    server.now.value = at(60);
    await writeInputs(plant, 0, 50);
    await writeSamples(plant, [10, 20]);
    const sensor = await putInService(plant, modelOf(plant));
    await server.drainJobs();
    const [first] = await pairsOf(plant, sensor.id);
    await server.context.db
      .update(samples)
      .set({ withdrawnAt: at(61) })
      .where(eq(samples.id, first!.sampleId));
    await server.context.db.transaction((tx) =>
      samplesChanged(tx, { siteId: plant.siteId, samplePointIds: [plant.pointId] }),
    );
    await server.drainJobs();
    expect(await pairsOf(plant, sensor.id)).toHaveLength(1);
    const raw = { error: 99 };
    await expect(server.context.db.update(pairs).set(raw).where(eq(pairs.id, first!.id))).rejects.toThrow();
    await expect(server.context.db.delete(pairs).where(eq(pairs.id, first!.id))).rejects.toThrow();
  });

  it('are set at the time taken minus the transport delay', async () => {
    const plant = await makePlant(server);
    server.now.value = at(60);
    await writeInputs(plant, 0, 50);
    await writeSamples(plant, [10], (k) => truth(k - 2));
    const sensor = await putInService(plant, modelOf(plant), { transportDelayMs: 2 * 3_600_000 });
    await server.drainJobs();
    expect((await pairsOf(plant, sensor.id))[0]!.estimate).toBeCloseTo(truth(8), 9);
  });

  it('come from the readings of the tag itself where the estimate is external', async () => {
    const plant = await makePlant(server);
    server.now.value = at(60);
    await writeInputs(plant, 0, 50);
    await writeSamples(plant, [10]);
    const sensor = await putInService(plant, { form: 'external', holdLimitMs: 3_600_000, residualSd: null });
    const { db } = server.context;
    await db.insert(readings).values(
      [9, 10, 11].map((k) => ({
        siteId: plant.siteId,
        tagId: sensor.estimateTagId,
        at: at(k),
        value: 7 + k,
      })),
    );
    await server.refreshSpan(plant.siteId, sensor.estimateTagId);
    await db.transaction((tx) =>
      readingsChanged(tx, { siteId: plant.siteId, tagIds: [sensor.estimateTagId], from: at(9), to: at(11) }),
    );
    await server.drainJobs();
    expect((await pairsOf(plant, sensor.id))[0]!.estimate).toBe(17);
  });
});

describe('what a fit refuses', () => {
  async function fitFails(tags: (plant: Plant) => number[], samplesAt: number[]): Promise<string> {
    const plant = await makePlant(server);
    server.now.value = at(400);
    await writeInputs(plant, 0, 200);
    if (samplesAt.length > 0) await writeSamples(plant, samplesAt);
    const sensor = await putInService(plant, { form: 'external', holdLimitMs: 3_600_000, residualSd: null });
    const sheet = await get(plant.engineer, `/soft-sensors/${sensor.id}`);
    const model = { ...modelOf(plant), terms: tags(plant).map((tagId) => ({ tagId, coefficient: 0 })) };
    const draft = await plant.engineer
      .put(`/api/v1/soft-sensors/${sensor.id}/draft`)
      .send({ model, version: sheet.draft.version })
      .expect(200);
    const run = await post(plant.engineer, `/soft-sensors/${sensor.id}/draft/fit`, {
      from: at(0).toISOString(),
      to: at(200).toISOString(),
      version: draft.body.version,
    });
    await server.drainJobs();
    const ended = await get(plant.engineer, `/runs/${run.id}`);
    expect(ended.state).toBe('failed');
    return ended.problem.detail as string;
  }

  it('a period without samples', async () => {
    expect(await fitFails((plant) => plant.tagIds, [])).toBe(
      'There are no samples with all inputs between 1 Jan 2026 and 9 Jan 2026. Choose a longer period or add samples.',
    );
  });

  it('too few samples for its inputs, with how many are needed', async () => {
    expect(await fitFails((plant) => plant.tagIds, [10, 20])).toMatch(/^Only 2 samples .* are needed/);
  });
});

describe('what a draft refuses', () => {
  it('an input named twice, the estimate itself, and a tag of another site', async () => {
    const plant = await makePlant(server);
    const other = await makePlant(server);
    server.now.value = at(60);
    const sensor = await putInService(plant, modelOf(plant));
    const sheet = await get(plant.engineer, `/soft-sensors/${sensor.id}`);
    const terms = [plant.tagIds[0]!, plant.tagIds[0]!, sensor.estimateTagId, other.tagIds[0]!].map(
      (tagId) => ({ tagId, coefficient: 1 }),
    );
    const answer = await plant.engineer
      .put(`/api/v1/soft-sensors/${sensor.id}/draft`)
      .send({ model: { ...modelOf(plant), terms }, version: sheet.draft.version })
      .expect(400);
    expect(answer.body.fields.map((field: { path: string }) => field.path)).toEqual([
      'model.terms.1.tagId',
      'model.terms.2.tagId',
      'model.terms.3.tagId',
    ]);
  });
});
