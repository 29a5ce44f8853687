import { Matrix } from 'ml-matrix';
import { attempt, giveUp } from './attempt.ts';
import { readMatrix, readNumber, readSquare, rowsOf } from './linear-algebra.ts';
import { dlyap } from './lyapunov.ts';
import type { Result } from './result.ts';
import type { Rows } from './state-space.ts';

/**
 * Observability Gramian W = Σ (Aᵀ)ᵏ Cᵀ C Aᵏ of a stable discrete model, over all k ≥ 0 (W = Aᵀ W A + Cᵀ C) or over the
 * first `horizon` steps. xᵀ W x is the energy in the outputs that an initial state x leaves. Refuses `unstable`.
 */
export function observabilityGramian(A: Rows, C: Rows, horizon?: number): Result<{ W: number[][] }> {
  return attempt(() => {
    const a = readSquare(A, 'A');
    const c = readMatrix(C, 'C', { columns: a.rows });
    const energy = c.transpose().mmul(c);
    if (horizon === undefined) return { W: rowsOf(dlyap(a.transpose(), energy)) };
    const steps = readNumber(horizon, 'horizon');
    if (!Number.isInteger(steps) || steps < 0 || steps > 1e9)
      giveUp('out-of-range', { field: 'horizon', figure: steps });
    return { W: rowsOf(finiteSum(a, energy, steps)) };
  });
}

/** Σ (Aᵀ)ᵏ E Aᵏ over k < `steps`: W(2k) = W(k) + (Aᵏ)ᵀ W(k) Aᵏ and W(k + 1) = E + Aᵀ W(k) A, bit by bit. */
function finiteSum(A: Matrix, E: Matrix, steps: number): Matrix {
  let W = Matrix.zeros(A.rows, A.rows);
  let power = Matrix.eye(A.rows);
  for (const bit of steps.toString(2)) {
    W = Matrix.add(W, power.transpose().mmul(W).mmul(power));
    power = power.mmul(power);
    if (bit === '0') continue;
    W = Matrix.add(E, A.transpose().mmul(W).mmul(A));
    power = power.mmul(A);
  }
  return W;
}
