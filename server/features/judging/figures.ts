import type { ErrorStripPoint, Health, PairedError } from '../../../shared/contracts/judging.ts';
import { allowedErrorAt } from '../../../shared/rules/allowed-error.ts';
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
import type { PairRow } from './repo.ts';

const stripLength = 20;

/**
 * Errors count from the baseline on: the present revision's own, and for the first one only samples after the period
 * that it was fitted on, since a model is not proven by what it was made from.
 */
export function baselineOf(revisions: readonly RevisionRow[]): Date | null {
  const inForce = revisions.at(-1);
  if (!inForce) return null;
  if (revisions.length > 1) return inForce.effectiveFrom;
  return inForce.fit ? new Date(inForce.fit.to) : null;
}

export function healthInput(
  sensor: SensorRow,
  pairs: readonly PairRow[],
  errors: readonly CountedError[],
  revisions: readonly RevisionRow[],
  lastEstimateAt: Date | null,
  now: Date,
): HealthInput {
  const window = pairs.slice(-biasWindow);
  return {
    nowMs: now.getTime(),
    errors,
    uncounted: { count: window.filter((pair) => pair.notCounted !== null).length, of: window.length },
    lastReferenceMs: pairs.findLast((pair) => pair.notCounted === null)?.takenAt.getTime() ?? null,
    baselineMs: baselineOf(revisions)?.getTime() ?? null,
    lastEstimateMs: lastEstimateAt?.getTime() ?? null,
    promisedReferenceMs: sensor.promisedReferenceMs,
    historyArrives: sensor.historyArrives,
    historyEveryMs: sensor.historyEveryMs,
    residualSd: revisions.at(-1)?.model.residualSd ?? null,
    allowedSpread: sensor.allowedSpread,
  };
}

export const allowedAt = (sensor: SensorRow, value: number): number =>
  allowedErrorAt({ absolute: sensor.allowedErrorAbsolute, percent: sensor.allowedErrorPercent }, value);

export function countedErrors(sensor: SensorRow, pairs: readonly PairRow[]): CountedError[] {
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

/** A pair as it is shown; the correction in force would be added here. */
export function toPairedError(sensor: SensorRow, pair: PairRow, sampleNumber: string): PairedError {
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
