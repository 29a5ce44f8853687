import { sql } from 'drizzle-orm';
import type pg from 'pg';
import type { ErrorStripPoint, Health, PairedError, Performance } from '../../../shared/contracts/judging.ts';
import type { Model } from '../../../shared/contracts/models.ts';
import { allowedErrorAt } from '../../../shared/rules/allowed-error.ts';
import { wallClock } from '../../../shared/rules/format.ts';
import { type CountedError, type HealthInput, allowedOver, biasFigures, biasWindow, healthOf } from '../../../shared/rules/health.ts';
import { severityOf } from '../../../shared/rules/severity.ts';
import { judge } from '../../../shared/rules/judgement.ts';
import { type Db, type Tx, withClient } from '../../db/client.ts';
import type { ComputeContext } from '../estimates/context.ts';
import {
  type RevisionRow,
  type SensorRow,
  approvedRevisions,
  findSensor,
  methodOf,
  spansOf,
} from '../estimates/repo.ts';
import { recountSite } from '../board/summary.ts';
import { currentOwnership } from '../register/repo.ts';
import { getSite } from '../sites/repo.ts';
import { pairSamples } from './pairing.ts';
import {
  type PairRow,
  findStatus,
  lastPairs,
  lifeNow,
  saveHealthDay,
  saveStatus,
  standingPairs,
} from './repo.ts';

/** Pairs read to judge health: enough for the window and for reasons to enter and leave. */
const pairsForHealth = 150;
const stripLength = 20;

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
    healthInput(sensor, pairs, errors, inForce, span?.lastAt ?? null, now),
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

/**
 * Errors count from the baseline on: the present revision's own, and for the first one only samples after the period
 * that it was fitted on, since a model is not proven by what it was made from.
 */
function baselineOf(revisions: readonly RevisionRow[]): Date | null {
  const inForce = revisions.at(-1);
  if (!inForce) return null;
  if (revisions.length > 1) return inForce.effectiveFrom;
  return inForce.fit ? new Date(inForce.fit.to) : null;
}

function healthInput(
  sensor: SensorRow,
  pairs: readonly PairRow[],
  errors: readonly CountedError[],
  inForce: RevisionRow | null,
  lastEstimateAt: Date | null,
  now: Date,
): HealthInput {
  const window = pairs.slice(-biasWindow);
  return {
    nowMs: now.getTime(),
    errors,
    uncounted: { count: window.filter((pair) => pair.notCounted !== null).length, of: window.length },
    lastReferenceMs: pairs.findLast((pair) => pair.notCounted === null)?.takenAt.getTime() ?? null,
    lastEstimateMs: lastEstimateAt?.getTime() ?? null,
    promisedReferenceMs: sensor.promisedReferenceMs,
    historyArrives: sensor.historyArrives,
    historyEveryMs: sensor.historyEveryMs,
    residualSd: inForce?.model.residualSd ?? null,
    allowedSpread: sensor.allowedSpread,
  };
}

const allowedAt = (sensor: SensorRow, value: number): number =>
  allowedErrorAt({ absolute: sensor.allowedErrorAbsolute, percent: sensor.allowedErrorPercent }, value);

function countedErrors(sensor: SensorRow, pairs: readonly PairRow[]): CountedError[] {
  return pairs
    .filter((pair) => pair.notCounted === null)
    .map((pair) => ({
      takenMs: pair.takenAt.getTime(),
      reportedMs: pair.reportedAt.getTime(),
      reference: pair.reference,
      error: pair.error!,
      allowed: allowedAt(sensor, pair.reference),
    }));
}

function allowedNow(
  sensor: SensorRow,
  errors: readonly CountedError[],
  current: number | null,
): number | null {
  if (errors.length > 0) return allowedOver(errors.slice(-biasWindow));
  return current === null ? sensor.allowedErrorAbsolute : allowedAt(sensor, current);
}

const stripOf = (errors: readonly CountedError[]): ErrorStripPoint[] =>
  errors
    .slice(-stripLength)
    .map(({ takenMs, error, allowed }) => ({ at: new Date(takenMs).toISOString(), error, allowed }));

/** Worst first on the board: health, then class A before B before C, then the bias against the allowed error. */
function rankOf(sensor: SensorRow, health: Health, errors: readonly CountedError[]): number {
  const { bias, allowed } = biasFigures(errors);
  const share =
    typeof bias === 'number' && Number(allowed) > 0 ? Math.min(999, Math.abs(bias) / Number(allowed)) : 0;
  return severityOf(health) * 10_000 + { A: 3000, B: 2000, C: 1000 }[sensor.importanceClass] + share;
}

const numberOrNull = (value: unknown): number | null => (typeof value === 'number' ? value : null);

const rmseOf = (errors: readonly CountedError[]): number | null =>
  errors.length === 0
    ? null
    : Math.sqrt(errors.reduce((sum, { error }) => sum + error * error, 0) / errors.length);

function localDay(at: Date, zone: string): string {
  const { year, month, day } = wallClock(at, zone);
  return `${year}-${String(month).padStart(2, '0')}-${String(day).padStart(2, '0')}`;
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
    judgement: judge(errors, { updateFactor, residualSd: residualSdOf(revisions.at(-1)?.model) }),
    errors,
    reproducibility: method?.reproducibility ?? null,
  };
}

export const residualSdOf = (model: Model | undefined): number | null => model?.residualSd ?? null;

/** A pair as it is shown; the correction in force would be added here. */
function toPairedError(sensor: SensorRow, pair: PairRow, sampleNumber: string): PairedError {
  return {
    sampleId: pair.sampleId,
    sampleNumber,
    takenAt: pair.takenAt.toISOString(),
    reportedAt: pair.reportedAt.toISOString(),
    reference: pair.reference,
    estimate: pair.estimate,
    estimateSd: pair.estimateSd,
    error: pair.error,
    corrected: pair.error,
    allowed: allowedAt(sensor, pair.reference),
    notCounted: pair.notCounted,
    origin: pair.origin,
  };
}
