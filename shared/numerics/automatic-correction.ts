import { finiteAnswer, firstRefusal, countRefusal, optionRefusal } from './input-checks.ts';
import { refuse } from './result.ts';
import type { Refusal, Result } from './result.ts';

/** SD of the residuals and RMSEP of the revision in force, which the clamps are multiples of. */
export type ClampLimits = { residualSd: number; rmsep: number };

/**
 * A correction after its clamps. `step` what was done of the `wanted` step; `needsApprover` when more than one residual SD
 * was wanted (automatic mode does one SD of it); `level` of the cumulative correction: `amber` from 2 RMSEP, `stop` from
 * 3 RMSEP, where it is held and the model is for review.
 */
export type ClampedCorrection = {
  correction: number;
  step: number;
  wanted: number;
  needsApprover: boolean;
  level: 'normal' | 'amber' | 'stop';
};

/** Factor of a per-sample correction unless the owner chose another; the largest where a closed loop uses the estimate. */
export const usualLambda = 0.1;

/** Samples by which the mean since onset is shrunk towards nothing: n/(n + 8). */
const shrinkage = 8;

/**
 * Automatic mode: on a confirmed signal the correction moves once by −(mean corrected error since onset) × n/(n + 8),
 * clamped; the caller restarts the sums. Refuses unsound input.
 */
export function automaticCorrection(
  correction: number,
  signal: { meanSinceOnset: number; countSinceOnset: number },
  limits: ClampLimits,
): Result<ClampedCorrection> {
  const refusal = firstRefusal(
    optionRefusal('meanSinceOnset', signal.meanSinceOnset, -Number.MAX_VALUE, Number.MAX_VALUE),
    countRefusal('countSinceOnset', signal.countSinceOnset, 1, 1e9),
  );
  if (refusal) return refusal;
  const share = signal.countSinceOnset / (signal.countSinceOnset + shrinkage);
  return clampedCorrection(correction, -signal.meanSinceOnset * share, limits);
}

/**
 * Per-sample mode, by the owner's choice only: c ← c − λ (raw at takenAt + c now − reference), clamped. `lambda` in
 * (0, 1], at most 0.1 where a closed loop uses the estimate. With c now in it any delay of the result is harmless; with
 * c as it was at takenAt it would diverge beyond {@link delayedLambdaLimit}. Refuses `out-of-range`, unsound input.
 */
export function perSampleCorrection(
  correction: number,
  sample: { rawAtTaken: number; reference: number },
  options: { lambda?: number; closedLoop: boolean },
  limits: ClampLimits,
): Result<ClampedCorrection> {
  const lambda = options.lambda ?? usualLambda;
  const refusal = firstRefusal(
    optionRefusal('lambda', lambda, Number.MIN_VALUE, options.closedLoop ? usualLambda : 1),
    optionRefusal('rawAtTaken', sample.rawAtTaken, -Number.MAX_VALUE, Number.MAX_VALUE),
    optionRefusal('reference', sample.reference, -Number.MAX_VALUE, Number.MAX_VALUE),
  );
  if (refusal) return refusal;
  return clampedCorrection(correction, -lambda * (sample.rawAtTaken + correction - sample.reference), limits);
}

/**
 * Clamps a wanted step and the correction that it leads to: at most one residual SD at once, at most 3 RMSEP in all (a
 * correction already beyond may come back, never go further out). Refuses unsound input.
 */
export function clampedCorrection(
  correction: number,
  wanted: number,
  limits: ClampLimits,
): Result<ClampedCorrection> {
  const refusal = clampRefusal(correction, wanted, limits);
  if (refusal) return refusal;
  const bounded = Math.min(Math.max(wanted, -limits.residualSd), limits.residualSd);
  const edge = Math.max(3 * limits.rmsep, Math.abs(correction));
  const next = Math.min(Math.max(correction + bounded, -edge), edge);
  const size = Math.abs(next);
  return finiteAnswer({
    correction: next,
    step: next - correction,
    wanted,
    needsApprover: Math.abs(wanted) > limits.residualSd,
    level: size >= 3 * limits.rmsep ? 'stop' : size >= 2 * limits.rmsep ? 'amber' : 'normal',
  });
}

/**
 * Largest λ at which c[k+1] = c[k] − λ (error of d samples ago) still settles: 2 sin(π/(4d + 2)), 2 without delay.
 * Source: characteristic roots of z^(d+1) − z^d + λ on the unit circle (Levin & May, Theor. Popul. Biol. 9, 1976).
 */
export function delayedLambdaLimit(delaySamples: number): Result<{ lambda: number }> {
  const refusal = countRefusal('delaySamples', delaySamples, 0, 1e6);
  return refusal ?? finiteAnswer({ lambda: 2 * Math.sin(Math.PI / (4 * delaySamples + 2)) });
}

function clampRefusal(correction: number, wanted: number, limits: ClampLimits): Refusal | null {
  return (
    firstRefusal(
      optionRefusal('correction', correction, -Number.MAX_VALUE, Number.MAX_VALUE),
      optionRefusal('residualSd', limits.residualSd, Number.MIN_VALUE, Number.MAX_VALUE),
      optionRefusal('rmsep', limits.rmsep, Number.MIN_VALUE, Number.MAX_VALUE),
    ) ?? (Number.isFinite(wanted) ? null : refuse('out-of-range', { field: 'wanted' }))
  );
}
