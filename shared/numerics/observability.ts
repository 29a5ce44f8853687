import { Matrix } from 'ml-matrix';
import { attempt } from './attempt.ts';
import {
  eigenvaluesOf,
  largest,
  nullSpace,
  oneNorm,
  rankTolerance,
  readMatrix,
  readNumber,
  readSemidefinite,
  readSquare,
  rowsOf,
  semidefiniteFactor,
  singularValues,
} from './linear-algebra.ts';
import type { Complex } from './linear-algebra.ts';
import type { Result } from './result.ts';
import { readDomain } from './state-space.ts';
import type { Rows, TimeDomain } from './state-space.ts';

/** How much a state moves in a mode: `share` relative to the state that moves most (1). */
export type StateShare = { state: number; share: number };

/**
 * One mode of a model: its eigenvalue, whether the measured outputs see it, σ_min of the Hautus matrix [A − λI; C]
 * relative to its largest singular value, and the states that move in it. `timeConstant` in the time unit of the model
 * (s); null when the mode does not decay by itself.
 */
export type Mode = {
  eigenvalue: Complex;
  observable: boolean;
  hautus: number;
  timeConstant: number | null;
  states: StateShare[];
};

/**
 * What the measured outputs can see. `rank`: dimension of the observable part; `singularValues` and `condition` of
 * [C; CA; …; CAⁿ⁻¹] with A scaled to unit norm (the rank does not depend on that, the numbers then do not depend on the
 * unit of time); `tolerance`: relative, of every rank decision. `detectable`: every mode that cannot be seen decays.
 */
export type Observability = {
  rank: number;
  states: number;
  observable: boolean;
  detectable: boolean;
  tolerance: number;
  singularValues: number[];
  condition: number | null;
  modes: Mode[];
};

/**
 * Observability and detectability of (A, C): A n×n, C m×n. The unobservable subspace {x : C x = C A x = … = 0} is found
 * by a staircase of SVD rank decisions (Paige 1981), its modes are the eigenvalues of A restricted to it; each mode
 * carries its Hautus figure. `names` are not needed here: `modes[].states` numbers the states.
 */
export function observability(
  model: { A: Rows; C: Rows } & TimeDomain,
  tolerance = rankTolerance,
): Result<Observability> {
  return attempt(() => {
    const time = readDomain(model);
    const A = readSquare(model.A, 'A');
    const C = readMatrix(model.C, 'C', { columns: A.rows });
    return inspect(A, C, time, readNumber(tolerance, 'tolerance'));
  });
}

/**
 * Whether the process noise reaches every mode that does not decay by itself: the dual test of (A, G) with G Gᵀ = Q.
 * `detectable` then means stabilisable: without it the filter's covariance has no stable limit.
 */
export function noiseReach(model: { A: Rows; Q: Rows } & TimeDomain): Result<Observability> {
  return attempt(() => {
    const time = readDomain(model);
    const A = readSquare(model.A, 'A');
    const G = semidefiniteFactor(readSemidefinite(model.Q, 'Q', A.rows), 'Q');
    return inspect(A.transpose(), G.transpose(), time, rankTolerance);
  });
}

/** Rank of the Hautus matrix [A − λI; C]: n when the mode λ is observable (Popov–Belevitch–Hautus test). */
export function hautusRank(A: Rows, C: Rows, eigenvalue: Complex): Result<{ rank: number }> {
  return attempt(() => {
    const a = readSquare(A, 'A');
    const c = readMatrix(C, 'C', { columns: a.rows });
    const re = readNumber(eigenvalue?.re, 'eigenvalue');
    const im = readNumber(eigenvalue?.im, 'eigenvalue');
    const { s } = singularValues(hautusMatrix(a, c, { re, im }), 'A');
    return { rank: s.filter((value) => value > rankTolerance * s[0]!).length / 2 };
  });
}

/** Observability matrix [C; CA; …; CAⁿ⁻¹], (m n)×n, unscaled (Kalman 1960). */
export function observabilityMatrix(A: Rows, C: Rows): Result<{ matrix: number[][] }> {
  return attempt(() => {
    const a = readSquare(A, 'A');
    return { matrix: rowsOf(stacked(a, readMatrix(C, 'C', { columns: a.rows }))) };
  });
}

function inspect(A: Matrix, C: Matrix, time: TimeDomain, tolerance: number): Observability {
  const n = A.rows;
  const hidden = unobservableBasis(A, C, tolerance);
  const seen = hidden.columns === 0 ? Matrix.eye(n) : nullSpace(hidden.transpose(), 'A', tolerance);
  const modes = [...modesWithin(A, C, seen, true, time), ...modesWithin(A, C, hidden, false, time)];
  const scaled = stacked(Matrix.div(A, oneNorm(A) || 1), C);
  const { s } = singularValues(scaled, 'C');
  const smallest = s[n - 1] ?? 0;
  return {
    rank: n - hidden.columns,
    states: n,
    observable: hidden.columns === 0,
    detectable: modes.every((mode) => mode.observable || mode.timeConstant !== null),
    tolerance,
    singularValues: s,
    condition: smallest > 2 ** -52 * s[0]! ? s[0]! / smallest : null,
    modes,
  };
}

