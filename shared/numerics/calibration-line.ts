import { meanOf, sumOfSquaresAbout } from './descriptive.ts';
import { tQuantile } from './distributions.ts';
import { countRefusal, finiteAnswer, firstRefusal, optionRefusal, vectorRefusal } from './input-checks.ts';
import { refuse } from './result.ts';
import type { Refusal, Result } from './result.ts';

/** A least-squares straight line with what its intervals need: residual SD (n − 2), mean and sum of squares of x. */
export type CalibrationLine = {
  n: number;
  slope: number;
  intercept: number;
  residualSd: number;
  meanX: number;
  meanY: number;
  sxx: number;
};

/** A fitted value with the interval of the mean response and that of a new result. */
export type LineIntervals = {
  fit: number;
  meanLow: number;
  meanHigh: number;
  newLow: number;
  newHigh: number;
};

/**
 * x read back from a measured y with its interval by inversion (Fieller; not symmetric) and the approximate Wald
 * standard error; `g` = t² s²/(slope² Sxx): the interval exists while g < 1.
 */
export type InverseInterval = { x: number; low: number; high: number; g: number; standardError: number };

/** Fits y = intercept + slope · x to at least three pairs. Refuses `no-spread` for constant x, and unsound input. */
export function fitCalibrationLine(x: ArrayLike<number>, y: ArrayLike<number>): Result<CalibrationLine> {
  const refusal = vectorRefusal('x', x, 3) ?? vectorRefusal('y', y, 3, x.length);
  if (refusal) return refusal;
  const meanX = meanOf(x);
  const meanY = meanOf(y);
  const sxx = sumOfSquaresAbout(x, meanX);
  if (!(sxx > 0)) return refuse('no-spread', { field: 'x' });
  let sxy = 0;
  for (let i = 0; i < x.length; i++) sxy += (x[i]! - meanX) * (y[i]! - meanY);
  const slope = sxy / sxx;
  let squares = 0;
  for (let i = 0; i < x.length; i++) squares += (y[i]! - meanY - slope * (x[i]! - meanX)) ** 2;
  return finiteAnswer({
    n: x.length,
    slope,
    intercept: meanY - slope * meanX,
    residualSd: Math.sqrt(squares / (x.length - 2)),
    meanX,
    meanY,
    sxx,
  });
}

/** Intervals at `x` for the mean response and for the mean of `replicates` new results. Source: Draper & Smith, ch. 3. */
export function lineIntervalsAt(
  line: CalibrationLine,
  x: number,
  options: { confidence?: number; replicates?: number } = {},
): Result<LineIntervals> {
  const { confidence = 0.95, replicates = 1 } = options;
  const refusal =
    intervalRefusal(line, confidence, replicates) ??
    optionRefusal('x', x, -Number.MAX_VALUE, Number.MAX_VALUE);
  if (refusal) return refusal;
  const t = tQuantile((1 + confidence) / 2, line.n - 2);
  const share = 1 / line.n + (x - line.meanX) ** 2 / line.sxx;
  const fit = line.meanY + line.slope * (x - line.meanX);
  const mean = t * line.residualSd * Math.sqrt(share);
  const single = t * line.residualSd * Math.sqrt(share + 1 / replicates);
  return finiteAnswer({
    fit,
    meanLow: fit - mean,
    meanHigh: fit + mean,
    newLow: fit - single,
    newHigh: fit + single,
  });
}

/**
 * x for a measured `y` (mean of `replicates` results) with its inversion interval. Refuses `cannot-tell` when the slope
 * does not differ from zero at this confidence (`figure`: g ≥ 1). Source: Graybill & Iyer (1994); Draper & Smith, ch. 3.
 */
export function inverseIntervalAt(
  line: CalibrationLine,
  y: number,
  options: { confidence?: number; replicates?: number } = {},
): Result<InverseInterval> {
  const { confidence = 0.95, replicates = 1 } = options;
  const refusal =
    intervalRefusal(line, confidence, replicates) ??
    optionRefusal('y', y, -Number.MAX_VALUE, Number.MAX_VALUE);
  if (refusal) return refusal;
  const { n, slope, residualSd, meanX, meanY, sxx } = line;
  const t = tQuantile((1 + confidence) / 2, n - 2);
  const g = (t * residualSd) ** 2 / (slope * slope * sxx);
  if (!(g < 1)) return refuse('cannot-tell', { field: 'slope', figure: Number.isFinite(g) ? g : undefined });
  const away = (y - meanY) / slope;
  const spread = (t * residualSd) / Math.abs(slope);
  const reach = spread * Math.sqrt((1 / replicates + 1 / n) * (1 - g) + (away * away) / sxx);
  return finiteAnswer({
    x: meanX + away,
    low: meanX + (away - reach) / (1 - g),
    high: meanX + (away + reach) / (1 - g),
    g,
    standardError: (residualSd / Math.abs(slope)) * Math.sqrt(1 / replicates + 1 / n + (away * away) / sxx),
  });
}

function intervalRefusal(line: CalibrationLine, confidence: number, replicates: number): Refusal | null {
  return firstRefusal(
    countRefusal('n', line.n, 3, 1e12),
    vectorRefusal('line', [line.slope, line.residualSd, line.meanX, line.meanY, line.sxx], 5),
    optionRefusal('sxx', line.sxx, Number.MIN_VALUE, Number.MAX_VALUE),
    optionRefusal('confidence', confidence, 0, 1, 'open'),
    countRefusal('replicates', replicates, 1, 1e9),
  );
}
