import { finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import type { Result } from './result.ts';

/** Where recursive least squares stands: parameters (length p) and their covariance over the noise variance (p×p, by rows). */
export type RecursiveFit = { parameters: Float64Array; covariance: Float64Array };

/** Start from `parameters` with a covariance of `variance` times the unit matrix: large means that nothing is known. */
export function recursiveStart(parameters: ArrayLike<number>, variance: number): RecursiveFit {
  const p = parameters.length;
  const covariance = new Float64Array(p * p);
  for (let j = 0; j < p; j++) covariance[j * p + j] = variance;
  return { parameters: Float64Array.from(parameters), covariance };
}

/**
 * Takes one row x (length p) and its y: gain P x/(λ + xᵀPx), parameters by the error before the update (`error` = y −
 * xᵀθ), P ← (P − gain xᵀP)/λ kept symmetric. `forgetting` λ in (0, 1]: memory of 1/(1 − λ) rows; 1 forgets nothing.
 * Refuses `wrong-shape`, `non-finite-input`, `out-of-range`. Source: Ljung, System Identification (1999), ch. 11.
 */
export function recursiveStep(
  fit: RecursiveFit,
  x: ArrayLike<number>,
  y: number,
  forgetting: number,
): Result<RecursiveFit & { error: number }> {
  const broken = vectorRefusal('parameters', fit.parameters, 1);
  if (broken) return broken;
  const p = fit.parameters.length;
  const refusal =
    vectorRefusal('covariance', fit.covariance, 1, p * p) ??
    vectorRefusal('x', x, 1, p) ??
    optionRefusal('y', y, -Number.MAX_VALUE, Number.MAX_VALUE) ??
    optionRefusal('forgetting', forgetting, Number.MIN_VALUE, 1);
  if (refusal) return refusal;
  const projected = new Float64Array(p);
  let spread = forgetting;
  let error = y;
  for (let i = 0; i < p; i++) {
    for (let j = 0; j < p; j++) projected[i]! += fit.covariance[i * p + j]! * x[j]!;
    spread += x[i]! * projected[i]!;
    error -= x[i]! * fit.parameters[i]!;
  }
  const parameters = fit.parameters.map((value, i) => value + (projected[i]! / spread) * error);
  const covariance = new Float64Array(p * p);
  for (let i = 0; i < p; i++) {
    for (let j = 0; j <= i; j++) {
      const value = (fit.covariance[i * p + j]! - (projected[i]! * projected[j]!) / spread) / forgetting;
      covariance[i * p + j] = value;
      covariance[j * p + i] = value;
    }
  }
  return finiteAnswer({ parameters, covariance, error });
}
