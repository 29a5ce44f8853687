import { finiteAnswer, firstRefusal, optionRefusal, vectorRefusal } from './input-checks.ts';
import { meanOf } from './descriptive.ts';
import { refuse } from './result.ts';
import type { Refusal, Result } from './result.ts';

/** EWMA design: `sd` of a single error, `lambda` in (0, 1], `target` (default 0, the unit of the errors), `width` in SDs of z. */
export type EwmaDesign = { sd: number; lambda: number; target?: number; width: number };

/** One point of an EWMA chart with its exact limits; `signal` when z lies strictly beyond them. */
export type EwmaPoint = { z: number; lower: number; upper: number; signal: boolean };

/** Where an EWMA stands: errors seen so far and the last z. */
export type EwmaState = { n: number; z: number };

/** An EWMA before its first error: z at the target. */
export function ewmaStart(design: EwmaDesign): EwmaState {
  return { n: 0, z: design.target ?? 0 };
}

/**
 * Takes one error into an EWMA: z ← λ e + (1 − λ) z with limits
 * target ± width · sd · √(λ/(2 − λ) · (1 − (1 − λ)^(2n))). The design is not checked here.
 * Source: Roberts, Technometrics 1 (1959); NIST/SEMATECH e-Handbook 6.3.2.4.
 */
export function ewmaStep(
  state: EwmaState,
  error: number,
  design: EwmaDesign,
): { state: EwmaState; point: EwmaPoint } {
  const { sd, lambda, target = 0, width } = design;
  const n = state.n + 1;
  const z = lambda * error + (1 - lambda) * state.z;
  const reach = width * sd * Math.sqrt((lambda / (2 - lambda)) * (1 - (1 - lambda) ** (2 * n)));
  const lower = target - reach;
  const upper = target + reach;
  return { state: { n, z }, point: { z, lower, upper, signal: z < lower || z > upper } };
}

/** Checks an EWMA design; null when sound. */
export function ewmaDesignRefusal(design: EwmaDesign): Refusal | null {
  return firstRefusal(
    optionRefusal('sd', design.sd, Number.MIN_VALUE, Number.MAX_VALUE),
    optionRefusal('lambda', design.lambda, Number.MIN_VALUE, 1),
    optionRefusal('target', design.target ?? 0, -Number.MAX_VALUE, Number.MAX_VALUE),
    optionRefusal('width', design.width, Number.MIN_VALUE, Number.MAX_VALUE),
  );
}

/** EWMA chart of errors in time order (at least one). `firstSignal`: index of the first point beyond, or null. */
export function ewmaChart(
  errors: ArrayLike<number>,
  design: EwmaDesign,
): Result<{ points: EwmaPoint[]; firstSignal: number | null }> {
  const refusal = ewmaDesignRefusal(design) ?? vectorRefusal('errors', errors, 1);
  if (refusal) return refusal;
  const points: EwmaPoint[] = [];
  let firstSignal: number | null = null;
  let state = ewmaStart(design);
  for (let i = 0; i < errors.length; i++) {
    const step = ewmaStep(state, errors[i]!, design);
    state = step.state;
    points.push(step.point);
    if (step.point.signal) firstSignal ??= i;
    if (!Number.isFinite(state.z)) return refuse('out-of-range', { field: 'errors', figure: errors[i] });
  }
  const last = points[points.length - 1]!;
  if (!Number.isFinite(last.upper - last.lower))
    return refuse('out-of-range', { field: 'width', figure: design.width });
  return { ok: true, points, firstSignal };
}

/** CUSUM design: `sd` of a single error; reference value `k` and decision interval `h` in SDs; `target` default 0. */
export type CusumDesign = { sd: number; k: number; h: number; target?: number };

/**
 * Where a two-sided CUSUM stands: errors seen, the two sums (SDs, both ≥ 0), and the index of the error with which each
 * sum last left zero (equal to n while the sum is zero).
 */
export type CusumState = { n: number; high: number; low: number; highSince: number; lowSince: number };

/**
 * One point of a CUSUM: the sums in SDs; `signal` 'high' (the estimate reads high) or 'low' when one exceeds h (the
 * larger, where both do); `onset`: index of the error with which the signalling sum left zero, the estimate of when the
 * shift began.
 */
export type CusumPoint = { high: number; low: number; signal: 'high' | 'low' | null; onset: number | null };

/** A CUSUM before its first error, or after an event: both sums zero, counting from error `n`. */
export function cusumStart(n = 0): CusumState {
  return { n, high: 0, low: 0, highSince: n, lowSince: n };
}

/**
 * Takes one error into both sums: C⁺ ← max(0, C⁺ + z − k), C⁻ ← max(0, C⁻ − z − k) with z = (e − target)/sd. No reset
 * after a signal. The design is not checked here. Source: Page, Biometrika 41 (1954); Montgomery, SQC, ch. 9.
 */
