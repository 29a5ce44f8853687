import { eq } from 'drizzle-orm';
import type pg from 'pg';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { PairedError, ReplayFigures } from '../../../shared/contracts/judging.ts';
import { type Grid, type GridColumn, gridWithin } from '../../../shared/numerics/grid.ts';
import type { EstimateSeries } from '../../../shared/numerics/pairing.ts';
import { pairSample } from '../../../shared/rules/pair-sample.ts';
import { toPair } from '../judging/pairing.ts';
import { allowedErrorAt } from '../../../shared/rules/allowed-error.ts';
import { judge } from '../../../shared/rules/judgement.ts';
import { withClient } from '../../db/client.ts';
import { replays } from '../../db/schema/index.ts';
import { samplesBetween } from '../judging/repo.ts';
import { type Progress, carryOut } from '../runs/work.ts';
import { chartOf } from './chart-points.ts';
import type { ComputeContext } from './context.ts';
import { estimatorOf, readInputs } from './inputs.ts';
import { packSeries } from './pack.ts';
import { type SensorRow, findSensor, tagNames } from './repo.ts';
import { readSeries } from './series.ts';

const chunkSteps = 50_000;
/** Beyond this a replay would take minutes and gigabytes: two years of seconds, 120 years of minutes. */
const mostSteps = 63_000_000;
const bad = 2;

type ReplayRow = typeof replays.$inferSelect;

/** Runs a model over a period, pairs its samples, judges them, and keeps figures, points and the packed estimate. */
export async function runReplay(
  context: ComputeContext,
  { siteId, replayId, runId }: { siteId: number; replayId: number; runId: number },
): Promise<void> {
  await carryOut(context, runId, (progress) =>
    withClient(context.pool, async (db, client) => {
      const [replay] = await db.select().from(replays).where(eq(replays.id, replayId));
      const sensor = await findSensor(db, siteId, replay!.softSensorId);
      const { series, missing, steps } = await estimateOver(client, sensor!, replay!, progress);
      const errors = await pairReplay(db, sensor!, replay!, series);
      const names = await tagNames(db, siteId, [...missing.keys()]);
      const figures: ReplayFigures = {
        judgement: judge(errors, {
          updateFactor: replay!.updateFactor,
          residualSd: replay!.model.residualSd,
        }),
        errors,
        steps,
        estimated: series.at.length,
        withoutEstimate: [...missing].map(([tagId, count]) => ({
          tagName: names.get(tagId)?.name ?? '',
          steps: count,
        })),
        chart: chartOf(series, replay!.model.residualSd),
      };
      await db
        .update(replays)
        .set({ figures, packed: packSeries(series) })
        .where(eq(replays.id, replayId));
      return { replayId };
    }),
  );
}

interface Estimated {
  series: EstimateSeries;
  /** Steps without an estimate, by the tag that was missing. */
  missing: Map<number, number>;
  steps: number;
}

async function estimateOver(
  client: pg.PoolClient,
  sensor: SensorRow,
  replay: ReplayRow,
  progress: Progress,
): Promise<Estimated> {
  const { model } = replay;
  if (model.form === 'external') {
    const key = { siteId: sensor.siteId, tagId: sensor.estimateTagId };
    const series = await readSeries(client, key, replay.fromAt, replay.toAt);
    return { series, missing: new Map(), steps: series.at.length };
  }
  const whole = gridWithin(replay.fromAt.getTime(), replay.toAt.getTime(), model.stepMs);
  if (whole.n > mostSteps) {
    throw new AppError(
      'invalid-input',
      `This period has ${whole.n.toLocaleString('en')} steps; replay a shorter one.`,
    );
  }
  const estimator = estimatorOf(model);
  let state = estimator.start();
  const collected = new Collected(whole.n);
  const missing = new Map<number, number>();
  for (let done = 0; done < whole.n; done += chunkSteps) {
    await progress.report(done, whole.n);
    const grid: Grid = {
      startMs: whole.startMs + done * whole.stepMs,
      stepMs: whole.stepMs,
      n: Math.min(chunkSteps, whole.n - done),
    };
    const inputs = await readInputs(client, sensor.siteId, model, grid);
    const result = estimator.run(grid, inputs, state);
    state = result.state;
    collected.take(grid, result.estimate);
    countMissing(
      missing,
      model.terms.map((term) => term.tagId),
      inputs,
    );
  }
  await progress.report(whole.n, whole.n);
  return { series: collected.series(), missing, steps: whole.n };
}

function countMissing(
  missing: Map<number, number>,
  tagIds: readonly number[],
  inputs: readonly GridColumn[],
): void {
  for (const [j, column] of inputs.entries()) {
    let count = 0;
    for (const quality of column.quality) if (quality === bad) count++;
    if (count > 0) missing.set(tagIds[j]!, (missing.get(tagIds[j]!) ?? 0) + count);
  }
}

/** Gathers the instants that have an estimate. */
class Collected {
  #n = 0;
  readonly #at: Float64Array;
  readonly #value: Float64Array;
  readonly #quality: Uint8Array;

  constructor(most: number) {
    this.#at = new Float64Array(most);
    this.#value = new Float64Array(most);
    this.#quality = new Uint8Array(most);
  }

  take(grid: Grid, estimate: { value: Float64Array; quality: Uint8Array }): void {
    for (let i = 0; i < grid.n; i++) {
      if (estimate.quality[i] === bad || !Number.isFinite(estimate.value[i])) continue;
      this.#at[this.#n] = grid.startMs + i * grid.stepMs;
      this.#value[this.#n] = estimate.value[i]!;
      this.#quality[this.#n++] = estimate.quality[i]!;
    }
  }

  series(): EstimateSeries {
    return {
      at: this.#at.subarray(0, this.#n),
      value: this.#value.subarray(0, this.#n),
      quality: this.#quality.subarray(0, this.#n),
    };
  }
}

async function pairReplay(
  db: Parameters<typeof samplesBetween>[0],
  sensor: SensorRow,
  replay: ReplayRow,
  series: EstimateSeries,
): Promise<PairedError[]> {
  const samples = await samplesBetween(db, sensor, replay.judgedFrom, replay.toAt);
  return samples.map((sample) => {
    const { estimate, error, notCounted } = pairSample(series, toPair(sample), {
      ...sensor,
      holdLimitMs: replay.model.holdLimitMs,
    });
    return {
      sampleId: sample.id,
      sampleNumber: sample.sampleNumber,
      takenAt: sample.takenAt!.toISOString(),
      reportedAt: sample.reportedAt.toISOString(),
      reference: sample.value,
      estimate,
      estimateSd: estimate === null ? null : replay.model.residualSd,
      error,
      corrected: error,
      allowed: allowedErrorAt(
        { absolute: sensor.allowedErrorAbsolute, percent: sensor.allowedErrorPercent },
        sample.value,
      ),
      notCounted,
      origin: 'replayed' as const,
    };
  });
}
