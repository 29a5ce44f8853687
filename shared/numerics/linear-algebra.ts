import {
  CholeskyDecomposition,
  EigenvalueDecomposition,
  LuDecomposition,
  Matrix,
  SingularValueDecomposition,
} from 'ml-matrix';
import { giveUp } from './attempt.ts';

/*
 * Design-size matrices: a thin layer over ml-matrix that reads, checks and refuses. Every function here works on
 * ml-matrix's Matrix and throws `Refused`; the functions of the other files catch that with `attempt`.
 */

/** A complex number, as an eigenvalue or a wanted pole. */
export type Complex = { re: number; im: number };

/** Largest number of rows or columns of a matrix that these functions take: design size, not data size. */
export const largestDimension = 64;

/** Relative tolerance of every rank decision: singular values below it times the largest count as zero. */
export const rankTolerance = 1e-10;

/** Deviation from symmetry, and most negative eigenvalue, that is taken for round-off (relative to the largest). */
const symmetryTolerance = 1e-9;

/**
 * Reads a matrix given as rows. Refuses `wrong-shape` (not a rectangle, or not the wanted `rows` × `columns`),
 * `non-finite-input`, and `out-of-range` beyond {@link largestDimension}.
 */
export function readMatrix(
  value: unknown,
  field: string,
  shape: { rows?: number; columns?: number } = {},
): Matrix {
  if (!Array.isArray(value) || value.length === 0)
    return giveUp('wrong-shape', { field, needed: shape.rows });
  const rows = value.length;
  if (shape.rows !== undefined && rows !== shape.rows) {
    return giveUp('wrong-shape', { field, needed: shape.rows, got: rows });
  }
  const columns = shape.columns ?? (Array.isArray(value[0]) ? value[0].length : 0);
  if (rows > largestDimension || columns > largestDimension) {
    return giveUp('out-of-range', { field, figure: Math.max(rows, columns) });
  }
  const M = new Matrix(rows, columns);
  for (let i = 0; i < rows; i++) {
    const row: unknown = value[i];
    if (!Array.isArray(row)) return giveUp('wrong-shape', { field, needed: columns });
    if (row.length !== columns) return giveUp('wrong-shape', { field, needed: columns, got: row.length });
    for (let j = 0; j < columns; j++) M.set(i, j, readNumber(row[j], field));
  }
  return M;
}

/** Reads a square matrix. */
export function readSquare(value: unknown, field: string): Matrix {
  const size = Array.isArray(value) ? value.length : 0;
  return readMatrix(value, field, { rows: size, columns: size });
}

/** Reads one finite number; refuses `non-finite-input` with the field. */
export function readNumber(value: unknown, field: string): number {
  if (typeof value !== 'number' || !Number.isFinite(value)) return giveUp('non-finite-input', { field });
  return value;
}

/** Reads a finite number above zero; refuses `out-of-range` with the value. */
export function readPositive(value: unknown, field: string): number {
  const number = readNumber(value, field);
  return number > 0 ? number : giveUp('out-of-range', { field, figure: number });
}

/** Reads a vector of `length` finite numbers as a column. */
export function readColumn(value: unknown, field: string, length: number): Matrix {
  if (!Array.isArray(value) && !(value instanceof Float64Array)) return giveUp('wrong-shape', { field });
  if (value.length !== length) return giveUp('wrong-shape', { field, needed: length, got: value.length });
  const column = new Matrix(length, 1);
  for (let i = 0; i < length; i++) column.set(i, 0, readNumber(value[i], field));
  return column;
}

/** Reads a symmetric `size` × `size` matrix; refuses `not-symmetric` beyond round-off. */
export function readSymmetric(value: unknown, field: string, size: number): Matrix {
  const M = readMatrix(value, field, { rows: size, columns: size });
  const skew = Matrix.sub(M, M.transpose());
  if (largest(skew) > symmetryTolerance * largest(M)) return giveUp('not-symmetric', { field });
  return symmetrise(M);
}

/** Reads a covariance that may be singular (Q, P₀); refuses `not-positive-semidefinite` with its lowest eigenvalue. */
export function readSemidefinite(value: unknown, field: string, size: number): Matrix {
  const M = readSymmetric(value, field, size);
  const lowest = Math.min(...eigenvaluesOf(correlationScaled(M), field).map((e) => e.re));
  if (lowest < -symmetryTolerance * size) {
    return giveUp('not-positive-semidefinite', { field, figure: lowest });
  }
  return M;
}

/** Reads a covariance that must be regular (R); refuses `not-positive-semidefinite` or `singular`. */
export function readDefinite(value: unknown, field: string, size: number): Matrix {
  const M = readSemidefinite(value, field, size);
  for (let i = 0; i < size; i++)
    if (!(M.get(i, i) > 0)) return giveUp('singular', { field, figure: M.get(i, i) });
  const lowest = Math.min(...eigenvaluesOf(correlationScaled(M), field).map((e) => e.re));
  return lowest > 1e-12 ? M : giveUp('singular', { field, figure: lowest });
}

/** S⁻¹ M S⁻¹ with S the roots of the diagonal: judges definiteness whatever units the rows carry. */
function correlationScaled(M: Matrix): Matrix {
  const scale = M.diagonal().map((d) => (d > 0 ? 1 / Math.sqrt(d) : 1 / Math.sqrt(largest(M) || 1)));
  const scaled = M.clone();
  for (let i = 0; i < M.rows; i++) {
    for (let j = 0; j < M.columns; j++) scaled.set(i, j, M.get(i, j) * scale[i]! * scale[j]!);
  }
  return scaled;
}

