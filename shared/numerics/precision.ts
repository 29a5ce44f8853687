import { compensatedSum, meanOf, sdOf, sumOfSquaresAbout } from './descriptive.ts';
import { fQuantile, tQuantile } from './distributions.ts';
import { countRefusal, finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import { refuse, wrongShape } from './result.ts';
import type { Result } from './result.ts';

/** 95 % limit of the difference of two results over their SD, 1.96 √2, as ASTM D6299 prints it. */
export const limitFactor = 2.77;

/** The same factor as ASTM E691 and ISO 5725 round it. */
const interlaboratoryFactor = 2.8;

/**
 * Precision of one material over several laboratories with the same number of replicates each. `sdOfMeans` s_x̄,
 * `repeatabilitySd` s_r, `reproducibilitySd` s_R (never below s_r), `betweenVariance` s_L² as computed (may be
 * negative), limits r and R = 2.8 SD, Mandel's h (mean) and k (spread) for each laboratory.
 */
export type InterlaboratoryPrecision = {
  mean: number;
  sdOfMeans: number;
  repeatabilitySd: number;
  reproducibilitySd: number;
  betweenVariance: number;
  r: number;
  R: number;
  h: Float64Array;
  k: Float64Array;
};

/**
 * E691 analysis of one material: `results` one row of replicates for each laboratory (at least 3 laboratories, the same
 * ≥ 2 replicates). Refuses `no-spread` where laboratories or replicates do not differ at all, `wrong-shape` for ragged
 * rows, and unsound input. Source: ASTM E691 (formulas as in ISO 5725-2).
 */
export function interlaboratoryPrecision(results: ArrayLike<number>[]): Result<InterlaboratoryPrecision> {
  if (!Array.isArray(results)) return wrongShape('results');
  const refusal = vectorRefusal(
    'results',
    results.map((row) => row?.length ?? NaN),
    3,
  );
  if (refusal) return refusal;
  const replicates = results[0]!.length;
  for (const [lab, row] of results.entries()) {
    const rowRefusal = vectorRefusal(`results[${lab}]`, row, 2, replicates);
    if (rowRefusal) return rowRefusal;
  }
  const means = results.map((row) => meanOf(row));
  const sds = results.map((row, lab) => sdOf(row, means[lab]!));
  const mean = meanOf(means);
  const sdOfMeans = sdOf(means, mean);
  const withinVariance = compensatedSum(sds.map((sd) => sd * sd)) / sds.length;
  const repeatabilitySd = Math.sqrt(withinVariance);
  if (!(sdOfMeans > 0) || !(repeatabilitySd > 0)) return refuse('no-spread', { field: 'results' });
  const betweenVariance = sdOfMeans ** 2 - withinVariance / replicates;
  const reproducibilitySd = Math.sqrt(Math.max(0, betweenVariance) + withinVariance);
  return finiteAnswer({
    mean,
    sdOfMeans,
    repeatabilitySd,
    reproducibilitySd,
    betweenVariance,
    r: interlaboratoryFactor * repeatabilitySd,
    R: interlaboratoryFactor * reproducibilitySd,
    h: Float64Array.from(means, (value) => (value - mean) / sdOfMeans),
    k: Float64Array.from(sds, (sd) => sd / repeatabilitySd),
  });
}

/** Critical values of Mandel's h and k at level `alpha` (E691 uses 0.005) for so many laboratories and replicates. */
export function mandelCritical(
  laboratories: number,
  replicates: number,
  alpha = 0.005,
): Result<{ h: number; k: number }> {
  const refusal =
    countRefusal('laboratories', laboratories, 3, 1e6) ??
    countRefusal('replicates', replicates, 2, 1e6) ??
    optionRefusal('alpha', alpha, 0, 0.5, 'open');
  if (refusal) return refusal;
  const p = laboratories;
  const t = tQuantile(1 - alpha / 2, p - 2);
  const f = fQuantile(1 - alpha, replicates - 1, (p - 1) * (replicates - 1));
  return finiteAnswer({
    h: ((p - 1) * t) / Math.sqrt(p * (t * t + p - 2)),
    k: Math.sqrt(p / (1 + (p - 1) / f)),
  });
}

/**
 * Repeatability from sets of replicates of one sample each (at least one set of two or more): pooled SD with its degrees
 * of freedom and limit r = 2.77 s. Sets of one carry nothing and are passed over.
 */
export function repeatabilityFromReplicates(
  sets: ArrayLike<number>[],
): Result<{ sd: number; degreesOfFreedom: number; limit: number }> {
  if (!Array.isArray(sets)) return wrongShape('sets');
  let squares = 0;
  let degreesOfFreedom = 0;
  for (const [i, set] of sets.entries()) {
    const refusal = vectorRefusal(`sets[${i}]`, set, 1);
    if (refusal) return refusal;
    squares += sumOfSquaresAbout(set, meanOf(set));
    degreesOfFreedom += set.length - 1;
  }
  if (degreesOfFreedom < 1) return refuse('not-enough-data', { field: 'sets', needed: 1, got: 0 });
  const sd = Math.sqrt(squares / degreesOfFreedom);
  return finiteAnswer({ sd, degreesOfFreedom, limit: limitFactor * sd });
}

/**
 * Site precision R′ = 2.77 s from at least two results of a site's own check standard over time (ASTM D6299); `limit`
 * is R′. Refuses `not-enough-data`, `non-finite-input`, `wrong-shape`, `out-of-range`.
 */
export function sitePrecision(
  checkResults: ArrayLike<number>,
): Result<{ n: number; sd: number; limit: number }> {
  const refusal = vectorRefusal('checkResults', checkResults, 2);
  if (refusal) return refusal;
  const sd = sdOf(checkResults);
  return finiteAnswer({ n: checkResults.length, sd, limit: limitFactor * sd });
}
