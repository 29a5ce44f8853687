import { effectiveCount, lag1Autocorrelation, shrunkAutocorrelation } from './bias.ts';
import { meanOf, sumOfSquaresAbout } from './descriptive.ts';
import { tQuantile } from './distributions.ts';
import { finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import { notEnough, refuse } from './result.ts';
import type { Result } from './result.ts';

/**
 * When the drifting error reaches the allowed error on its side. `crossesAt` (UTC ms) of the fitted line, null when the
 * line does not go there or already is beyond; `notBefore`, `notAfter` the ends of the 95 % interval, null when that end
 * is open; `slopePerDay` with its interval; `level` the allowed error with the sign of the drift.
 */
export type DriftForecast = {
  n: number;
  level: number;
  slopePerDay: number;
  slopeLow: number;
  slopeHigh: number;
  now: number;
  beyond: boolean;
  crossesAt: number | null;
  notBefore: number | null;
  notAfter: number | null;
};

const dayMs = 86_400_000;

/** Fewest errors since onset for a forecast. */
export const fewestForForecast = 6;

/**
 * Straight line through the errors since the onset of a confirmed signal (at least 6; `at` UTC ms ascending), carried on
 * from `nowMs`: where it, and where its confidence band, meet the allowed error `allowed` > 0. Autocorrelation left about
 * the line widens the band by the effective n. Meant only while a confirmed signal stands: tested daily a trend test finds
 * something in every healthy year. Refuses `not-enough-data`, `no-spread` (one instant), `not-sorted`, unsound input.
 * Source: confidence band of a line and its inversion (Draper & Smith, Applied Regression Analysis, ch. 1 and 3).
 */
export function forecastCrossing(
  at: ArrayLike<number>,
  errors: ArrayLike<number>,
  options: { allowed: number; nowMs: number; confidence?: number },
): Result<DriftForecast> {
  const { allowed, nowMs, confidence = 0.95 } = options;
  const refusal =
    optionRefusal('allowed', allowed, Number.MIN_VALUE, Number.MAX_VALUE) ??
    optionRefusal('nowMs', nowMs, -8.64e15, 8.64e15) ??
    optionRefusal('confidence', confidence, 0, 1, 'open') ??
    vectorRefusal('at', at, fewestForForecast) ??
    vectorRefusal('errors', errors, fewestForForecast, at.length);
  if (refusal) return refusal;
  for (let i = 1; i < at.length; i++) if (at[i]! < at[i - 1]!) return refuse('not-sorted', { field: 'at' });
  const line = fittedDrift(at, errors);
  if (!(line.sxx > 0)) return refuse('no-spread', { field: 'at' });
  const freedom = line.effectiveN - 2;
  if (!(freedom > 0.5)) return notEnough('errors', at.length + 1, at.length);
  const t = tQuantile((1 + confidence) / 2, freedom);
  // Variance of the line at x days from the centre: v (1/n + x²/Sxx), v widened by what autocorrelation takes away.
  const variance = (line.residualVariance * line.n) / line.effectiveN;
  const nowDays = (nowMs - line.centreAt) / dayMs;
  const now = line.mean + line.slope * nowDays;
  const level = line.mean < 0 ? -allowed : allowed;
  const toward = Math.sign(level);
  const reach = t * Math.sqrt(variance / line.sxx);
  const side = (edge: 1 | -1) => firstReach(line, edge, t * t * variance, level, nowDays);
  const toMs = (days: number | null) => (days === null ? null : line.centreAt + days * dayMs);
  const beyond = toward * now >= allowed;
  const crossing = line.slope * toward > 0 && !beyond ? (level - line.mean) / line.slope : null;
  return finiteAnswer({
    n: line.n,
    level,
    slopePerDay: line.slope,
    slopeLow: line.slope - reach,
    slopeHigh: line.slope + reach,
    now,
    beyond,
    crossesAt: beyond ? null : toMs(crossing),
    notBefore: beyond ? null : toMs(side(1)),
    notAfter: beyond ? null : toMs(side(-1)),
  });
}

type FittedDrift = {
  n: number;
  effectiveN: number;
  centreAt: number;
  mean: number;
  slope: number;
  sxx: number;
  residualVariance: number;
};

function fittedDrift(at: ArrayLike<number>, errors: ArrayLike<number>): FittedDrift {
  const n = at.length;
  const centreAt = meanOf(at);
  const days = Float64Array.from(at, (value) => (value - centreAt) / dayMs);
  const mean = meanOf(errors);
  const sxx = sumOfSquaresAbout(days, 0);
  let sxy = 0;
  for (let i = 0; i < n; i++) sxy += days[i]! * (errors[i]! - mean);
  const slope = sxx > 0 ? sxy / sxx : 0;
  const residuals = Float64Array.from(errors, (error, i) => error - mean - slope * days[i]!);
  const correlation = lag1Autocorrelation(residuals);
  const phi = shrunkAutocorrelation(n, correlation.ok ? correlation.r1 : 0);
  return {
    n,
    effectiveN: effectiveCount(n, phi),
    centreAt,
    mean,
    slope,
    sxx,
    residualVariance: residuals.reduce((sum, value) => sum + value * value, 0) / (n - 2),
  };
}

/**
 * First day from now on at which one edge of the band reaches the level, null when it never does. With g the line's
 * distance beyond the level and w the half width, the near edge (1) is where g + w = 0, the far one (−1) where g − w = 0:
 * the roots of g² = w² with g ≤ 0 and g ≥ 0.
 */
function firstReach(
  line: FittedDrift,
  edge: 1 | -1,
  t2v: number,
  level: number,
  nowDays: number,
): number | null {
  const { n, sxx, mean, slope } = line;
  const beyond = (x: number) => Math.sign(level) * (mean + slope * x - level);
  const halfWidth = (x: number) => Math.sqrt(t2v * (1 / n + (x * x) / sxx));
  if (beyond(nowDays) + edge * halfWidth(nowDays) >= 0) return nowDays;
  const away = mean - level;
  const roots = realRoots(slope * slope - t2v / sxx, 2 * slope * away, away * away - t2v / n);
  const reached = roots.filter((x) => x >= nowDays && edge * beyond(x) <= 0);
  return reached.length > 0 ? Math.min(...reached) : null;
}

function realRoots(a: number, b: number, c: number): number[] {
  if (a === 0) return b === 0 ? [] : [-c / b];
  const discriminant = b * b - 4 * a * c;
  if (discriminant < 0) return [];
  const q = -0.5 * (b + (b < 0 ? -1 : 1) * Math.sqrt(discriminant));
  return q === 0 ? [0] : [q / a, c / q];
}
