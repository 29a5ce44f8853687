import { meanOf, sumOfSquaresAbout } from './descriptive.ts';
import { tQuantile } from './distributions.ts';
import { finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import { refuse } from './result.ts';
import type { Result } from './result.ts';

/** A Deming line y = intercept + slope · x with jackknife standard errors and t intervals on n − 2 degrees of freedom. */
export type DemingLine = {
  n: number;
  slope: number;
  intercept: number;
  slopeStandardError: number;
  interceptStandardError: number;
  slopeLow: number;
  slopeHigh: number;
  interceptLow: number;
  interceptHigh: number;
};

/**
 * Deming regression of at least four pairs where both sides carry error. `varianceRatio` is the error variance of x over
 * that of y (4 where x is twice as noisy; 1 is orthogonal regression): some texts define it the other way round. Refuses
 * `no-spread` naming the constant side, `cannot-tell` when x and y are uncorrelated, and unsound input.
 * Source: Deming (1943); Linnet, Clinical Chemistry 39 (1993) for the jackknife.
 */
export function demingRegression(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  options: { varianceRatio: number; confidence?: number },
): Result<DemingLine> {
  const { varianceRatio, confidence = 0.95 } = options;
  const refusal =
    optionRefusal('varianceRatio', varianceRatio, 1e-12, 1e12) ??
    optionRefusal('confidence', confidence, 0, 1, 'open') ??
    vectorRefusal('x', x, 4) ??
    vectorRefusal('y', y, 4, x.length);
  if (refusal) return refusal;
  const line = demingLine(x, y, varianceRatio);
  if (typeof line === 'string')
    return line === 'sxy' ? refuse('cannot-tell') : refuse('no-spread', { field: line });
  const n = x.length;
  const slopes = new Float64Array(n);
  const intercepts = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const left = demingLine(without(x, i), without(y, i), varianceRatio);
    if (typeof left === 'string') return refuse('cannot-tell', { field: left });
    slopes[i] = n * line.slope - (n - 1) * left.slope;
    intercepts[i] = n * line.intercept - (n - 1) * left.intercept;
  }
  const slopeStandardError = Math.sqrt(sumOfSquaresAbout(slopes, meanOf(slopes)) / (n - 1) / n);
  const interceptStandardError = Math.sqrt(sumOfSquaresAbout(intercepts, meanOf(intercepts)) / (n - 1) / n);
  const t = tQuantile((1 + confidence) / 2, n - 2);
  return finiteAnswer({
    n,
    ...line,
    slopeStandardError,
    interceptStandardError,
    slopeLow: line.slope - t * slopeStandardError,
    slopeHigh: line.slope + t * slopeStandardError,
    interceptLow: line.intercept - t * interceptStandardError,
    interceptHigh: line.intercept + t * interceptStandardError,
  });
}

/**
 * The Deming line of checked pairs alone (at least two), or the name of what has no spread ('x', 'y') or is zero ('sxy');
 * arguments as {@link demingRegression}.
 */
export function demingLine(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  varianceRatio: number,
): { slope: number; intercept: number } | 'x' | 'y' | 'sxy' {
  const meanX = meanOf(x);
  const meanY = meanOf(y);
  const sxx = sumOfSquaresAbout(x, meanX);
  const syy = sumOfSquaresAbout(y, meanY);
  if (!(sxx > 0)) return 'x';
  if (!(syy > 0)) return 'y';
  let sxy = 0;
  for (let i = 0; i < x.length; i++) sxy += (x[i]! - meanX) * (y[i]! - meanY);
  if (sxy === 0) return 'sxy';
  const yOverX = 1 / varianceRatio;
  const difference = syy - yOverX * sxx;
  const root = Math.hypot(difference, 2 * Math.sqrt(yOverX) * sxy);
  // Of the two equal forms of the root, the one that does not subtract nearly equal numbers.
  const slope = difference >= 0 ? (difference + root) / (2 * sxy) : (2 * yOverX * sxy) / (root - difference);
  return { slope, intercept: meanY - slope * meanX };
}

function without(values: ArrayLike<number>, index: number): Float64Array {
  const left = new Float64Array(values.length - 1);
  for (let i = 0, k = 0; i < values.length; i++) if (i !== index) left[k++] = values[i]!;
  return left;
}
