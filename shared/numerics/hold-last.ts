import { meanOf, rootMeanSquare, sdOf } from './descriptive.ts';
import { finiteAnswer, vectorRefusal } from './input-checks.ts';
import { notEnough, refuse } from './result.ts';
import type { Result } from './result.ts';

/** Reference samples in any order: when taken, when reported (both UTC ms), and the result. */
export type ReportedSamples = {
  takenAt: ArrayLike<number>;
  reportedAt: ArrayLike<number>;
  value: ArrayLike<number>;
};

/**
 * What simply holding the last reported result would have given. `scored`: indices of the samples for which a result
 * had been reported by the time they were taken; `errors` held − reference for each of them, same order.
 */
export type HoldLast = {
  n: number;
  scored: number[];
  errors: Float64Array;
  rmse: number;
  bias: number;
  sd: number | null;
};

/**
 * Error of holding the last result reported by the time each sample was taken (of results reported at the same instant
 * the one taken last counts; a result never stands for its own sample). Set its RMSE against that of a soft sensor over
 * the same samples. Refuses `not-enough-data` when no sample had one before it, `out-of-range` when a sample is
 * reported before it is taken, `non-finite-input`, `wrong-shape`.
 */
export function holdLast(samples: ReportedSamples): Result<HoldLast> {
  const { takenAt, reportedAt, value } = samples;
  const refusal =
    vectorRefusal('takenAt', takenAt, 2) ??
    vectorRefusal('reportedAt', reportedAt, 2, takenAt.length) ??
    vectorRefusal('value', value, 2, takenAt.length);
  if (refusal) return refusal;
  for (let i = 0; i < takenAt.length; i++) {
    if (reportedAt[i]! < takenAt[i]!)
      return refuse('out-of-range', { field: 'reportedAt', figure: reportedAt[i] });
  }
  const indices = Array.from(takenAt, (_, i) => i);
  const byReport = [...indices].sort((a, b) => reportedAt[a]! - reportedAt[b]! || takenAt[a]! - takenAt[b]!);
  const byTaking = [...indices].sort((a, b) => takenAt[a]! - takenAt[b]!);
  const scored: number[] = [];
  const errors: number[] = [];
  let reported = 0;
  for (const i of byTaking) {
    while (reported < byReport.length && reportedAt[byReport[reported]!]! <= takenAt[i]!) reported++;
    const held = lastOther(byReport, reported - 1, i);
    if (held === null) continue;
    scored.push(i);
    errors.push(value[held]! - value[i]!);
  }
  if (errors.length === 0) return notEnough('reportedAt', 1, 0);
  return finiteAnswer({
    n: errors.length,
    scored,
    errors: Float64Array.from(errors),
    rmse: rootMeanSquare(errors),
    bias: meanOf(errors),
    sd: errors.length > 1 ? sdOf(errors) : null,
  });
}

function lastOther(byReport: number[], from: number, own: number): number | null {
  const at = byReport[from] === own ? from - 1 : from;
  return at >= 0 ? byReport[at]! : null;
}