export function cusumStep(
  state: CusumState,
  error: number,
  design: CusumDesign,
): { state: CusumState; point: CusumPoint } {
  const z = (error - (design.target ?? 0)) / design.sd;
  const high = Math.max(0, state.high + z - design.k);
  const low = Math.max(0, state.low - z - design.k);
  const n = state.n + 1;
  const highSince = high > 0 ? state.highSince : n;
  const lowSince = low > 0 ? state.lowSince : n;
  const signal = high > design.h && high >= low ? 'high' : low > design.h ? 'low' : null;
  const onset = signal === 'high' ? highSince : signal === 'low' ? lowSince : null;
  return { state: { n, high, low, highSince, lowSince }, point: { high, low, signal, onset } };
}

/** Checks a CUSUM design; null when sound. */
export function cusumDesignRefusal(design: CusumDesign): Refusal | null {
  return firstRefusal(
    optionRefusal('sd', design.sd, Number.MIN_VALUE, Number.MAX_VALUE),
    optionRefusal('k', design.k, 0, Number.MAX_VALUE),
    optionRefusal('h', design.h, Number.MIN_VALUE, Number.MAX_VALUE),
    optionRefusal('target', design.target ?? 0, -Number.MAX_VALUE, Number.MAX_VALUE),
  );
}

/** Two-sided tabular CUSUM of errors in time order (at least one). `firstSignal`: index of the first signal, or null. */
export function cusumChart(
  errors: ArrayLike<number>,
  design: CusumDesign,
): Result<{ points: CusumPoint[]; firstSignal: number | null }> {
  const refusal = cusumDesignRefusal(design) ?? vectorRefusal('errors', errors, 1);
  if (refusal) return refusal;
  const points: CusumPoint[] = [];
  let firstSignal: number | null = null;
  let state = cusumStart();
  for (let i = 0; i < errors.length; i++) {
    const step = cusumStep(state, errors[i]!, design);
    state = step.state;
    points.push(step.point);
    if (step.point.signal) firstSignal ??= i;
    if (!Number.isFinite(state.high + state.low)) {
      return refuse('out-of-range', { field: 'errors', figure: errors[i] });
    }
  }
  return { ok: true, points, firstSignal };
}

/**
 * Limits of an individuals and moving range chart, in the unit of the values: centre line, mean moving range,
 * σ = MR̄/d₂, limits at ± 3 σ, and the upper limit D₄ MR̄ of the moving range (its lower one is 0).
 */
export type IndividualsLimits = {
  centre: number;
  meanMovingRange: number;
  sigma: number;
  lower: number;
  upper: number;
  movingRangeUpper: number;
};

/** One point of an individuals chart: `movingRange` null for the first. */
export type IndividualsPoint = {
  value: number;
  movingRange: number | null;
  signal: boolean;
  rangeSignal: boolean;
};

/** d₂ = 2/√π and D₄ = 1 + 3 d₃/d₂ for two neighbouring values. */
export const movingRangeConstants = {
  d2: 2 / Math.sqrt(Math.PI),
  D4: 1 + (3 * Math.sqrt(2 - 4 / Math.PI)) / (2 / Math.sqrt(Math.PI)),
};

/**
 * Limits from at least two baseline values. `constants` may be the rounded ones of a table (1.128, 3.267). σ from moving
 * ranges understates autocorrelated values by √(1 − φ). Refuses `no-spread` when all values are equal.
 * Source: NIST/SEMATECH e-Handbook 6.3.2.2.
 */
export function individualsLimits(
  values: ArrayLike<number>,
  constants: { d2: number; D4: number } = movingRangeConstants,
): Result<IndividualsLimits> {
  const refusal = firstRefusal(
    vectorRefusal('values', values, 2),
    optionRefusal('d2', constants.d2, Number.MIN_VALUE, Number.MAX_VALUE),
    optionRefusal('D4', constants.D4, 0, Number.MAX_VALUE),
  );
  if (refusal) return refusal;
  let ranges = 0;
  for (let i = 1; i < values.length; i++) ranges += Math.abs(values[i]! - values[i - 1]!);
  const meanMovingRange = ranges / (values.length - 1);
  if (!(meanMovingRange > 0)) return refuse('no-spread', { field: 'values' });
  const centre = meanOf(values);
  const sigma = meanMovingRange / constants.d2;
  return finiteAnswer({
    centre,
    meanMovingRange,
    sigma,
    lower: centre - 3 * sigma,
    upper: centre + 3 * sigma,
    movingRangeUpper: constants.D4 * meanMovingRange,
  });
}

/** One value on an individuals chart; `previous` null at the start. */
export function individualsStep(
  value: number,
  previous: number | null,
  limits: IndividualsLimits,
): IndividualsPoint {
  const movingRange = previous === null ? null : Math.abs(value - previous);
  return {
    value,
    movingRange,
    signal: value < limits.lower || value > limits.upper,
    rangeSignal: movingRange !== null && movingRange > limits.movingRangeUpper,
  };
}

/** Individuals and moving range chart of values in time order against limits from {@link individualsLimits}. */
export function individualsChart(
  values: ArrayLike<number>,
  limits: IndividualsLimits,
): Result<{ points: IndividualsPoint[] }> {
  const refusal =
    vectorRefusal('values', values, 1) ??
    vectorRefusal('limits', [limits.lower, limits.upper, limits.movingRangeUpper], 3);
  if (refusal) return refusal;
  const points = Array.from(values, (value, i) =>
    individualsStep(value, i === 0 ? null : values[i - 1]!, limits),
  );
  return finiteAnswer({ points });
}
