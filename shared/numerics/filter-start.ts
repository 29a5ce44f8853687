import { Matrix } from 'ml-matrix';
import { attempt } from './attempt.ts';
import { readColumn, readSemidefinite, rowsOf, solveFor } from './linear-algebra.ts';
import { dlyap } from './lyapunov.ts';
import type { Result } from './result.ts';
import { readModel } from './state-space.ts';
import type { ModelRows, Rows } from './state-space.ts';

/**
 * Filter start without prior knowledge, for a stable discrete model: the state in which it rests under the constant input
 * `u` (p), x0 = (I − A)⁻¹B u, and the stationary covariance P0 = A P0 Aᵀ + Q. Refuses `unstable` (A) for a model with a
 * mode that does not decay.
 */
export function stationaryStart(
  model: ModelRows,
  noise: { Q: Rows },
  u: number[],
): Result<{ x0: number[]; P0: number[][] }> {
  return attempt(() => {
    const M = readModel(model);
    const P0 = dlyap(M.A, readSemidefinite(noise?.Q, 'Q', M.n));
    const drive = M.B.mmul(readColumn(u, 'u', M.p));
    const x0 = solveFor(Matrix.sub(Matrix.eye(M.n), M.A), drive, 'A').to1DArray();
    return { x0, P0: rowsOf(P0) };
  });
}
