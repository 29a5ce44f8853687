import { Matrix } from 'ml-matrix';
import { Refused } from './attempt.ts';
import { oneNorm, singularValues, solveFor } from './linear-algebra.ts';
import type { Complex } from './linear-algebra.ts';

/**
 * Gain K (n×1) with eig(A − K c) = poles for one measured output, c 1×n, (A, c) observable; poles closed under
 * conjugation, repeated ones allowed. Ackermann's formula and a Sylvester equation are both tried in time units of
 * ‖A‖; the one that misses the wanted poles less is taken. Throws `Refused`.
 */
export function placeSingleOutput(A: Matrix, c: Matrix, poles: Complex[]): Matrix {
  const size = oneNorm(A) || Math.max(...poles.map((pole) => Math.hypot(pole.re, pole.im))) || 1;
  const a = Matrix.div(A, size);
  const wanted = poles.map((pole) => ({ re: pole.re / size, im: pole.im / size }));
  const candidates: Matrix[] = [];
  let refused: unknown = null;
  for (const method of [ackermann, sylvester]) {
    try {
      candidates.push(method(a, c, wanted));
    } catch (error) {
      if (!(error instanceof Refused)) throw error;
      refused = error;
    }
  }
  if (candidates.length === 0) throw refused;
  const misses = candidates.map((K) => polesMissedBy(Matrix.sub(a, K.mmul(c)), wanted));
  return Matrix.mul(candidates[misses.indexOf(Math.min(...misses))]!, size);
}

/** K = φ(A) O⁻¹ [0 … 0 1]ᵀ, φ(A) = Π(A − λᵢI), O = [c; cA; …; cAⁿ⁻¹] (Ackermann 1972; Ogata 5th ed., eq. 10–61). */
function ackermann(A: Matrix, c: Matrix, poles: Complex[]): Matrix {
  const n = A.rows;
  const O = Matrix.zeros(n, n);
  let row = c;
  for (let i = 0; i < n; i++) {
    O.setRow(i, row.getRow(0));
    row = row.mmul(A);
  }
  const last = Matrix.zeros(n, 1);
  last.set(n - 1, 0, 1);
  let K = solveFor(O, last, 'C');
  for (const pole of poles) {
    if (pole.im < 0) continue;
    const once = Matrix.sub(A.mmul(K), Matrix.mul(K, pole.re));
    K =
      pole.im === 0
        ? once
        : Matrix.sub(A.mmul(once), Matrix.mul(once, pole.re)).add(Matrix.mul(K, pole.im ** 2));
  }
  return K;
}

/**
 * K = X⁻¹ g where X A − Λ X = g c, Λ real with the wanted poles and (Λ, g) controllable (Luenberger 1964; Bhattacharyya
 * & de Souza 1982): then X (A − K c) = Λ X. Needs poles that A does not have already.
 */
function sylvester(A: Matrix, c: Matrix, poles: Complex[]): Matrix {
  const n = A.rows;
  const Lambda = realForm(poles);
  const g = Matrix.zeros(n, 1);
  g.set(n - 1, 0, 1);
  const I = Matrix.eye(n);
  const operator = Matrix.sub(I.kroneckerProduct(A.transpose()), Lambda.kroneckerProduct(I));
  const x = solveFor(operator, Matrix.columnVector(g.mmul(c).to1DArray()), 'poles').to1DArray();
  return solveFor(Matrix.from1DArray(n, n, x), g, 'poles');
}

/** Real matrix with the poles as eigenvalues, in 1×1 and 2×2 blocks chained by ones: driven at its end it is controllable. */
function realForm(poles: Complex[]): Matrix {
  const upper = poles.filter((pole) => pole.im >= 0);
  const M = Matrix.zeros(poles.length, poles.length);
  let at = 0;
  for (const { re, im } of upper) {
    M.set(at, at, re);
    if (im > 0) {
      M.set(at, at + 1, 1);
      M.set(at + 1, at, -im * im);
      M.set(at + 1, at + 1, re);
      at++;
    }
    if (at + 1 < poles.length) M.set(at, at + 1, 1);
    at++;
  }
  return M;
}

/** Largest σ_min(M − λI)/‖M‖ over the wanted poles: the relative change of M that would make each an exact eigenvalue. */
export function polesMissedBy(M: Matrix, poles: Complex[]): number {
  const n = M.rows;
  const size = singularValues(M, 'A').s[0]! || 1;
  let worst = 0;
  for (const { re, im } of poles) {
    const shifted = Matrix.sub(M, Matrix.eye(n).mul(re));
    const real = Matrix.zeros(2 * n, 2 * n)
      .setSubMatrix(shifted, 0, 0)
      .setSubMatrix(shifted, n, n)
      .setSubMatrix(Matrix.eye(n).mul(im), 0, n)
      .setSubMatrix(Matrix.eye(n).mul(-im), n, 0);
    worst = Math.max(worst, singularValues(real, 'A').s[2 * n - 1]! / size);
  }
  return worst;
}
