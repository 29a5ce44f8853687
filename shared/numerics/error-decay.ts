import { Matrix } from 'ml-matrix';
import { attempt, giveUp } from './attempt.ts';
import {
  eigenvaluesOf,
  oneNorm,
  readColumn,
  readNumber,
  readSquare,
  spectralRadius,
} from './linear-algebra.ts';
import { dlyap } from './lyapunov.ts';
import { timeConstantOf } from './observability.ts';
import type { Result } from './result.ts';
import { readDomain } from './state-space.ts';
import type { Rows, TimeDomain } from './state-space.ts';

/** Longest decay that is simulated, steps. */
const longestDecay = 2_000_000;

/** ‖Mᵏ e₀‖₂ for k = 0 … `steps`: the error of a linear observer with error matrix M (n×n) after k steps. */
export function errorNorms(M: Rows, initialError: number[], steps: number): Result<{ norms: number[] }> {
  return attempt(() => {
    const matrix = readSquare(M, 'M');
    let e = readColumn(initialError, 'initialError', matrix.rows);
    if (!Number.isInteger(steps) || steps < 0 || steps > longestDecay) {
      return giveUp('out-of-range', { field: 'steps', figure: steps });
    }
    const norms = [e.norm('frobenius')];
    for (let k = 0; k < steps; k++) {
      e = matrix.mmul(e);
      norms.push(e.norm('frobenius'));
    }
    return { norms };
  });
}

/**
 * First step from which on ‖Mᵏ e₀‖ stays within `fraction` of ‖e₀‖ for good. With X = Σ (Mᵏ)ᵀMᵏ the value eᵀXe bounds
 * every later ‖e‖², so the simulation knows when it may stop even where the norm first grows. Refuses `unstable`.
 */
export function settlingSteps(M: Rows, initialError: number[], fraction = 0.02): Result<{ steps: number }> {
  return attempt(() => {
    const matrix = readSquare(M, 'M');
    const e0 = readColumn(initialError, 'initialError', matrix.rows);
    return { steps: settle(matrix, e0, readNumber(fraction, 'fraction')) };
  });
}

/** {@link settlingSteps} on matrices. Throws `Refused`. */
export function settle(M: Matrix, initialError: Matrix, fraction: number): number {
  const radius = spectralRadius(M, 'M');
  if (radius >= 1) return giveUp('unstable', { field: 'M', figure: radius });
  if (!(fraction > 0)) return giveUp('out-of-range', { field: 'fraction', figure: fraction });
  const X = dlyap(M.transpose(), Matrix.eye(M.rows));
  const limit = (fraction * initialError.norm('frobenius')) ** 2;
  let e = initialError;
  let settled = 0;
  for (let k = 0; k <= longestDecay; k++) {
    if (e.dot(e) > limit) settled = k + 1;
    else if (e.dot(X.mmul(e)) <= limit) return settled;
    e = M.mmul(e);
  }
  return giveUp('not-converged', { field: 'M', figure: radius });
}

/**
 * Time after which the slowest mode alone has decayed to `fraction`: τ ln(1/fraction), for eigenvalues of a continuous
 * or discrete error matrix. A lower bound for a single mode only: equal modes and growing transients take longer, see
 * {@link settlingSteps}. Refuses `unstable`.
 */
export function dominantSettling(
  M: Rows,
  time: TimeDomain,
  fraction = 0.02,
): Result<{ timeConstant: number; settling: number }> {
  return attempt(() => {
    const matrix = readSquare(M, 'M');
    const domain = readDomain(time);
    const constants = eigenvaluesOf(matrix, 'M').map((e) => timeConstantOf(e, domain, oneNorm(matrix)));
    if (!(readNumber(fraction, 'fraction') > 0))
      return giveUp('out-of-range', { field: 'fraction', figure: fraction });
    if (constants.includes(null)) return giveUp('unstable', { field: 'M' });
    const timeConstant = Math.max(...constants.map(Number));
    return { timeConstant, settling: timeConstant * Math.log(1 / fraction) };
  });
}
