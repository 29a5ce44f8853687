import { finiteAnswer, vectorRefusal } from './input-checks.ts';
import type { Result } from './result.ts';

/** Sum of `values` with Neumaier's compensation (Neumaier, ZAMM 54, 1974): the error does not grow with n. */
export function compensatedSum(values: ArrayLike<number>): number {
  let sum = 0;
  let lost = 0;
  for (let i = 0; i < values.length; i++) {
    const value = values[i]!;
    const next = sum + value;
    lost += Math.abs(sum) >= Math.abs(value) ? sum - next + value : value - next + sum;
    sum = next;
  }
  return sum + lost;
}

/** Arithmetic mean with one correction pass (mean of the residuals added); `values` must not be empty. */
export function meanOf(values: ArrayLike<number>): number {
  const n = values.length;
  const first = compensatedSum(values) / n;
  let rest = 0;
  for (let i = 0; i < n; i++) rest += values[i]! - first;
  return first + rest / n;
}

/**
 * Sum of squared deviations from `centre` by the corrected two-pass formula (Chan, Golub & LeVeque, American
 * Statistician 37, 1983): Σ(x − m)² − (Σ(x − m))²/n.
 */
export function sumOfSquaresAbout(values: ArrayLike<number>, centre: number): number {
  let squares = 0;
  let rest = 0;
  for (let i = 0; i < values.length; i++) {
    const deviation = values[i]! - centre;
    squares += deviation * deviation;
    rest += deviation;
  }
  return Math.max(0, squares - (rest * rest) / values.length);
}

/** Sample standard deviation (divisor n − 1) of at least two values; `mean` is computed where it is not given. */
export function sdOf(values: ArrayLike<number>, mean = meanOf(values)): number {
  return Math.sqrt(sumOfSquaresAbout(values, mean) / (values.length - 1));
}

/** Root mean square of the values; must not be empty. */
export function rootMeanSquare(values: ArrayLike<number>): number {
  let squares = 0;
  for (let i = 0; i < values.length; i++) squares += values[i]! * values[i]!;
  return Math.sqrt(squares / values.length);
}

/**
 * Quantile of ascending `sorted` values by linear interpolation (type 7 of Hyndman & Fan, American Statistician 50,
 * 1996); `p` in [0, 1], not empty.
 */
export function quantileOfSorted(sorted: ArrayLike<number>, p: number): number {
  const position = p * (sorted.length - 1);
  const below = Math.floor(position);
  const low = sorted[below]!;
  const high = sorted[Math.min(below + 1, sorted.length - 1)]!;
  return low + (position - below) * (high - low);
}

/** Median of the values in any order; must not be empty. */
export function medianOf(values: ArrayLike<number>): number {
  return quantileOfSorted(Float64Array.from(values).sort(), 0.5);
}

/** Mean, SD (divisor n − 1) and extremes of one set of values, in their own unit. */
export type Summary = { n: number; mean: number; sd: number; min: number; max: number; median: number };

/**
 * Summary of at least two finite values. Accuracy against NIST StRD (univariate): mean to 15 digits, SD to 8 or more
 * on the hardest set (NumAcc4). Refuses `not-enough-data`, `non-finite-input`, `wrong-shape`, `out-of-range`.
 */
export function summary(values: ArrayLike<number>): Result<Summary> {
  const refusal = vectorRefusal('values', values, 2);
  if (refusal) return refusal;
  const sorted = Float64Array.from(values).sort();
  const mean = meanOf(values);
  return finiteAnswer({
    n: sorted.length,
    mean,
    sd: sdOf(values, mean),
    min: sorted[0]!,
    max: sorted[sorted.length - 1]!,
    median: quantileOfSorted(sorted, 0.5),
  });
}
