import { meanOf, rootMeanSquare } from './descriptive.ts';
import { finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import type { Result } from './result.ts';

/**
 * What an exponential update would have given. `correctionBefore[i]` is the correction in force when sample i was
 * taken (the first is 0), `correctedErrors[i]` = raw error i + correctionBefore[i]; `correctionAfter` stands after the
 * last sample. `rmse` and `bias` are those of the corrected errors, in their unit.
 */
export type ExponentialUpdate = {
  n: number;
  correctionBefore: Float64Array;
  correctedErrors: Float64Array;
  correctionAfter: number;
  rmse: number;
  bias: number;
};

/** One step: the correction after a sample with this raw error (estimate − reference): c ← c − λ (raw error + c). */
export function exponentialUpdateStep(correction: number, rawError: number, lambda: number): number {
  return correction - lambda * (rawError + correction);
}

/**
 * Runs the exponential bias update over raw errors (estimate − reference, at least one, in order of reporting, each
 * reported before the next sample is taken) with filter factor `lambda` in [0, 1]. Every sample is scored before it
 * updates the correction. The same as
 * b ← b + λ (reference − raw − b) with b = c. Refuses `not-enough-data`,
 * `non-finite-input`, `wrong-shape`, `out-of-range`.
 */
export function exponentialUpdate(rawErrors: ArrayLike<number>, lambda: number): Result<ExponentialUpdate> {
  const refusal = optionRefusal('lambda', lambda, 0, 1) ?? vectorRefusal('rawErrors', rawErrors, 1);
  if (refusal) return refusal;
  const n = rawErrors.length;
  const correctionBefore = new Float64Array(n);
  const correctedErrors = new Float64Array(n);
  let correction = 0;
  for (let i = 0; i < n; i++) {
    correctionBefore[i] = correction;
    correctedErrors[i] = rawErrors[i]! + correction;
    correction = exponentialUpdateStep(correction, rawErrors[i]!, lambda);
  }
  return finiteAnswer({
    n,
    correctionBefore,
    correctedErrors,
    correctionAfter: correction,
    rmse: rootMeanSquare(correctedErrors),
    bias: meanOf(correctedErrors),
  });
}
