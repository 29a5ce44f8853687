import { Matrix } from 'ml-matrix';
import { steadyGeneral } from './kernels/general-kernels.ts';
import { steadyKernelFor } from './kernels/kernels.ts';
import type { SteadyKernel, SteadyWork } from './kernels/work.ts';
import { conditionNumber, nullSpace, solveFor } from './linear-algebra.ts';
import type { ModelMatrices } from './state-space.ts';

/**
 * A fixed gain ready for the kernels. They work in the coordinates x′ = T x, T = [C; N], whose first states are the
 * predicted readings, so that v = y − C x costs a subtraction (the coordinates of the reduced-order observer, Luenberger
 * 1971). `toKernel` is T, `fromKernel` T⁻¹, both empty where the plain coordinates are kept.
 */
export type FixedGain = {
  work: SteadyWork;
  kernel: SteadyKernel;
  toKernel: Float64Array;
  fromKernel: Float64Array;
};

/** Largest condition number of T (rows of unit length): readings of nearly the same thing keep the plain coordinates. */
const largestCondition = 1e6;

/**
 * Work and kernel of a filter gain L, its predictor form K, the rows C (m×n) of the readings `present` in a row of y
 * and, where the NIS is wanted, `white` = S^(−1/2) (lower triangle). Throws `Refused`.
 */
export function fixedGain(
  M: ModelMatrices,
  gain: { L: Matrix; K: Matrix; C: Matrix; present: number[]; white?: Matrix },
): FixedGain {
  const { L, K, C, present, white } = gain;
  const m = present.length;
  const T = coordinates(C);
  const inverse = T ? solveFor(T, Matrix.eye(M.n), 'C') : null;
  const into = (X: Matrix) => (T ? T.mmul(X) : X);
  const onto = (X: Matrix) => (inverse ? X.mmul(inverse) : X);
  const h = M.H.getRowVector(0);
  const error = m > 0 ? Matrix.sub(M.A, K.mmul(C)) : M.A;
  const work: SteadyWork = {
    n: M.n,
    m,
    p: M.p,
    stride: M.m,
    present: Int32Array.from(present),
    absent: Int32Array.from(Array.from({ length: M.m }, (_, j) => j).filter((j) => !present.includes(j))),
    M: flat(onto(into(error))),
    B: flat(into(M.B).transpose()),
    K: flat(into(K).transpose()),
    C: m > 0 ? flat(onto(C)) : new Float64Array(0),
    W: Float64Array.from((white ?? Matrix.zeros(m, m)).to2DArray().flatMap((row, i) => row.slice(0, i + 1))),
    scored: white !== undefined,
    H: flat(onto(h)),
    G: m > 0 ? flat(h.mmul(L)) : new Float64Array(0),
    F: flat(M.F.getRowVector(0)),
  };
  const kernel = T ? steadyKernelFor(M.n, m) : steadyGeneral;
  return {
    work,
    kernel,
    toKernel: flat(T ?? new Matrix(0, 0)),
    fromKernel: flat(inverse ?? new Matrix(0, 0)),
  };
}

/** T = [C; N] with N an orthonormal basis of what C does not see; null where C is empty or not clearly of full rank. */
function coordinates(C: Matrix): Matrix | null {
  const { rows: m, columns: n } = C;
  if (m === 0 || m > n) return null;
  const T = Matrix.zeros(n, n).setSubMatrix(C, 0, 0);
  const rest = nullSpace(C, 'C');
  if (rest.columns !== n - m) return null;
  if (n > m) T.setSubMatrix(rest.transpose(), m, 0);
  const unit = T.clone();
  for (let i = 0; i < m; i++) unit.mulRow(i, 1 / Math.hypot(...C.getRow(i)));
  return conditionNumber(unit, 'C') < largestCondition ? T : null;
}

/** x ← T x (or T⁻¹ x); an empty T changes nothing. */
export function changeCoordinates(T: Float64Array, x: Float64Array): void {
  if (T.length === 0) return;
  const n = x.length;
  const old = x.slice();
  for (let i = 0; i < n; i++) {
    let value = 0;
    for (let l = 0; l < n; l++) value += T[i * n + l]! * old[l]!;
    x[i] = value;
  }
}

/** The matrix as a flat array, row after row. */
export function flat(M: Matrix): Float64Array {
  return Float64Array.from(M.to1DArray());
}
