import { medianOf } from './descriptive.ts';
import { normalCdf, normalQuantile } from './distributions.ts';
import { finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import { valueAtRank } from './order-statistics.ts';
import { refuse } from './result.ts';
import type { Result } from './result.ts';

/**
 * Mann-Kendall test: S = number of rises minus number of falls over all pairs, its tie-corrected variance, z with
 * continuity correction, two-sided normal p, exact two-sided p where there are no ties and n ≤ 40 (else null), and
 * Kendall's τ_b.
 */
export type MannKendall = {
  n: number;
  s: number;
  variance: number;
  z: number;
  p: number;
  pExact: number | null;
  tau: number;
};

/**
 * Theil-Sen line: `slope` (unit per unit of `at`) with its interval, through the point (centreAt, centreValue), the
 * medians. `intercept` = centreValue − slope · centreAt.
 */
export type TheilSen = {
  n: number;
  slope: number;
  low: number;
  high: number;
  centreAt: number;
  centreValue: number;
  intercept: number;
};

/** All pairs of more values than this take too long for what they add; the last ones count. */
export const longestTrend = 400;

/** Largest n for which the exact distribution of S is counted. */
const largestExact = 40;

/**
 * Mann-Kendall trend test of the last 400 values in time order (at least 4). All values equal: S = 0, z = 0, p = 1.
 * Autocorrelation makes it find trends that are none. Refuses `not-enough-data`, `non-finite-input`, `wrong-shape`.
 * Source: Gilbert, Statistical Methods for Environmental Pollution Monitoring (1987), ch. 16.
 */
export function mannKendall(values: ArrayLike<number>): Result<MannKendall> {
  const refusal = vectorRefusal('values', values, 4);
  if (refusal) return refusal;
  const recent = lastValues(values);
  const n = recent.length;
  let s = 0;
  for (let i = 0; i < n; i++) {
    const first = recent[i]!;
    for (let j = i + 1; j < n; j++) s += recent[j]! > first ? 1 : recent[j]! < first ? -1 : 0;
  }
  const ties = tieSizes(recent);
  const variance = kendallVariance(n, [ties]);
  const z = variance > 0 ? (s - Math.sign(s)) / Math.sqrt(variance) : 0;
  const pairs = (n * (n - 1)) / 2;
  const untied = pairs - ties.reduce((sum, size) => sum + (size * (size - 1)) / 2, 0);
  return finiteAnswer({
    n,
    s,
    variance,
    z,
    p: Math.min(1, 2 * normalCdf(-Math.abs(z))),
    pExact: ties.length === 0 && n <= largestExact ? exactKendallP(n, s) : null,
    tau: untied > 0 ? s / Math.sqrt(pairs * untied) : 0,
  });
}

/**
 * Theil-Sen slope of the last 400 values (at least 4) over ascending instants `at` (ms, days…: the slope is per that
 * unit), with Gilbert's interval: ranks (N ∓ C)/2 of the N ordered slopes, C = z √Var(S), interpolated between
 * neighbouring slopes. Pairs at the same instant are left out. Refuses `no-spread` when all instants are equal,
 * `not-enough-data`, `non-finite-input`, `wrong-shape`, `out-of-range`. Source: Sen, JASA 63 (1968); Gilbert (1987),
 * ch. 16.
 */
export function theilSen(
  at: ArrayLike<number>,
  values: ArrayLike<number>,
  options: { confidence?: number } = {},
): Result<TheilSen> {
  const confidence = options.confidence ?? 0.95;
  const refusal =
    optionRefusal('confidence', confidence, 0, 1, 'open') ??
    vectorRefusal('at', at, 4) ??
    vectorRefusal('values', values, 4, at.length);
  if (refusal) return refusal;
  const times = lastValues(at);
  const recent = lastValues(values);
  const slopes = pairSlopes(times, recent);
  if (slopes.length === 0) return refuse('no-spread', { field: 'at' });
  const variance = kendallVariance(recent.length, [tieSizes(times), tieSizes(recent)]);
  const reach = normalQuantile((1 + confidence) / 2) * Math.sqrt(Math.max(0, variance));
  const slope = valueAtRank(slopes, (slopes.length + 1) / 2);
  const centreAt = medianOf(times);
  const centreValue = medianOf(recent);
  return finiteAnswer({
    n: recent.length,
    slope,
    low: valueAtRank(slopes, (slopes.length - reach) / 2),
    high: valueAtRank(slopes, (slopes.length + reach) / 2 + 1),
    centreAt,
    centreValue,
    intercept: centreValue - slope * centreAt,
  });
}

function lastValues(values: ArrayLike<number>): Float64Array {
  return Float64Array.from(values).subarray(Math.max(0, values.length - longestTrend));
}

function pairSlopes(times: Float64Array, values: Float64Array): Float64Array {
  const n = values.length;
  const slopes = new Float64Array((n * (n - 1)) / 2);
  let count = 0;
  for (let i = 0; i < n; i++) {
    for (let j = i + 1; j < n; j++) {
      const apart = times[j]! - times[i]!;
      if (apart !== 0) slopes[count++] = (values[j]! - values[i]!) / apart;
    }
  }
  return slopes.subarray(0, count);
}

/** Sizes (≥ 2) of the groups of equal values. */
function tieSizes(values: Float64Array): number[] {
  const sorted = Float64Array.from(values).sort();
  const sizes: number[] = [];
  for (let start = 0, i = 1; i <= sorted.length; i++) {
    if (i < sorted.length && sorted[i] === sorted[start]) continue;
    if (i - start > 1) sizes.push(i - start);
    start = i;
  }
  return sizes;
}

/** Variance of S under no trend, less what each tied group takes away. */
function kendallVariance(n: number, tieGroups: number[][]): number {
  const part = (m: number) => (m * (m - 1) * (2 * m + 5)) / 18;
  return tieGroups.flat().reduce((variance, size) => variance - part(size), part(n));
}

/** Exact two-sided p of S without ties: share of permutations at least as far out, by counting inversions. */
function exactKendallP(n: number, s: number): number {
  const pairs = (n * (n - 1)) / 2;
  let shares = new Float64Array([1]);
  for (let size = 2; size <= n; size++) {
    const next = new Float64Array(shares.length + size - 1);
    for (let k = 0; k < shares.length; k++) for (let m = 0; m < size; m++) next[k + m]! += shares[k]! / size;
    shares = next;
  }
  const fewest = (pairs - Math.abs(s)) / 2;
  let tail = 0;
  for (let k = 0; k <= fewest; k++) tail += shares[k]!;
  return Math.min(1, 2 * tail);
}
