import { meanOf, sumOfSquaresAbout } from './descriptive.ts';
import { chiSquareQuantile, chiSquareUpperP } from './distributions.ts';
import { countRefusal, finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import { notEnough, refuse } from './result.ts';
import type { Result } from './result.ts';

/** A portmanteau test: statistic, degrees of freedom (lags − fitted parameters) and p value. */
export type Portmanteau = { statistic: number; degreesOfFreedom: number; p: number };

/**
 * Autocorrelations r₁…r_maxLag of values in time order (divisor n at every lag). Needs more values than lags. Refuses
 * `no-spread` when all are equal, `not-enough-data`, `non-finite-input`, `wrong-shape`, `out-of-range`.
 */
export function autocorrelations(
  values: ArrayLike<number>,
  maxLag: number,
): Result<{ n: number; r: Float64Array }> {
  const refusal = countRefusal('maxLag', maxLag, 1, 1e6) ?? vectorRefusal('values', values, 2);
  if (refusal) return refusal;
  const n = values.length;
  if (n <= maxLag) return notEnough('values', maxLag + 1, n);
  const mean = meanOf(values);
  const squares = sumOfSquaresAbout(values, mean);
  if (!(squares > 0)) return refuse('no-spread', { field: 'values' });
  const r = new Float64Array(maxLag);
  for (let lag = 1; lag <= maxLag; lag++) {
    let products = 0;
    for (let i = lag; i < n; i++) products += (values[i]! - mean) * (values[i - lag]! - mean);
    r[lag - 1] = products / squares;
  }
  return finiteAnswer({ n, r });
}

/**
 * Ljung-Box test of `lags` autocorrelations: Q = n(n + 2) Σ r_k²/(n − k), χ² with lags − `fitted` degrees of freedom
 * (`fitted`: parameters estimated on these values). Refuses as {@link autocorrelations}. Source: Ljung & Box,
 * Biometrika 65 (1978).
 */
export function ljungBox(values: ArrayLike<number>, lags: number, fitted = 0): Result<Portmanteau> {
  return portmanteau(values, lags, fitted, (n, lag) => (n * (n + 2)) / (n - lag));
}

/** Box-Pierce test: Q = n Σ r_k²; otherwise as {@link ljungBox}, which is closer to χ² for short series. */
export function boxPierce(values: ArrayLike<number>, lags: number, fitted = 0): Result<Portmanteau> {
  return portmanteau(values, lags, fitted, (n) => n);
}

function portmanteau(
  values: ArrayLike<number>,
  lags: number,
  fitted: number,
  weight: (n: number, lag: number) => number,
): Result<Portmanteau> {
  const refusal = countRefusal('fitted', fitted, 0, Math.max(0, lags - 1));
  if (refusal) return refusal;
  const correlations = autocorrelations(values, lags);
  if (!correlations.ok) return correlations;
  const { n, r } = correlations;
  let statistic = 0;
  for (let lag = 1; lag <= lags; lag++) statistic += weight(n, lag) * r[lag - 1]! ** 2;
  const degreesOfFreedom = lags - fitted;
  return finiteAnswer({ statistic, degreesOfFreedom, p: chiSquareUpperP(statistic, degreesOfFreedom) });
}

/**
 * Size-based verdict on innovations over a long replay, where a test finds every trifle: `coloured` when one of
 * r₁…r₁₀ exceeds 0.2 in size. `largest` is the autocorrelation furthest from zero, at `lag`.
 */
export function whitenessBySize(
  innovations: ArrayLike<number>,
): Result<{ n: number; largest: number; lag: number; coloured: boolean }> {
  const correlations = autocorrelations(innovations, 10);
  if (!correlations.ok) return correlations;
  let lag = 1;
  for (let k = 2; k <= 10; k++) {
    if (Math.abs(correlations.r[k - 1]!) > Math.abs(correlations.r[lag - 1]!)) lag = k;
  }
  const largest = correlations.r[lag - 1]!;
  return { ok: true, n: correlations.n, largest, lag, coloured: Math.abs(largest) > 0.2 };
}

/**
 * Size-based verdict on the normalised innovation squared over a stretch (a week, say): mean NIS against its dimension.
 * `overconfident` when the mean exceeds twice the dimension, `underconfident` below half of it.
 */
export function nisBySize(
  nis: ArrayLike<number>,
  dimension: number,
): Result<{ n: number; ratio: number; verdict: 'consistent' | 'overconfident' | 'underconfident' }> {
  const refusal = countRefusal('dimension', dimension, 1, 1000) ?? vectorRefusal('nis', nis, 1);
  if (refusal) return refusal;
  const ratio = meanOf(nis) / dimension;
  const verdict = ratio > 2 ? 'overconfident' : ratio < 0.5 ? 'underconfident' : 'consistent';
  return finiteAnswer({ n: nis.length, ratio, verdict });
}

/**
 * Two-sided acceptance bounds for the mean of `count` normalised innovations squared of `dimension`, independent:
 * χ²(count · dimension)/count. One value of a good filter lies outside 5 % of the time. Source: Bar-Shalom, Li &
 * Kirubarajan (2001), sec. 5.4.
 */
export function nisBounds(
  dimension: number,
  count: number,
  confidence = 0.95,
): Result<{ low: number; high: number }> {
  const refusal =
    countRefusal('dimension', dimension, 1, 1000) ??
    countRefusal('count', count, 1, 1e6) ??
    optionRefusal('confidence', confidence, 0, 1, 'open');
  if (refusal) return refusal;
  const freedom = dimension * count;
  return finiteAnswer({
    low: chiSquareQuantile((1 - confidence) / 2, freedom) / count,
    high: chiSquareQuantile((1 + confidence) / 2, freedom) / count,
  });
}

/** Gate for a single normalised innovation squared: the χ² quantile `p` for its dimension. */
export function nisGate(dimension: number, p: number): Result<{ gate: number }> {
  const refusal = countRefusal('dimension', dimension, 1, 1000) ?? optionRefusal('p', p, 0, 1, 'open');
  return refusal ?? finiteAnswer({ gate: chiSquareQuantile(p, dimension) });
}
