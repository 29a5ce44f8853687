import { fitCalibrationLine } from './calibration-line.ts';
import { meanOf, sdOf } from './descriptive.ts';
import { tQuantile } from './distributions.ts';
import { demingLine, demingRegression } from './deming.ts';
import { finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import { refuse } from './result.ts';
import type { Refusal, Result } from './result.ts';

/** What turns a raw estimate into the corrected one: corrected = offset + slope · raw. */
export type Correction = { slope: number; offset: number };

/** Leaves the raw estimate alone. */
export const noCorrection: Correction = { slope: 1, offset: 0 };

/** Candidates that need nothing but raw estimates and references, simplest first. */
export const candidateKinds = ['as-found', 'bias', 'proportional', 'linear', 'deming'] as const;
export type CandidateKind = (typeof candidateKinds)[number];

/** Counted samples in time order: raw estimate and reference of each. */
export type CalibrationSamples = { raw: ArrayLike<number>; reference: ArrayLike<number> };

/**
 * A fitted candidate: the whole correction from the raw estimate on, and for the slope candidates the slope put on the
 * corrected estimate with its 95 % interval (null for the others).
 */
export type FittedCandidate = {
  correction: Correction;
  slope: number | null;
  slopeLow: number | null;
  slopeHigh: number | null;
};

/** Fewest samples for each kind: a bias needs three, a slope needs room for an interval. */
export const fewestSamples: Record<CandidateKind, number> = {
  'as-found': 0,
  bias: 3,
  proportional: 5,
  linear: 6,
  deming: 6,
};

/** The corrected estimate of one raw estimate. */
export function applyCorrection(correction: Correction, raw: number): number {
  return correction.offset + correction.slope * raw;
}

/**
 * Fits one candidate to samples as corrected by `current`: as found leaves that correction, bias moves its offset by
 * −(mean error), proportional, linear and Deming put a slope (and an offset) on the corrected estimate.
 * `errorVarianceRatio` error variance of the estimate over that of the reference, for Deming. Refuses
 * `not-enough-data`, and as the regressions do.
 */
export function fitCandidate(
  kind: CandidateKind,
  samples: CalibrationSamples,
  current: Correction,
  errorVarianceRatio: number,
): Result<FittedCandidate> {
  const refusal = samplesRefusal(samples, current, fewestSamples[kind]);
  if (refusal) return refusal;
  const corrected = Float64Array.from(samples.raw, (raw) => applyCorrection(current, raw));
  const { reference } = samples;
  switch (kind) {
    case 'as-found':
      return flat(current);
    case 'bias': {
      const bias = meanOf(Float64Array.from(corrected, (value, i) => value - reference[i]!));
      return flat({ slope: current.slope, offset: current.offset - bias });
    }
    case 'proportional':
      return proportional(corrected, reference, current);
    case 'linear':
      return linear(corrected, reference, current);
    case 'deming':
      return deming(corrected, reference, current, errorVarianceRatio);
  }
}

/** Checks samples and the correction in force; null when sound. */
export function samplesRefusal(
  samples: CalibrationSamples,
  current: Correction,
  needed: number,
): Refusal | null {
  const { raw, reference } = samples;
  return (
    vectorRefusal('raw', raw, needed) ??
    vectorRefusal('reference', reference, needed, raw.length) ??
    optionRefusal('slope', current.slope, -1e100, 1e100) ??
    optionRefusal('offset', current.offset, -Number.MAX_VALUE, Number.MAX_VALUE)
  );
}

function flat(correction: Correction): Result<FittedCandidate> {
  return finiteAnswer({ correction, slope: null, slopeLow: null, slopeHigh: null });
}

/** A slope (and offset) on the corrected estimate, written as a correction of the raw one. */
function onTop(
  current: Correction,
  slope: number,
  offset: number,
  low: number,
  high: number,
): Result<FittedCandidate> {
  const correction = { slope: slope * current.slope, offset: offset + slope * current.offset };
  return finiteAnswer({ correction, slope, slopeLow: low, slopeHigh: high });
}

function proportional(x: Float64Array, y: ArrayLike<number>, current: Correction): Result<FittedCandidate> {
  let squares = 0;
  let products = 0;
  for (let i = 0; i < x.length; i++) {
    squares += x[i]! * x[i]!;
    products += x[i]! * y[i]!;
  }
  if (!(squares > 0)) return refuse('no-spread', { field: 'raw' });
  const slope = products / squares;
  let rest = 0;
  for (let i = 0; i < x.length; i++) rest += (y[i]! - slope * x[i]!) ** 2;
  const reach = tQuantile(0.975, x.length - 1) * Math.sqrt(rest / (x.length - 1) / squares);
  return onTop(current, slope, 0, slope - reach, slope + reach);
}

function linear(x: Float64Array, y: ArrayLike<number>, current: Correction): Result<FittedCandidate> {
  const line = fitCalibrationLine(x, y);
  if (!line.ok) return line;
  const reach = (tQuantile(0.975, line.n - 2) * line.residualSd) / Math.sqrt(line.sxx);
  return onTop(current, line.slope, line.intercept, line.slope - reach, line.slope + reach);
}

function deming(
  x: Float64Array,
  y: ArrayLike<number>,
  current: Correction,
  varianceRatio: number,
): Result<FittedCandidate> {
  const line = demingRegression(x, y, { varianceRatio });
  if (!line.ok) return line;
  return onTop(current, line.slope, line.intercept, line.slopeLow, line.slopeHigh);
}

/** As {@link fitCandidate} for checked samples, the correction alone: a Deming interval costs n lines. Null: no fit. */
export function rollingCorrection(
  kind: CandidateKind,
  samples: CalibrationSamples,
  current: Correction,
  errorVarianceRatio: number,
): Correction | null {
  if (kind !== 'deming') {
    const fitted = fitCandidate(kind, samples, current, errorVarianceRatio);
    return fitted.ok ? fitted.correction : null;
  }
  const corrected = Float64Array.from(samples.raw, (raw) => applyCorrection(current, raw));
  const line = demingLine(corrected, samples.reference, errorVarianceRatio);
  if (typeof line === 'string') return null;
  return { slope: line.slope * current.slope, offset: line.intercept + line.slope * current.offset };
}

/** Why a slope candidate is not offered at all; null when it may be tried. */
export type SlopeBar = 'closed-loop' | 'reference-spread-too-small' | 'slope-interval-includes-1';

/**
 * Bars a slope candidate: where a closed loop consumes the estimate, where SD(reference) < 3 s_lab, or where the interval
 * of the fitted slope holds 1.
 */
export function slopeBar(
  fitted: FittedCandidate,
  reference: ArrayLike<number>,
  options: { labSd: number; closedLoop: boolean },
): SlopeBar | null {
  if (fitted.slope === null) return null;
  if (options.closedLoop) return 'closed-loop';
  if (!(reference.length > 1 && sdOf(reference) >= 3 * options.labSd)) return 'reference-spread-too-small';
  return fitted.slopeLow! <= 1 && fitted.slopeHigh! >= 1 ? 'slope-interval-includes-1' : null;
}
