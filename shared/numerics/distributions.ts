import chiSquareCdfOf from '@stdlib/stats-base-dists-chisquare-cdf';
import chiSquareQuantileOf from '@stdlib/stats-base-dists-chisquare-quantile';
import fCdfOf from '@stdlib/stats-base-dists-f-cdf';
import fQuantileOf from '@stdlib/stats-base-dists-f-quantile';
import normalCdfOf from '@stdlib/stats-base-dists-normal-cdf';
import normalQuantileOf from '@stdlib/stats-base-dists-normal-quantile';
import tCdfOf from '@stdlib/stats-base-dists-t-cdf';
import tQuantileOf from '@stdlib/stats-base-dists-t-quantile';
import { regularisedGamma } from './incomplete-gamma.ts';

/** P(Z ≤ z) of the standard normal distribution. */
export function normalCdf(z: number): number {
  return normalCdfOf(z, 0, 1);
}

/** z with P(Z ≤ z) = p of the standard normal distribution. */
export function normalQuantile(p: number): number {
  return normalQuantileOf(p, 0, 1);
}

/** Density of the standard normal distribution at z. */
export function normalDensity(z: number): number {
  return Math.exp(-0.5 * z * z) / Math.sqrt(2 * Math.PI);
}

/** P(T ≤ t) of Student's t with `df` degrees of freedom (real, > 0). */
export function tCdf(t: number, df: number): number {
  return tCdfOf(t, df);
}

/** t with P(T ≤ t) = p of Student's t with `df` degrees of freedom (real, > 0). */
export function tQuantile(p: number, df: number): number {
  return tQuantileOf(p, df);
}

/** Two-sided p value of a t statistic: P(|T| ≥ |t|). */
export function tTwoSidedP(t: number, df: number): number {
  return Math.min(1, 2 * tCdfOf(-Math.abs(t), df));
}

/** P(F ≤ f) of the F distribution with `df1`, `df2` degrees of freedom. */
export function fCdf(f: number, df1: number, df2: number): number {
  return fCdfOf(f, df1, df2);
}

/** P(F ≥ f), without the cancellation of 1 − cdf: P(F ≥ f; a, b) = P(F ≤ 1/f; b, a). */
export function fUpperP(f: number, df1: number, df2: number): number {
  return f <= 0 ? 1 : fCdfOf(1 / f, df2, df1);
}

/** f with P(F ≤ f) = p of the F distribution. */
export function fQuantile(p: number, df1: number, df2: number): number {
  return fQuantileOf(p, df1, df2);
}

/** Above this many degrees of freedom the package's χ² is wrong (by up to 0.07 at 2,391), so our own takes over. */
const largestPackageFreedom = 1000;

/** P(X ≤ x) of χ² with `df` degrees of freedom. */
export function chiSquareCdf(x: number, df: number): number {
  return df > largestPackageFreedom ? regularisedGamma(df / 2, x / 2).lower : chiSquareCdfOf(x, df);
}

/** P(X ≥ x) of χ² with `df` degrees of freedom. */
export function chiSquareUpperP(x: number, df: number): number {
  return df > largestPackageFreedom ? regularisedGamma(df / 2, x / 2).upper : 1 - chiSquareCdfOf(x, df);
}

/** x with P(X ≤ x) = p of χ² with `df` degrees of freedom. */
export function chiSquareQuantile(p: number, df: number): number {
  return df > largestPackageFreedom ? largeChiSquareQuantile(p, df) : chiSquareQuantileOf(p, df);
}

/** Wilson & Hilferty's cube (1931) as the start, then Newton steps on the cdf. */
function largeChiSquareQuantile(p: number, df: number): number {
  if (!(p > 0 && p < 1)) return p === 0 ? 0 : p === 1 ? Infinity : NaN;
  let x = df * (1 - 2 / (9 * df) + normalQuantile(p) * Math.sqrt(2 / (9 * df))) ** 3;
  for (let step = 0; step < 20; step++) {
    const { lower } = regularisedGamma(df / 2, x / 2);
    const away = x / df - 1;
    const logDensity =
      (-df / 2) * (away - Math.log1p(away)) - Math.log(x) + 0.5 * Math.log(df / (4 * Math.PI));
    const move = (lower - p) / Math.exp(logDensity - 1 / (6 * df));
    x -= move;
    if (Math.abs(move) < 1e-14 * x) break;
  }
  return x;
}
