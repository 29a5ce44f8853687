import type { Baseline } from '../../../shared/contracts/calibration-evidence.ts';
import type { ErrorStripPoint, Health, PairedError } from '../../../shared/contracts/judging.ts';
import { allowedErrorAt } from '../../../shared/rules/allowed-error.ts';
import { type CorrectionStep, corrected, correctionAt } from '../../../shared/rules/correction-steps.ts';
import { wallClock } from '../../../shared/rules/format.ts';
import {
  type CountedError,
  type HealthInput,
  allowedOver,
  biasFigures,
  biasWindow,
} from '../../../shared/rules/health.ts';
import { severityOf } from '../../../shared/rules/severity.ts';
import type { RevisionRow, SensorRow } from '../estimates/repo.ts';
import type { Stoppage } from '../events/standing.ts';
import type { PairRow } from './repo.ts';

const stripLength = 20;

/** What judging needs besides the pairs, as it stood at one instant. */
export interface JudgingFacts {
  now: Date;
  revision: RevisionRow | null;
  baseline: Baseline;
  steps: readonly CorrectionStep[];
  stoppages: readonly Stoppage[];
}

export function healthInput(
  sensor: SensorRow,
  pairs: readonly PairRow[],
  errors: readonly CountedError[],
  { now, revision, baseline, stoppages }: JudgingFacts,
  lastEstimateAt: Date | null,
): HealthInput {
  // Samples taken while the unit stood say nothing against the laboratory.
  const window = pairs.filter((pair) => pair.notCounted !== 'unit-stopped').slice(-biasWindow);
  const started = stoppages.flatMap(({ to }) => (to && to <= now ? [to.getTime()] : []));
  return {
    nowMs: now.getTime(),
    errors,
    uncounted: { count: window.filter((pair) => pair.notCounted !== null).length, of: window.length },
    lastReferenceMs: pairs.findLast((pair) => pair.notCounted === null)?.takenAt.getTime() ?? null,
    baseline: baseline.code,
    baselineMs: baseline.at === null ? null : Date.parse(baseline.at),
    runningSinceMs: started.length > 0 ? Math.max(...started) : null,
    lastEstimateMs: lastEstimateAt?.getTime() ?? null,
    promisedReferenceMs: sensor.promisedReferenceMs,
    historyArrives: sensor.historyArrives,
    historyEveryMs: sensor.historyEveryMs,
    residualSd: revision?.model.residualSd ?? null,
    allowedSpread: sensor.allowedSpread,
  };
}

export const allowedAt = (sensor: SensorRow, value: number): number =>
  allowedErrorAt({ absolute: sensor.allowedErrorAbsolute, percent: sensor.allowedErrorPercent }, value);

/** Counted errors of the estimate as it was shown: with the correction in force when each sample was taken. */
export function countedErrors(
  sensor: SensorRow,
  pairs: readonly PairRow[],
  steps: readonly CorrectionStep[],
): CountedError[] {
  return pairs
    .filter((pair) => pair.notCounted === null)
    .map((pair) => ({
      takenMs: pair.takenAt.getTime(),
      reportedMs: pair.reportedAt.getTime(),
      reference: pair.reference,
      error: correctedError(pair, steps)!,
      allowed: allowedAt(sensor, pair.reference),
    }));
}

export function allowedNow(
  sensor: SensorRow,
  errors: readonly CountedError[],
  current: number | null,
): number | null {
  if (errors.length > 0) return allowedOver(errors.slice(-biasWindow));
  return current === null ? sensor.allowedErrorAbsolute : allowedAt(sensor, current);
}

export const stripOf = (errors: readonly CountedError[]): ErrorStripPoint[] =>
  errors
    .slice(-stripLength)
    .map(({ takenMs, error, allowed }) => ({ at: new Date(takenMs).toISOString(), error, allowed }));

/** Worst first on the board: health, then class A before B before C, then the bias against the allowed error. */
export function rankOf(sensor: SensorRow, health: Health, errors: readonly CountedError[]): number {
  const { bias, allowed } = biasFigures(errors);
  const share =
    typeof bias === 'number' && Number(allowed) > 0 ? Math.min(999, Math.abs(bias) / Number(allowed)) : 0;
  return severityOf(health) * 10_000 + { A: 3000, B: 2000, C: 1000 }[sensor.importanceClass] + share;
}

export const numberOrNull = (value: unknown): number | null => (typeof value === 'number' ? value : null);

export const rmseOf = (errors: readonly CountedError[]): number | null =>
  errors.length === 0
    ? null
    : Math.sqrt(errors.reduce((sum, { error }) => sum + error * error, 0) / errors.length);

export function localDay(at: Date, zone: string): string {
  const { year, month, day } = wallClock(at, zone);
  return `${year}-${String(month).padStart(2, '0')}-${String(day).padStart(2, '0')}`;
}

function correctedError(pair: PairRow, steps: readonly CorrectionStep[]): number | null {
  if (pair.estimate === null) return null;
  return corrected(correctionAt(steps, pair.takenAt.getTime()), pair.estimate) - pair.reference;
}

/** A pair as it is shown: its raw error, and the error with the correction in force when the sample was taken. */
export function toPairedError(
  sensor: SensorRow,
  pair: PairRow,
  sampleNumber: string,
  steps: readonly CorrectionStep[],
): PairedError {
  return {
    sampleId: pair.sampleId,
    sampleNumber,
    takenAt: pair.takenAt.toISOString(),
    reportedAt: pair.reportedAt.toISOString(),
    reference: pair.reference,
    estimate: pair.estimate,
    estimateSd: pair.estimateSd,
    error: pair.error,
    corrected: correctedError(pair, steps),
    allowed: allowedAt(sensor, pair.reference),
    notCounted: pair.notCounted,
    origin: pair.origin,
  };
}
