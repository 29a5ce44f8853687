import { sql } from 'drizzle-orm';
import type pg from 'pg';
import type { Performance } from '../../../shared/contracts/judging.ts';
import { biasFigures, biasWindow, healthOf } from '../../../shared/rules/health.ts';
import { corrected, correctionAt } from '../../../shared/rules/correction-steps.ts';
import { judge } from '../../../shared/rules/judgement.ts';
import { severityOf } from '../../../shared/rules/severity.ts';
import { type Db, type Tx, withClient } from '../../db/client.ts';
import { recountSite } from '../board/summary.ts';
import { baselineAt } from '../calibrations/evidence.ts';
import { correctionSteps, lastRecalibratedAt } from '../calibrations/repo.ts';
import type { ComputeContext } from '../estimates/context.ts';
import { type SensorRow, approvedRevisions, findSensor, methodOf, spansOf } from '../estimates/repo.ts';
import { stoppagesOf, stoppedSince } from '../events/standing.ts';
import { currentOwnership } from '../register/repo.ts';
import { getSite } from '../sites/repo.ts';
import {
  type JudgingFacts,
  allowedNow,
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
import {
  type PairRow,
  countReferences,
  findStatus,
  lastPairs,
  lifeNow,
  saveHealthDay,
  saveStatus,
  standingPairs,
} from './repo.ts';

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
  const facts = await judgingFacts(tx, sensor, context.clock());
  const { now, baseline, stoppages } = facts;
  await pairSamples(tx, client, sensor, dirtyFrom, now, stoppages);
  const before = await findStatus(tx, sensor.siteId, sensor.id);
  const stopped = stoppedSince(stoppages, now);
  const inService = (await lifeNow(tx, sensor.siteId, sensor.id, now))?.state === 'in-service';
  const ownerId = (await currentOwnership(tx, sensor.siteId, sensor.id))?.ownerId ?? null;
  const around = { stoppedSince: stopped, inService, ownerId, judgedAt: now };
  const since = baseline.at === null ? null : new Date(baseline.at);
  const pairs = await lastPairs(tx, sensor, since, now, pairsForHealth);
  const judged = await figuresNow(tx, sensor, facts, pairs);
  const { health } = judged;
  // A stopped unit is not judged: what was said of it last stands until it runs again.
  if (stopped && before) await saveStatus(tx, { ...before, ...around });
  else {
    const changed = before?.health !== health;
    await saveStatus(tx, {
      ...judged,
      ...around,
      healthSince: before && !changed ? before.healthSince : now,
      healthBefore: before && changed ? before.health : (before?.healthBefore ?? null),
    });
  }
  const { zone } = await getSite(tx, sensor.siteId);
  const key = { siteId: sensor.siteId, softSensorId: sensor.id };
  const newDay = stopped ? false : await saveHealthDay(tx, { ...key, day: localDay(now, zone), health });
  const moved = before?.inService !== inService || (before?.stoppedSince === null) !== (stopped === null);
  if (newDay || moved || before?.health !== health) await recountSite(tx, sensor.siteId, now);
}

async function judgingFacts(tx: Tx, sensor: SensorRow, now: Date): Promise<JudgingFacts> {
  const approved = await approvedRevisions(tx, sensor.siteId, sensor.id);
  const inForce = approved.filter((revision) => revision.effectiveFrom! <= now);
  return {
    now,
    revision: inForce.at(-1) ?? null,
    baseline: await baselineAt(tx, sensor, inForce, now),
    steps: await correctionSteps(tx, sensor.siteId, sensor.id),
    stoppages: await stoppagesOf(tx, sensor),
  };
}

/** Figures and health from the pairs since the baseline. */
async function figuresNow(tx: Tx, sensor: SensorRow, facts: JudgingFacts, pairs: readonly PairRow[]) {
  const { now, revision, steps } = facts;
  const span = (await spansOf(tx, sensor.siteId, [sensor.estimateTagId])).get(sensor.estimateTagId);
  const errors = countedErrors(sensor, pairs, steps);
  const { health, reasons } = healthOf(healthInput(sensor, pairs, errors, facts, span?.lastAt ?? null));
  const bias = biasFigures(errors);
  const [lastPair] = (await lastPairs(tx, sensor, null, now, 20))
    .filter((pair) => pair.notCounted === null)
    .slice(-1);
  const recalibratedAt = await lastRecalibratedAt(tx, sensor.siteId, sensor.id, now);
  const value = span?.lastValue ?? null;
  const shown = value === null ? null : corrected(correctionAt(steps, span!.lastAt.getTime()), value);
  return {
    siteId: sensor.siteId,
    softSensorId: sensor.id,
    health,
    severity: severityOf(health),
    reasons,
    bias: numberOrNull(bias.bias),
    biasLow: numberOrNull(bias.low),
    biasHigh: numberOrNull(bias.high),
    rmse: rmseOf(errors.slice(-biasWindow)),
    counted: errors.length,
    allowedError: allowedNow(sensor, errors, shown),
    lastErrors: stripOf(errors),
    lastReferenceAt: lastPair?.takenAt ?? null,
    lastReferenceValue: lastPair?.reference ?? null,
    currentAt: span?.lastAt ?? null,
    currentValue: shown,
    currentSd: revision?.model.residualSd ?? null,
    rank: rankOf(sensor, health, errors),
    recalibratedAt,
    referencesSince: await countReferences(tx, sensor, recalibratedAt, now),
  };
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
  const steps = await correctionSteps(db, sensor.siteId, sensor.id);
  const errors = rows.map(({ pair, sampleNumber }) => toPairedError(sensor, pair, sampleNumber, steps));
  return {
    from: period.from.toISOString(),
    to: period.to.toISOString(),
    judgement: judge(errors, { updateFactor, residualSd: revisions.at(-1)?.model.residualSd ?? null }),
    errors,
    reproducibility: method?.reproducibility ?? null,
  };
}
