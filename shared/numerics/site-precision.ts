import { meanOf, sdOf, sumOfSquaresAbout } from './descriptive.ts';
import { chiSquareQuantile, tQuantile } from './distributions.ts';
import { finiteAnswer, vectorRefusal } from './input-checks.ts';
import { notEnough, refuse, wrongShape } from './result.ts';
import type { Refusal, Result } from './result.ts';

/** 95 % limit of the difference of two results over the SD of one: 1.96 √2. */
export const differenceFactor = 1.96 * Math.SQRT2;

/** Fewest degrees of freedom of an SD that may be shown: at 6 its 95 % interval runs from 0.64 to 2.2 times it. */
export const fewestFreedom = 6;

/** An SD with its degrees of freedom, its 95 % interval (χ²), and the limit 1.96 √2 SD with that interval. */
export type SdWithInterval = {
  sd: number;
  low: number;
  high: number;
  degreesOfFreedom: number;
  limit: number;
  limitLow: number;
  limitHigh: number;
};

/**
 * Mean squares of a one-way layout: p series, N results, the grand mean, within and between mean squares (within null
 * where no series repeats), and the mean length n₀ = (N − Σnᵢ²/N)/(p − 1).
 */
export type OneWay = {
  p: number;
  N: number;
  mean: number;
  within: number | null;
  between: number;
  meanLength: number;
};

/**
 * Repeatability of one laboratory: SD pooled over sets of results found under repeatability conditions, ν = Σ(nᵢ − 1).
 * Sets of one carry nothing. Refuses `not-enough-data` (field 'sets') below 6 degrees of freedom, `no-spread` where no
 * two results differ, and unsound input. Source: ISO 5725-2, 7.4.5.1.
 */
export function pooledRepeatability(sets: ArrayLike<number>[]): Result<SdWithInterval> {
  const refusal = setsRefusal(sets);
  if (refusal) return refusal;
  let squares = 0;
  let freedom = 0;
  for (const set of sets) {
    squares += sumOfSquaresAbout(set, meanOf(set));
    freedom += set.length - 1;
  }
  if (freedom < fewestFreedom) return notEnough('sets', fewestFreedom, freedom);
  return sdWithInterval(squares / freedom, freedom);
}

/**
 * Intermediate precision of one laboratory from series on one material, each found by one person in one run:
 * s² = s_r² + s_L² with s_L² = max(0, (MS_between − MS_within)/n₀), the components of a one-way random layout.
 * Degrees of freedom after Satterthwaite; those within where s_L² is 0 (with fewer than 6 of them the components stay
 * as they are found). With single results only, s is their SD.
 * Refuses `not-enough-data` (field 'series') below 7 series, `no-spread`, and unsound input.
 * Source: ISO 5725-2, 7.4.5 (components), ISO 5725-3 (intermediate measures); Satterthwaite 1946.
 */
export function intermediatePrecision(series: ArrayLike<number>[]): Result<SdWithInterval> {
  const refusal = setsRefusal(series);
  if (refusal) return refusal;
  if (series.length < fewestFreedom + 1) return notEnough('series', fewestFreedom + 1, series.length);
  const layout = oneWay(series);
  if (!layout.ok) return layout;
  const { p, N, within, between, meanLength } = layout;
  if (within === null) return sdWithInterval(between, p - 1);
  if (between <= within && N - p >= fewestFreedom) return sdWithInterval(within, N - p);
  const fromBetween = between / meanLength;
  const fromWithin = (1 - 1 / meanLength) * within;
  const variance = fromBetween + fromWithin;
  const freedom = variance ** 2 / (fromBetween ** 2 / (p - 1) + fromWithin ** 2 / (N - p));
  return sdWithInterval(variance, freedom);
}

/**
 * Bias of a laboratory on a material of known value: mean of the series' means less `accepted`, with its 95 % interval
 * (t, p − 1 degrees of freedom: results of one series are not independent of each other). Refuses `not-enough-data`
 * (field 'series') below 7 series, `non-finite-input`, and unsound input. Source: ISO 5725-4, 4.7; VIM 2.18.
 */
export function biasOfLaboratory(
  series: ArrayLike<number>[],
  accepted: number,
): Result<{ mean: number; bias: number; low: number; high: number; series: number }> {
  const refusal = setsRefusal(series) ?? vectorRefusal('accepted', [accepted], 1);
  if (refusal) return refusal;
  const p = series.length;
  if (p < fewestFreedom + 1) return notEnough('series', fewestFreedom + 1, p);
  const means = series.map((values) => meanOf(values));
  const mean = meanOf(means);
  const half = (tQuantile(0.975, p - 1) * sdOf(means, mean)) / Math.sqrt(p);
  const bias = mean - accepted;
  return finiteAnswer({ mean, bias, low: bias - half, high: bias + half, series: p });
}

function setsRefusal(sets: ArrayLike<number>[]): Refusal | null {
  if (!Array.isArray(sets)) return wrongShape('sets');
  for (const [i, set] of sets.entries()) {
    const refusal = vectorRefusal(`sets[${i}]`, set, 1);
    if (refusal) return refusal;
  }
  return null;
}

/**
 * Mean squares of at least two series, of unequal length where need be. Refuses `not-enough-data` (field 'series') and
 * unsound input. Source: ISO 5725-2, 7.4.5; Snedecor & Cochran, Statistical Methods, 13.7.
 */
export function oneWay(series: ArrayLike<number>[]): Result<OneWay> {
  const refusal = setsRefusal(series);
  if (refusal) return refusal;
  const p = series.length;
  if (p < 2) return notEnough('series', 2, p);
  const N = series.reduce((sum, { length }) => sum + length, 0);
  const means = series.map((values) => meanOf(values));
  const mean = series.reduce((sum, { length }, i) => sum + length * means[i]!, 0) / N;
  const within = series.reduce((sum, values, i) => sum + sumOfSquaresAbout(values, means[i]!), 0);
  const between = series.reduce((sum, { length }, i) => sum + length * (means[i]! - mean) ** 2, 0);
  const squaredLengths = series.reduce((sum, { length }) => sum + length ** 2, 0);
  return finiteAnswer({
    p,
    N,
    mean,
    within: N > p ? within / (N - p) : null,
    between: between / (p - 1),
    meanLength: (N - squaredLengths / N) / (p - 1),
  });
}

function sdWithInterval(variance: number, degreesOfFreedom: number): Result<SdWithInterval> {
  if (!(variance > 0)) return refuse('no-spread', { field: 'sets' });
  if (degreesOfFreedom < fewestFreedom) {
    return notEnough('sets', fewestFreedom, Math.floor(degreesOfFreedom));
  }
  const sd = Math.sqrt(variance);
  const end = (p: number) => sd * Math.sqrt(degreesOfFreedom / chiSquareQuantile(p, degreesOfFreedom));
  const low = end(0.975);
  const high = end(0.025);
  return finiteAnswer({
    sd,
    low,
    high,
    degreesOfFreedom,
    limit: differenceFactor * sd,
    limitLow: differenceFactor * low,
    limitHigh: differenceFactor * high,
  });
}
