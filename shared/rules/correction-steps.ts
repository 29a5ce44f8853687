import type { Correction } from '../contracts/calibration-evidence.ts';

/** From an instant on this correction is in force, until the next step. */
export interface CorrectionStep extends Correction {
  fromMs: number;
}

export const uncorrected: Correction = { slope: 1, offset: 0 };

/** The correction in force at an instant; steps in order of their time. Before the first one the raw estimate stands. */
export function correctionAt(steps: readonly CorrectionStep[], atMs: number): Correction {
  return steps.findLast((step) => step.fromMs <= atMs) ?? uncorrected;
}

/** corrected = slope · raw + offset. */
export const corrected = ({ slope, offset }: Correction, raw: number): number => slope * raw + offset;

/** A series of raw estimates as corrected at each instant (epoch milliseconds, ascending); null stays null. */
export function correctSeries(
  at: readonly number[],
  raw: readonly (number | null)[],
  steps: readonly CorrectionStep[],
): (number | null)[] {
  let next = 0;
  let now: Correction = uncorrected;
  return raw.map((value, i) => {
    while (next < steps.length && steps[next]!.fromMs <= at[i]!) now = steps[next++]!;
    return value === null ? null : corrected(now, value);
  });
}
