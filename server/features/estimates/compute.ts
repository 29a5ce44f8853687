import { sql } from 'drizzle-orm';
import type pg from 'pg';
import type { RegressionModel } from '../../../shared/contracts/models.ts';
import { type Grid, gridWithin } from '../../../shared/numerics/grid.ts';
import { type Db, type Tx, withClient } from '../../db/client.ts';
import { ensurePartitions } from '../../db/partitions.ts';
import { judgeSensor } from '../judging/service.ts';
import { refreshSpan } from '../tags/spans.ts';
import type { ComputeContext } from './context.ts';
import { estimatorOf, readInputs } from './inputs.ts';
import {
  type RevisionRow,
  type SensorRow,
  approvedRevisions,
  findSensor,
  spansOf,
  takeWork,
} from './repo.ts';
import { removeEstimates, writeEstimates } from './write.ts';

/** Grid points computed and written at a time: bounds memory, whatever the length of the history. */
const chunkSteps = 50_000;

/**
 * Brings a soft sensor's estimate up to date from the earliest instant that changed, then its pairs, figures and
 * health: all in one transaction, under a lock, so that a second worker finds nothing left to do.
 */
export async function computeEstimate(
  context: ComputeContext,
  { siteId, softSensorId }: { siteId: number; softSensorId: number },
): Promise<void> {
  const sensor = await findSensor(context.db, siteId, softSensorId);
  if (!sensor) return;
  await makeRoom(context.db, sensor);
  await withClient(context.pool, async (db, client) => {
    await db.transaction(async (tx) => {
      await tx.execute(sql`select pg_advisory_xact_lock(hashtext('cupel-estimate'), ${softSensorId}::int)`);
      const dirtyFrom = await takeWork(tx, siteId, softSensorId);
      if (!dirtyFrom) return;
      await recompute(tx, client, sensor, dirtyFrom);
      await refreshSpan(tx, siteId, sensor.estimateTagId);
      await judgeSensor(context, tx, client, sensor, dirtyFrom);
    });
  });
}

/** Partitions are made outside the transaction that fills them. */
async function makeRoom(db: Db, sensor: SensorRow): Promise<void> {
  const model = (await approvedRevisions(db, sensor.siteId, sensor.id)).at(-1)?.model;
  if (model?.form !== 'regression') return;
  const reach = await reachOf(db, sensor.siteId, model);
  if (reach) await ensurePartitions(db, reach.fromMs, reach.toMs);
}

/** The period over which every input has readings, to within the hold limit; null where one has none. */
async function reachOf(db: Db | Tx, siteId: number, model: RegressionModel) {
  const spans = await spansOf(db, siteId, [...new Set(model.terms.map((term) => term.tagId))]);
  const found = model.terms.map((term) => spans.get(term.tagId));
  if (found.some((span) => span === undefined)) return null;
  return {
    fromMs: Math.max(...found.map((span) => span!.firstAt.getTime())),
    toMs: Math.min(...found.map((span) => span!.lastAt.getTime())) + model.holdLimitMs,
    lastMs: Math.max(...found.map((span) => span!.lastAt.getTime())),
  };
}

async function recompute(tx: Tx, client: pg.PoolClient, sensor: SensorRow, dirtyFrom: Date): Promise<void> {
  const revisions = await approvedRevisions(tx, sensor.siteId, sensor.id);
  for (const part of partsInForce(revisions)) {
    if (part.revision.model.form !== 'regression') continue;
    const { model } = part.revision;
    const reach = await reachOf(tx, sensor.siteId, model);
    const fromMs = Math.max(dirtyFrom.getTime(), part.fromMs, reach?.fromMs ?? -Infinity);
    const removeFrom = Math.max(dirtyFrom.getTime(), part.fromMs);
    if (removeFrom < part.toMs) await removeEstimates(tx, sensor, removeFrom, part.toMs);
    if (!reach) continue;
    // An estimate may stand one hold limit beyond its inputs, but never beyond the newest of them.
    const toMs = Math.min(part.toMs - 1, reach.toMs, reach.lastMs);
    await computeRange(tx, client, sensor, model, gridWithin(fromMs, toMs, model.stepMs));
  }
}

/**
 * When each revision holds. The first one also stands for all history before it, which no estimate was recorded for;
 * every later one only from its own instant on.
 */
export function partsInForce(revisions: readonly RevisionRow[]) {
  return revisions.map((revision, index) => ({
    revision,
    fromMs: index === 0 ? -Infinity : revision.effectiveFrom!.getTime(),
    toMs: revisions[index + 1]?.effectiveFrom?.getTime() ?? Infinity,
  }));
}

async function computeRange(
  tx: Tx,
  client: pg.PoolClient,
  sensor: SensorRow,
  model: RegressionModel,
  whole: Grid,
): Promise<void> {
  const estimator = estimatorOf(model);
  let state = estimator.start();
  for (let done = 0; done < whole.n; done += chunkSteps) {
    const grid: Grid = {
      startMs: whole.startMs + done * whole.stepMs,
      stepMs: whole.stepMs,
      n: Math.min(chunkSteps, whole.n - done),
    };
    const inputs = await readInputs(client, sensor.siteId, model, grid);
    const result = estimator.run(grid, inputs, state);
    state = result.state;
    await writeEstimates(tx, client, sensor, grid, result.estimate);
  }
}
