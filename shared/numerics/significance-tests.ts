import { meanOf, sumOfSquaresAbout } from './descriptive.ts';
import {
  chiSquareCdf,
  chiSquareQuantile,
  chiSquareUpperP,
  fCdf,
  fQuantile,
  fUpperP,
  tQuantile,
  tTwoSidedP,
} from './distributions.ts';
import { finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import { refuse, wrongShape } from './result.ts';
import type { Refusal, Result } from './result.ts';

/** A t test: statistic, degrees of freedom, two-sided p, the tested difference with its interval. */
export type TTest = {
  t: number;
  degreesOfFreedom: number;
  p: number;
  difference: number;
  low: number;
  high: number;
};

/** A test of variances: statistic, degrees of freedom, two-sided p, interval of the ratio tested. */
export type VarianceTest = {
  statistic: number;
  degreesOfFreedom: number[];
  p: number;
  ratio: number;
  low: number;
  high: number;
};

type Moments = { n: number; mean: number; variance: number };

/** One-sample t test of the mean of at least two values against `mean`. Refuses `no-spread` when all are equal. */
export function oneSampleTTest(values: ArrayLike<number>, mean = 0, confidence = 0.95): Result<TTest> {
  const refusal =
    sampleRefusal([['values', values]], confidence) ?? optionRefusal('mean', mean, -1e300, 1e300);
  if (refusal) return refusal;
  const own = moments(values);
  return tTest(own.mean - mean, Math.sqrt(own.variance / own.n), own.n - 1, confidence);
}

/** Paired t test of a − b (same length, at least two pairs). Refuses `no-spread` when all differences are equal. */
export function pairedTTest(a: ArrayLike<number>, b: ArrayLike<number>, confidence = 0.95): Result<TTest> {
  const refusal = sampleRefusal(
    [
      ['a', a],
      ['b', b],
    ],
    confidence,
  );
  if (refusal) return refusal;
  if (a.length !== b.length) return wrongShape('b', a.length, b.length);
  return oneSampleTTest(
    Float64Array.from(a, (value, i) => value - b[i]!),
    0,
    confidence,
  );
}

/** Two-sample t test of mean a − mean b with a pooled variance (Student). At least two values each. */
export function pooledTTest(a: ArrayLike<number>, b: ArrayLike<number>, confidence = 0.95): Result<TTest> {
  const refusal = sampleRefusal(
    [
      ['a', a],
      ['b', b],
    ],
    confidence,
  );
  if (refusal) return refusal;
  const one = moments(a);
  const two = moments(b);
  const freedom = one.n + two.n - 2;
  const pooled = ((one.n - 1) * one.variance + (two.n - 1) * two.variance) / freedom;
  return tTest(one.mean - two.mean, Math.sqrt(pooled * (1 / one.n + 1 / two.n)), freedom, confidence);
}

/** Two-sample t test of mean a − mean b with unequal variances (Welch, Biometrika 34, 1947). */
export function welchTTest(a: ArrayLike<number>, b: ArrayLike<number>, confidence = 0.95): Result<TTest> {
  const refusal = sampleRefusal(
    [
      ['a', a],
      ['b', b],
    ],
    confidence,
  );
  if (refusal) return refusal;
  const one = moments(a);
  const two = moments(b);
  const first = one.variance / one.n;
  const second = two.variance / two.n;
  const sum = first + second;
  if (!(sum > 0)) return refuse('no-spread', { field: 'a' });
  const freedom = 1 / ((first / sum) ** 2 / (one.n - 1) + (second / sum) ** 2 / (two.n - 1));
  return tTest(one.mean - two.mean, Math.sqrt(sum), freedom, confidence);
}

/** F test of variance a / variance b, two-sided. Refuses `no-spread` when either variance is zero. */
export function fTest(a: ArrayLike<number>, b: ArrayLike<number>, confidence = 0.95): Result<VarianceTest> {
  const refusal = sampleRefusal(
    [
      ['a', a],
      ['b', b],
    ],
    confidence,
  );
  if (refusal) return refusal;
  const one = moments(a);
  const two = moments(b);
  if (!(one.variance > 0)) return refuse('no-spread', { field: 'a' });
  if (!(two.variance > 0)) return refuse('no-spread', { field: 'b' });
  const ratio = one.variance / two.variance;
  const freedom: [number, number] = [one.n - 1, two.n - 1];
  return finiteAnswer({
    statistic: ratio,
    degreesOfFreedom: freedom,
    p: Math.min(1, 2 * Math.min(fCdf(ratio, ...freedom), fUpperP(ratio, ...freedom))),
    ratio,
    low: ratio / fQuantile((1 + confidence) / 2, ...freedom),
    high: ratio / fQuantile((1 - confidence) / 2, ...freedom),
  });
}

/** χ² test of the variance of at least two values against `sd`²; `ratio` and its interval are s²/sd². Two-sided. */
export function chiSquareVarianceTest(
  values: ArrayLike<number>,
  sd: number,
  confidence = 0.95,
): Result<VarianceTest> {
  const refusal =
    sampleRefusal([['values', values]], confidence) ??
    optionRefusal('sd', sd, Number.MIN_VALUE, Number.MAX_VALUE);
  if (refusal) return refusal;
  const { n, variance } = moments(values);
  const ratio = variance / (sd * sd);
  const statistic = (n - 1) * ratio;
  return finiteAnswer({
    statistic,
    degreesOfFreedom: [n - 1],
    p: Math.min(1, 2 * Math.min(chiSquareCdf(statistic, n - 1), chiSquareUpperP(statistic, n - 1))),
    ratio,
    low: statistic / chiSquareQuantile((1 + confidence) / 2, n - 1),
    high: statistic / chiSquareQuantile((1 - confidence) / 2, n - 1),
  });
}

function moments(values: ArrayLike<number>): Moments {
  const mean = meanOf(values);
  return { n: values.length, mean, variance: sumOfSquaresAbout(values, mean) / (values.length - 1) };
}

function sampleRefusal(
  samples: [field: string, values: ArrayLike<number>][],
  confidence: number,
): Refusal | null {
  const option = optionRefusal('confidence', confidence, 0, 1, 'open');
  if (option) return option;
  for (const [field, values] of samples) {
    const refusal = vectorRefusal(field, values, 2);
    if (refusal) return refusal;
  }
  return null;
}

function tTest(
  difference: number,
  standardError: number,
  freedom: number,
  confidence: number,
): Result<TTest> {
  if (!(standardError > 0)) return refuse('no-spread', { field: 'values' });
  const t = difference / standardError;
  const reach = tQuantile((1 + confidence) / 2, freedom) * standardError;
  return finiteAnswer({
    t,
    degreesOfFreedom: freedom,
    p: tTwoSidedP(t, freedom),
    difference,
    low: difference - reach,
    high: difference + reach,
  });
}