/** Orthonormal basis of {x : C x = C A x = … = 0}: null(C), then again and again the part that A keeps inside. */
export function unobservableBasis(A: Matrix, C: Matrix, tolerance = rankTolerance): Matrix {
  let N = nullSpace(unitRows(C), 'C', tolerance, 1);
  while (N.columns > 0) {
    const image = A.mmul(N);
    const outside = Matrix.sub(image, N.mmul(N.transpose().mmul(image)));
    const kept = nullSpace(outside, 'A', tolerance, largest(A) || 1);
    if (kept.columns === N.columns) break;
    N = N.mmul(kept);
  }
  return N;
}

/** Rows scaled to unit length, so that the unit of an output has no say in the rank; zero rows stay. */
function unitRows(C: Matrix): Matrix {
  const scaled = C.clone();
  for (let i = 0; i < C.rows; i++) {
    const length = Math.hypot(...C.getRow(i));
    if (length > 0) scaled.mulRow(i, 1 / length);
  }
  return scaled;
}

function stacked(A: Matrix, C: Matrix): Matrix {
  const rows = rowsOf(C);
  let block = C;
  for (let i = 1; i < A.rows; i++) {
    block = block.mmul(A);
    rows.push(...rowsOf(block));
  }
  return new Matrix(rows);
}

/** Modes of A restricted to the span of `basis` (invariant for the hidden part, a quotient for the seen part). */
function modesWithin(A: Matrix, C: Matrix, basis: Matrix, observable: boolean, time: TimeDomain): Mode[] {
  if (basis.columns === 0) return [];
  const inner = basis.transpose().mmul(A).mmul(basis);
  return eigenvaluesOf(inner, 'A')
    .filter((e) => e.im >= 0)
    .map((eigenvalue) => {
      const search = observable ? Matrix.eye(A.rows) : basis;
      const within = observable ? A : inner;
      const { s } = singularValues(hautusMatrix(A, C, eigenvalue), 'A');
      const states = shares(search, directionOf(within, eigenvalue));
      const timeConstant = timeConstantOf(eigenvalue, time, oneNorm(A));
      const hautus = s[0]! > 0 ? s[s.length - 1]! / s[0]! : 0;
      return { eigenvalue, observable, hautus, timeConstant, states };
    });
}

/** Real form of the complex matrix [A − λI; C]: every singular value of it appears twice. */
function hautusMatrix(A: Matrix, C: Matrix, eigenvalue: Complex): Matrix {
  const n = A.rows;
  const real = Matrix.sub(A, Matrix.eye(n).mul(eigenvalue.re));
  const M = Matrix.zeros(2 * (n + C.rows), 2 * n);
  const parts = [
    [real, 0, 0],
    [real, n, n],
    [Matrix.eye(n).mul(eigenvalue.im), 0, n],
    [Matrix.eye(n).mul(-eigenvalue.im), n, 0],
    [C, 2 * n, 0],
    [C, 2 * n + C.rows, n],
  ] as const;
  for (const [block, row, column] of parts) M.setSubMatrix(block, row, column);
  return M;
}

/** Eigenvector moduli of A for λ from the null direction of A − λI. */
function directionOf(A: Matrix, eigenvalue: Complex): { re: number[]; im: number[] } {
  const n = A.rows;
  const { V } = singularValues(hautusMatrix(A, Matrix.zeros(1, n), eigenvalue), 'A');
  const last = V.getColumn(2 * n - 1);
  return { re: last.slice(0, n), im: last.slice(n) };
}

function shares(basis: Matrix, v: { re: number[]; im: number[] }): StateShare[] {
  const re = basis.mmul(Matrix.columnVector(v.re)).to1DArray();
  const im = basis.mmul(Matrix.columnVector(v.im)).to1DArray();
  const size = re.map((value, i) => Math.hypot(value, im[i]!));
  const top = Math.max(...size) || 1;
  return size
    .map((value, state) => ({ state, share: value / top }))
    .filter(({ share }) => share > 0.05)
    .sort((a, b) => b.share - a.share);
}

/**
 * Time constant of a mode: −1/Re λ, or −T/ln|λ|; null when it does not decay: Re λ above −1e-12 `size` (‖A‖), or
 * |λ| above 1 − 1e-10.
 */
export function timeConstantOf(eigenvalue: Complex, time: TimeDomain, size: number): number | null {
  if (time.domain === 'continuous') return eigenvalue.re < -1e-12 * size ? -1 / eigenvalue.re : null;
  const modulus = Math.hypot(eigenvalue.re, eigenvalue.im);
  if (modulus === 0) return 0;
  return modulus < 1 - 1e-10 ? -time.step / Math.log(modulus) : null;
}
