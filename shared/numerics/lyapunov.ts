import { Matrix } from 'ml-matrix';
import { attempt, giveUp } from './attempt.ts';
import {
  eigenvaluesOf,
  largest,
  readSquare,
  readSymmetric,
  rowsOf,
  solveFor,
  spectralRadius,
  symmetrise,
} from './linear-algebra.ts';
import type { Result } from './result.ts';
import type { Rows } from './state-space.ts';

/**
 * Stationary covariance X of x[k+1] = A x[k] + w, cov w = Q: X = A X Aᵀ + Q (A, Q n×n). Refuses `unstable`
 * (`figure`: largest eigenvalue modulus) unless all eigenvalues lie inside the unit circle.
 */
export function discreteLyapunov(A: Rows, Q: Rows): Result<{ X: number[][] }> {
  return attempt(() => {
    const a = readSquare(A, 'A');
    return { X: rowsOf(dlyap(a, readSymmetric(Q, 'Q', a.rows))) };
  });
}

/**
 * Stationary covariance X of dx/dt = A x + w, spectral density Q: A X + X Aᵀ + Q = 0 (A, Q n×n, n ≤ 20). Refuses
 * `unstable` (`figure`: largest real part) unless all eigenvalues have a negative real part.
 */
export function continuousLyapunov(A: Rows, Q: Rows): Result<{ X: number[][] }> {
  return attempt(() => {
    const a = readSquare(A, 'A');
    const q = readSymmetric(Q, 'Q', a.rows);
    const n = a.rows;
    if (n > 20) return giveUp('out-of-range', { field: 'A', figure: n });
    const slowest = Math.max(...eigenvaluesOf(a, 'A').map((e) => e.re));
    if (slowest >= 0) return giveUp('unstable', { field: 'A', figure: slowest });
    const I = Matrix.eye(n);
    const operator = a.kroneckerProduct(I).add(I.kroneckerProduct(a));
    const x = solveFor(operator, Matrix.columnVector(q.to1DArray()).mul(-1), 'A').to1DArray();
    return { X: rowsOf(symmetrise(Matrix.from1DArray(n, n, x))) };
  });
}

/** {@link discreteLyapunov} on matrices, by doubling: X ← X + Aⁱ X Aⁱᵀ, i = 1, 2, 4 … (Smith 1968). Throws `Refused`. */
export function dlyap(A: Matrix, Q: Matrix): Matrix {
  const radius = spectralRadius(A, 'A');
  if (radius >= 1) return giveUp('unstable', { field: 'A', figure: radius });
  let X = symmetrise(Q);
  let power = A;
  for (let i = 0; i < 64; i++) {
    const more = symmetrise(power.mmul(X).mmul(power.transpose()));
    X = Matrix.add(X, more);
    if (largest(more) <= 2 ** -53 * largest(X)) return X;
    power = power.mmul(power);
  }
  return giveUp('not-converged', { field: 'A', figure: radius });
}
