import { sql } from 'drizzle-orm';
import type pg from 'pg';
import type { Performance } from '../../../shared/contracts/judging.ts';
import { biasFigures, biasWindow, healthOf } from '../../../shared/rules/health.ts';
import { judge } from '../../../shared/rules/judgement.ts';
import { severityOf } from '../../../shared/rules/severity.ts';
import { type Db, type Tx, withClient } from '../../db/client.ts';
import { recountSite } from '../board/summary.ts';
import type { ComputeContext } from '../estimates/context.ts';
import { type SensorRow, approvedRevisions, findSensor, methodOf, spansOf } from '../estimates/repo.ts';
import { currentOwnership } from '../register/repo.ts';
import { getSite } from '../sites/repo.ts';
import {
  allowedNow,
  baselineOf,
  countedErrors,
  healthInput,
  localDay,
  numberOrNull,
  rankOf,
  rmseOf,
  stripOf,
  toPairedError,
} from './figures.ts';
import { pairSamples } from './pairing.ts';
import { findStatus, lastPairs, lifeNow, saveHealthDay, saveStatus, standingPairs } from './repo.ts';

/** Pairs read to judge health: enough for the window and for reasons to enter and leave. */
const pairsForHealth = 150;

/** Judges one soft sensor now: pairs what needs it, then figures and health. A job. */
export async function judgeNow(
  context: ComputeContext,
  { siteId, softSensorId }: { siteId: number; softSensorId: number },
): Promise<void> {
  const sensor = await findSensor(context.db, siteId, softSensorId);
  if (!sensor) return;
  await withClient(context.pool, async (db, client) => {
    await db.transaction(async (tx) => {
      await tx.execute(sql`select pg_advisory_xact_lock(hashtext('cupel-estimate'), ${softSensorId}::int)`);
      await judgeSensor(context, tx, client, sensor, null);
    });
  });
}

/** Pairs, figures and health in the caller's transaction; `dirtyFrom`: estimates from there on were computed anew. */
export async function judgeSensor(
  context: ComputeContext,
  tx: Tx,
  client: pg.PoolClient,
  sensor: SensorRow,
  dirtyFrom: Date | null,
): Promise<void> {
  const now = context.clock();
  await pairSamples(tx, client, sensor, dirtyFrom, now);
  const revisions = await approvedRevisions(tx, sensor.siteId, sensor.id);
  const pairs = await lastPairs(tx, sensor, baselineOf(revisions), pairsForHealth);
  const span = (await spansOf(tx, sensor.siteId, [sensor.estimateTagId])).get(sensor.estimateTagId);
  const inForce = revisions.at(-1) ?? null;
  const errors = countedErrors(sensor, pairs);
  const { health, reasons } = healthOf(
    healthInput(sensor, pairs, errors, revisions, span?.lastAt ?? null, now),
  );
  const key = { siteId: sensor.siteId, softSensorId: sensor.id };
  const before = await findStatus(tx, sensor.siteId, sensor.id);
  const inService = (await lifeNow(tx, sensor.siteId, sensor.id))?.state === 'in-service';
  const ownerId = (await currentOwnership(tx, sensor.siteId, sensor.id))?.ownerId ?? null;
  const bias = biasFigures(errors);
  const lastPair = pairs.findLast((pair) => pair.notCounted === null) ?? null;
  await saveStatus(tx, {
    ...key,
    health,
    severity: severityOf(health),
    reasons,
    bias: numberOrNull(bias.bias),
    biasLow: numberOrNull(bias.low),
    biasHigh: numberOrNull(bias.high),
    rmse: rmseOf(errors.slice(-biasWindow)),
    counted: errors.length,
    allowedError: allowedNow(sensor, errors, span?.lastValue ?? null),
    lastErrors: stripOf(errors),
    lastReferenceAt: lastPair?.takenAt ?? null,
    lastReferenceValue: lastPair?.reference ?? null,
    currentAt: span?.lastAt ?? null,
    currentValue: span?.lastValue ?? null,
    currentSd: inForce?.model.residualSd ?? null,
    healthSince: before && before.health === health ? before.healthSince : now,
    inService,
    ownerId,
    rank: rankOf(sensor, health, errors),
    judgedAt: now,
  });
  const { zone } = await getSite(tx, sensor.siteId);
  const newDay = await saveHealthDay(tx, { ...key, day: localDay(now, zone), health });
  if (newDay || before?.health !== health || before.inService !== inService)
    await recountSite(tx, sensor.siteId, now);
}

/** How wrong the recorded estimate was over a period, from its frozen pairs. */
export async function performanceOf(
  db: Db,
  sensor: SensorRow,
  period: { from: Date; to: Date },
  updateFactor: number,
): Promise<Performance> {
  const rows = await standingPairs(db, sensor, period);
  const revisions = await approvedRevisions(db, sensor.siteId, sensor.id);
  const method = await methodOf(db, sensor);
  const errors = rows.map(({ pair, sampleNumber }) => toPairedError(sensor, pair, sampleNumber));
  return {
    from: period.from.toISOString(),
    to: period.to.toISOString(),
    judgement: judge(errors, { updateFactor, residualSd: revisions.at(-1)?.model.residualSd ?? null }),
    errors,
    reproducibility: method?.reproducibility ?? null,
  };
}
