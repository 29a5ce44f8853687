import { meanOf, sumOfSquaresAbout } from './descriptive.ts';
import { fUpperP, tQuantile, tTwoSidedP } from './distributions.ts';
import { finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import { refuse } from './result.ts';
import type { Result } from './result.ts';

/**
 * How estimates agree with references. error = estimate − reference. `bias`, `rmsep` (about zero), `sep` (SD of the
 * errors, divisor n − 1), `meanAbsolute`, `largestAbsolute` in the unit of the values; `r` correlation; `ccc` Lin's
 * concordance (divisor n); `q2` 1 − Σe²/Σ(reference − mean)²; `rpd` SD(reference)/SEP; `biasLimit` t·SEP/√n with
 * `biasP` of the t test; the line reference = intercept + slope · estimate with the t test of slope against 1 and the
 * joint F test of (0, 1).
 */
export type Agreement = {
  n: number;
  bias: number;
  rmsep: number;
  sep: number;
  meanAbsolute: number;
  largestAbsolute: number;
  r: number;
  ccc: number;
  q2: number;
  rpd: number;
  biasT: number;
  biasP: number;
  biasLimit: number;
  slope: number;
  intercept: number;
  slopeStandardError: number;
  slopeT: number;
  slopeP: number;
  jointF: number;
  jointP: number;
};

/**
 * Validation figures of at least three pairs. Refuses `no-spread` naming the side that is constant ('errors' when all
 * errors are equal, 'estimate' when the points lie on a line exactly), `not-enough-data`, `non-finite-input`,
 * `wrong-shape`, `out-of-range`. Source: Lin, Biometrics 45 (1989) for the concordance; Fearn (2009) for the bias limit.
 */
export function agreement(
  reference: ArrayLike<number>,
  estimate: ArrayLike<number>,
  options: { confidence?: number } = {},
): Result<Agreement> {
  const confidence = options.confidence ?? 0.95;
  const refusal =
    optionRefusal('confidence', confidence, 0, 1, 'open') ??
    vectorRefusal('reference', reference, 3) ??
    vectorRefusal('estimate', estimate, 3, reference.length);
  if (refusal) return refusal;
  const n = reference.length;
  const errors = Float64Array.from(estimate, (value, i) => value - reference[i]!);
  const bias = meanOf(errors);
  const sep = Math.sqrt(sumOfSquaresAbout(errors, bias) / (n - 1));
  const line = fittedLine(reference, estimate);
  if (!(line.sxx > 0)) return refuse('no-spread', { field: 'estimate' });
  if (!(line.syy > 0)) return refuse('no-spread', { field: 'reference' });
  if (!(sep > 0)) return refuse('no-spread', { field: 'errors' });
  if (!(line.residualVariance > 0)) return refuse('no-spread', { field: 'estimate' });
  let squares = 0;
  for (const error of errors) squares += error * error;
  const biasT = bias / (sep / Math.sqrt(n));
  const slopeT = (line.slope - 1) / line.slopeStandardError;
  const jointF = (squares - line.residualSquares) / 2 / line.residualVariance;
  return finiteAnswer({
    n,
    bias,
    rmsep: Math.sqrt(squares / n),
    sep,
    meanAbsolute: errors.reduce((sum, error) => sum + Math.abs(error), 0) / n,
    largestAbsolute: errors.reduce((largest, error) => Math.max(largest, Math.abs(error)), 0),
    r: line.sxy / Math.sqrt(line.sxx) / Math.sqrt(line.syy),
    ccc: (2 * line.sxy) / (line.sxx + line.syy + n * bias * bias),
    q2: 1 - squares / line.syy,
    rpd: Math.sqrt(line.syy / (n - 1)) / sep,
    biasT,
    biasP: tTwoSidedP(biasT, n - 1),
    biasLimit: (tQuantile((1 + confidence) / 2, n - 1) * sep) / Math.sqrt(n),
    slope: line.slope,
    intercept: line.intercept,
    slopeStandardError: line.slopeStandardError,
    slopeT,
    slopeP: tTwoSidedP(slopeT, n - 2),
    jointF,
    jointP: fUpperP(jointF, 2, n - 2),
  });
}

/** Least-squares line of reference on estimate, with its sums of squares about the means. */
function fittedLine(reference: ArrayLike<number>, estimate: ArrayLike<number>) {
  const n = reference.length;
  const meanX = meanOf(estimate);
  const meanY = meanOf(reference);
  const sxx = sumOfSquaresAbout(estimate, meanX);
  const syy = sumOfSquaresAbout(reference, meanY);
  let sxy = 0;
  for (let i = 0; i < n; i++) sxy += (estimate[i]! - meanX) * (reference[i]! - meanY);
  const slope = sxy / sxx;
  let residualSquares = 0;
  for (let i = 0; i < n; i++)
    residualSquares += (reference[i]! - meanY - slope * (estimate[i]! - meanX)) ** 2;
  const residualVariance = residualSquares / (n - 2);
  return {
    sxx,
    syy,
    sxy,
    slope,
    intercept: meanY - slope * meanX,
    residualSquares,
    residualVariance,
    slopeStandardError: Math.sqrt(residualVariance / sxx),
  };
}
