import { medianOf } from './descriptive.ts';
import { normalQuantile } from './distributions.ts';
import { finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import { notEnough, refuse } from './result.ts';
import type { Result } from './result.ts';

/** A Passing-Bablok line y = intercept + slope · x with its intervals; `slopes` pairwise slopes counted, `offset` K. */
export type PassingBablokLine = {
  n: number;
  slope: number;
  slopeLow: number;
  slopeHigh: number;
  intercept: number;
  interceptLow: number;
  interceptHigh: number;
  slopes: number;
  offset: number;
};

/** A slope this close to −1 is one that decimals make exactly −1. */
const minusOneTolerance = 1e-9;

/** Most pairs of values that are compared: 2,000 values make two million slopes. */
const mostValues = 2000;

/**
 * Passing-Bablok regression (1983 procedure) of 5 to 2,000 pairs: the median of the pairwise slopes shifted by K, the
 * number of slopes below −1; slopes of exactly −1 and pairs equal in both are dropped, vertical ones count as infinite.
 * Assumes a positive relation. Refuses `cannot-tell` where an interval end falls among infinite slopes or off the list
 * (`field`), `no-spread`, `not-enough-data`, `out-of-range`, `non-finite-input`, `wrong-shape`.
 * Source: Passing & Bablok, J. Clin. Chem. Clin. Biochem. 21 (1983) 709.
 */
export function passingBablok(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  options: { confidence?: number } = {},
): Result<PassingBablokLine> {
  const confidence = options.confidence ?? 0.95;
  const refusal =
    optionRefusal('confidence', confidence, 0, 1, 'open') ??
    vectorRefusal('x', x, 5) ??
    vectorRefusal('y', y, 5, x.length) ??
    optionRefusal('x', x.length, 5, mostValues);
  if (refusal) return refusal;
  const n = x.length;
  const { slopes, offset } = pairwiseSlopes(x, y);
  const count = slopes.length;
  if (count === 0) return refuse('no-spread', { field: 'x' });
  const reach = normalQuantile((1 + confidence) / 2) * Math.sqrt((n * (n - 1) * (2 * n + 5)) / 18);
  const lowest = Math.round((count - reach) / 2);
  const highest = count - lowest + 1;
  if (lowest < 1 || highest + offset > count) return notEnough('x', n + 1, n);
  const slope =
    count % 2 === 1
      ? slopes[(count + 1) / 2 + offset - 1]!
      : (slopes[count / 2 + offset - 1]! + slopes[count / 2 + offset]!) / 2;
  const slopeLow = slopes[lowest + offset - 1]!;
  const slopeHigh = slopes[highest + offset - 1]!;
  if (!Number.isFinite(slope)) return refuse('cannot-tell', { field: 'slope' });
  if (!Number.isFinite(slopeLow) || !Number.isFinite(slopeHigh))
    return refuse('cannot-tell', { field: 'slopeHigh' });
  const interceptFor = (b: number) => medianOf(Float64Array.from(y, (value, i) => value - b * x[i]!));
  return finiteAnswer({
    n,
    slope,
    slopeLow,
    slopeHigh,
    intercept: interceptFor(slope),
    interceptLow: interceptFor(slopeHigh),
    interceptHigh: interceptFor(slopeLow),
    slopes: count,
    offset,
  });
}

/** Ascending slopes of all pairs without those of −1, and the number of them below −1. */
function pairwiseSlopes(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
): { slopes: Float64Array; offset: number } {
  const n = x.length;
  const all = new Float64Array((n * (n - 1)) / 2);
  let count = 0;
  let offset = 0;
  for (let i = 0; i < n; i++) {
    for (let j = i + 1; j < n; j++) {
      const dx = x[j]! - x[i]!;
      const dy = y[j]! - y[i]!;
      if (dx === 0 && dy === 0) continue;
      const slope = dx === 0 ? Math.sign(dy) * Infinity : dy / dx;
      if (Math.abs(slope + 1) <= minusOneTolerance) continue;
      if (slope < -1) offset++;
      all[count++] = slope;
    }
  }
  return { slopes: all.subarray(0, count).sort(), offset };
}
