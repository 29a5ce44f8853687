import { Matrix } from 'ml-matrix';
import { attempt } from './attempt.ts';
import { finiteOrRefuse, oneNorm, readSquare, rowsOf, solveFor } from './linear-algebra.ts';
import type { Result } from './result.ts';
import type { Rows } from './state-space.ts';

/** Coefficients b₀ … b₁₃ of the [13/13] Padé approximant to eˣ (Higham 2005, algorithm 2.3). */
const pade13 = [
  64764752532480000, 32382376266240000, 7771770303897600, 1187353796428800, 129060195264000, 10559470521600,
  670442572800, 33522128640, 1323241920, 40840800, 960960, 16380, 182, 1,
];

/** θ₁₃: largest ‖2⁻ˢA‖ at which that approximant has a backward error below 2⁻⁵³ (Al-Mohy & Higham 2009, table 3.1). */
const theta13 = 4.25;

/** c₁₃: (2m)!/(m!)² · (2m + 1)! at m = 13, the reciprocal of the first backward-error coefficient. */
const leadingError13 = 1.1325077560602111e35;

/**
 * Matrix exponential e^A of an n×n matrix by scaling and squaring with the [13/13] Padé approximant (Al-Mohy & Higham,
 * SIAM J. Matrix Anal. Appl. 31 (2009) 970–989, algorithm 5.1 with m = 13): the scaling follows ‖Aᵏ‖^(1/k) rather
 * than ‖A‖, so that nilpotent parts of large norm are not scaled away. Refuses `out-of-range` when e^A overflows.
 */
export function matrixExponential(A: Rows): Result<{ exponential: number[][] }> {
  return attempt(() => ({ exponential: rowsOf(expm(readSquare(A, 'A'))) }));
}

/** {@link matrixExponential} on matrices. Throws `Refused`. */
export function expm(A: Matrix): Matrix {
  const A2 = finiteOrRefuse(A.mmul(A), 'A');
  const A4 = A2.mmul(A2);
  const A6 = finiteOrRefuse(A4.mmul(A2), 'A');
  const s = squarings(A, A4, A6);
  const shrunk = (power: Matrix, order: number) => Matrix.mul(power, 2 ** (-s * order));
  let X = approximant(shrunk(A, 1), shrunk(A2, 2), shrunk(A4, 4), shrunk(A6, 6));
  for (let i = 0; i < s; i++) X = X.mmul(X);
  return finiteOrRefuse(X, 'A');
}

/** s of algorithm 5.1: η₅ = min(max(d₆, d₈), max(d₈, d₁₀)), dₖ = ‖Aᵏ‖^(1/k), plus the correction ℓ₁₃. */
function squarings(A: Matrix, A4: Matrix, A6: Matrix): number {
  const d6 = oneNorm(A6) ** (1 / 6);
  const d8 = oneNorm(finiteOrRefuse(A4.mmul(A4), 'A')) ** (1 / 8);
  const d10 = oneNorm(finiteOrRefuse(A4.mmul(A6), 'A')) ** (1 / 10);
  const eta = Math.min(Math.max(d6, d8), Math.max(d8, d10));
  const s = eta > theta13 ? Math.ceil(Math.log2(eta / theta13)) : 0;
  return s + extraSquarings(Matrix.mul(A, 2 ** -s));
}

/** ℓ₁₃(A): further squarings that keep the first backward-error term below round-off in the entries (eq. 5.1). */
function extraSquarings(A: Matrix): number {
  const norm = oneNorm(A);
  if (norm === 0) return 0;
  const absolute = Matrix.abs(A);
  let column = Matrix.ones(1, A.rows);
  for (let k = 0; k < 27; k++) column = column.mmul(absolute);
  const alpha = Math.max(...column.to1DArray()) / (norm * leadingError13);
  if (!(alpha > 0)) return 0;
  return Math.max(0, Math.ceil(Math.log2(alpha / 2 ** -53) / 26));
}

/** r₁₃(A) = (V − U)⁻¹(V + U) with the odd part U and the even part V (Higham 2005, eq. 2.11). */
function approximant(A: Matrix, A2: Matrix, A4: Matrix, A6: Matrix): Matrix {
  const b = pade13 as [number, ...number[]];
  const mix = (b6: number, b4: number, b2: number, b0: number) =>
    Matrix.mul(A6, b6)
      .add(Matrix.mul(A4, b4))
      .add(Matrix.mul(A2, b2))
      .add(Matrix.mul(Matrix.eye(A.rows), b0));
  const U = A.mmul(A6.mmul(mix(b[13]!, b[11]!, b[9]!, 0)).add(mix(b[7]!, b[5]!, b[3]!, b[1]!)));
  const V = A6.mmul(mix(b[12]!, b[10]!, b[8]!, 0)).add(mix(b[6]!, b[4]!, b[2]!, b[0]));
  return solveFor(Matrix.sub(V, U), Matrix.add(V, U), 'A');
}