/** The matrix as plain rows. */
export function rowsOf(M: Matrix): number[][] {
  return M.to2DArray();
}

/** Largest absolute entry; 0 for an empty matrix. */
export function largest(M: Matrix): number {
  let size = 0;
  for (let i = 0; i < M.rows; i++)
    for (let j = 0; j < M.columns; j++) size = Math.max(size, Math.abs(M.get(i, j)));
  return size;
}

/** Largest column sum of absolute values, ‖M‖₁. */
export function oneNorm(M: Matrix): number {
  return Math.max(0, ...Matrix.abs(M).sum('column'));
}

/** (M + Mᵀ)/2. */
export function symmetrise(M: Matrix): Matrix {
  return Matrix.add(M, M.transpose()).mul(0.5);
}

/** Refuses `out-of-range` when the computation overflowed; gives the matrix back otherwise. */
export function finiteOrRefuse(M: Matrix, field: string): Matrix {
  for (let i = 0; i < M.rows; i++) {
    for (let j = 0; j < M.columns; j++)
      if (!Number.isFinite(M.get(i, j))) return giveUp('out-of-range', { field });
  }
  return M;
}

/**
 * Singular value decomposition M = U diag(s) Vᵀ of any rectangle, s descending and as long as the smaller side, V
 * square (its last columns span the null space).
 */
export function singularValues(M: Matrix, field: string): { s: number[]; U: Matrix; V: Matrix } {
  const scale = largest(finiteOrRefuse(M, field)) || 1;
  const square = Math.max(M.rows, M.columns);
  const tall = Matrix.zeros(square, M.columns).setSubMatrix(Matrix.div(M, scale), 0, 0);
  const svd = new SingularValueDecomposition(tall);
  const count = Math.min(M.rows, M.columns);
  const U = svd.leftSingularVectors.subMatrix(0, M.rows - 1, 0, M.columns - 1);
  return { s: svd.diagonal.slice(0, count).map((s) => s * scale), U, V: svd.rightSingularVectors };
}

/** Rank: the number of singular values above `tolerance` × `scale` (default: the largest of them). */
export function rankOf(M: Matrix, field: string, tolerance = rankTolerance, scale?: number): number {
  const { s } = singularValues(M, field);
  const threshold = tolerance * (scale ?? s[0] ?? 0);
  return s.filter((value) => value > threshold).length;
}

/** Ratio of the largest to the smallest singular value; Infinity when the smallest is zero to working precision. */
export function conditionNumber(M: Matrix, field: string): number {
  const { s } = singularValues(M, field);
  const smallest = s[s.length - 1] ?? 0;
  return smallest > 2 ** -52 * s[0]! ? s[0]! / smallest : Infinity;
}

/** Orthonormal basis (columns) of {x : M x = 0}; a matrix without columns when only x = 0 does that. */
export function nullSpace(M: Matrix, field: string, tolerance = rankTolerance, scale?: number): Matrix {
  const n = M.columns;
  const rank = rankOf(M, field, tolerance, scale);
  if (rank === n) return new Matrix(n, 0);
  return singularValues(M, field).V.subMatrix(0, n - 1, rank, n - 1);
}

/** Eigenvalues of a square matrix, in no particular order. */
export function eigenvaluesOf(M: Matrix, field: string): Complex[] {
  if (M.rows === 0) return [];
  const scale = largest(finiteOrRefuse(M, field)) || 1;
  const evd = new EigenvalueDecomposition(Matrix.div(M, scale));
  return evd.realEigenvalues.map((re, i) => ({ re: re * scale, im: evd.imaginaryEigenvalues[i]! * scale }));
}

/** Largest eigenvalue modulus. */
export function spectralRadius(M: Matrix, field: string): number {
  return Math.max(0, ...eigenvaluesOf(M, field).map((e) => Math.hypot(e.re, e.im)));
}

/** X with A X = B by LU; refuses `singular` (`figure`: condition number) when no digit of X would be right. */
export function solveFor(A: Matrix, B: Matrix, field: string): Matrix {
  const lu = new LuDecomposition(finiteOrRefuse(A, field));
  if (lu.isSingular()) return giveUp('singular', { field });
  const X = lu.solve(finiteOrRefuse(B, field));
  for (let i = 0; i < X.rows; i++) {
    for (let j = 0; j < X.columns; j++)
      if (!Number.isFinite(X.get(i, j))) return giveUp('singular', { field });
  }
  return X;
}

/** Lower triangle L with L Lᵀ = S; refuses `not-positive-definite`. */
export function choleskyOf(S: Matrix, field: string): Matrix {
  const cholesky = new CholeskyDecomposition(symmetrise(finiteOrRefuse(S, field)));
  if (!cholesky.isPositiveDefinite()) return giveUp('not-positive-definite', { field });
  return cholesky.lowerTriangularMatrix;
}

/** A square factor G with G Gᵀ = Q of a semidefinite Q (eigenvectors times roots of eigenvalues). */
export function semidefiniteFactor(Q: Matrix, field: string): Matrix {
  const evd = new EigenvalueDecomposition(symmetrise(finiteOrRefuse(Q, field)), { assumeSymmetric: true });
  const G = evd.eigenvectorMatrix.clone();
  evd.realEigenvalues.forEach((value, j) => G.mulColumn(j, Math.sqrt(Math.max(value, 0))));
  return G;
}
