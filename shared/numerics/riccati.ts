import { Matrix } from 'ml-matrix';
import { attempt, giveUp } from './attempt.ts';
import {
  choleskyOf,
  eigenvaluesOf,
  finiteOrRefuse,
  largest,
  oneNorm,
  readDefinite,
  readMatrix,
  readSemidefinite,
  readSquare,
  readSymmetric,
  rowsOf,
  semidefiniteFactor,
  singularValues,
  solveFor,
  symmetrise,
} from './linear-algebra.ts';
import type { Complex } from './linear-algebra.ts';
import { dlyap } from './lyapunov.ts';
import { timeConstantOf, unobservableBasis } from './observability.ts';
import type { Result } from './result.ts';
import type { Rows } from './state-space.ts';

/**
 * A solved discrete algebraic Riccati equation: X, the gain F = (R + BᵀXB)⁻¹(BᵀXA + Sᵀ), the eigenvalues of A − B F
 * (all inside the unit circle), the residual max|X − right-hand side|/max|X| and the number of doublings.
 */
export type DareSolution = {
  X: number[][];
  gain: number[][];
  closedLoop: Complex[];
  residual: number;
  doublings: number;
};

/** Residual above which a solution is refused. */
const largestResidual = 1e-8;

const mostDoublings = 60;

/**
 * Stabilising solution of X = AᵀXA − (AᵀXB + S)(R + BᵀXB)⁻¹(AᵀXB + S)ᵀ + Q by structure-preserving doubling (Chu, Fan,
 * Lin & Wang, Int. J. Control 77 (2004) 767–788) and one Newton step (Hewer 1971). A, Q n×n, B n×r, R r×r, S n×r (default
 * 0). R may be singular and Q indefinite: X = Y + Z with Y = αI gives an equation in Z whose R + BᵀYB is regular.
 * Refuses `not-converged` (`figure`: residual) or `unstable` (`figure`: largest modulus) when there is no such solution.
 */
export function solveDare(equation: { A: Rows; B: Rows; Q: Rows; R: Rows; S?: Rows }): Result<DareSolution> {
  return attempt(() => {
    const A = readSquare(equation?.A, 'A');
    const B = readMatrix(equation.B, 'B', { rows: A.rows });
    const Q = readSymmetric(equation.Q, 'Q', A.rows);
    const R = readSymmetric(equation.R, 'R', B.columns);
    const shape = { rows: A.rows, columns: B.columns };
    const S = equation.S === undefined ? Matrix.zeros(A.rows, B.columns) : readMatrix(equation.S, 'S', shape);
    const solved = dare({ A, B, Q, R, S });
    return { ...solved, X: rowsOf(solved.X), gain: rowsOf(solved.gain) };
  });
}

type Dare = { A: Matrix; B: Matrix; Q: Matrix; R: Matrix; S: Matrix };

/** {@link solveDare} on matrices. Throws `Refused`. */
export function dare(equation: Dare): {
  X: Matrix;
  gain: Matrix;
  closedLoop: Complex[];
  residual: number;
  doublings: number;
} {
  const Y = shiftFor(equation);
  const { X: Z, doublings } = double(withoutCrossTerm(shifted(equation, Y)));
  let X = Matrix.add(Y, Z);
  let residual = residualOf(equation, X);
  const refined = newtonStep(equation, X);
  if (refined) {
    const better = residualOf(equation, refined);
    if (better < residual) [X, residual] = [refined, better];
  }
  if (!(residual <= largestResidual)) return giveUp('not-converged', { field: 'Q', figure: residual });
  const gain = gainOf(equation, X);
  const closedLoop = eigenvaluesOf(Matrix.sub(equation.A, equation.B.mmul(gain)), 'A');
  const radius = Math.max(...closedLoop.map((e) => Math.hypot(e.re, e.im)));
  if (radius >= 1) return giveUp('unstable', { field: 'Q', figure: radius });
  return { X, gain, closedLoop, residual, doublings };
}

/** Y = αI where R is too nearly singular to be inverted, else 0. */
function shiftFor({ A, B, Q, R }: Dare): Matrix {
  const n = A.rows;
  const { s } = singularValues(R, 'R');
  if (s[s.length - 1]! > 1e-8 * s[0]!) return Matrix.zeros(n, n);
  const alpha = Math.max(largest(R), largest(Q)) / (largest(B.transpose().mmul(B)) || 1);
  return Matrix.eye(n).mul(alpha || 1);
}

/** The equation for Z = X − Y: R + BᵀYB, S + AᵀYB, Q + AᵀYA − Y. */
function shifted({ A, B, Q, R, S }: Dare, Y: Matrix): Dare {
  const At = A.transpose();
  return {
    A,
    B,
    R: symmetrise(Matrix.add(R, B.transpose().mmul(Y).mmul(B))),
    S: Matrix.add(S, At.mmul(Y).mmul(B)),
    Q: symmetrise(Matrix.add(Q, At.mmul(Y).mmul(A)).sub(Y)),
  };
}

/** Â = A − B R⁻¹Sᵀ, G = B R⁻¹Bᵀ, H = Q − S R⁻¹Sᵀ: the equation X = Âᵀ X (I + G X)⁻¹ Â + H. */
function withoutCrossTerm({ A, B, Q, R, S }: Dare): { A: Matrix; G: Matrix; H: Matrix } {
  const RinvBt = solveFor(R, B.transpose(), 'R');
  const RinvSt = solveFor(R, S.transpose(), 'R');
  return {
    A: Matrix.sub(A, B.mmul(RinvSt)),
    G: symmetrise(B.mmul(RinvBt)),
    H: symmetrise(Matrix.sub(Q, S.mmul(RinvSt))),
  };
}

/**
 * A ← A W⁻¹A, G ← G + A W⁻¹G Aᵀ, H ← H + Aᵀ H W⁻¹A with W = I + G H; H tends to X, quadratically (Chu et al. 2004,
 * algorithm SDA, eqs 2.16–2.18 from memory).
 */
function double(start: { A: Matrix; G: Matrix; H: Matrix }): { X: Matrix; doublings: number } {
  let { A, G, H } = start;
  const I = Matrix.eye(A.rows);
  for (let doublings = 1; doublings <= mostDoublings; doublings++) {
    const W = Matrix.add(I, G.mmul(H));
    const WA = solveFor(W, A, 'A');
    const WG = solveFor(W, G, 'A');
    const more = symmetrise(A.transpose().mmul(H).mmul(WA));
    G = symmetrise(Matrix.add(G, A.mmul(WG).mmul(A.transpose())));
    A = A.mmul(WA);
    H = finiteOrRefuse(Matrix.add(H, more), 'A');
    if (isSettled(more, H)) return { X: H, doublings };
  }
  return giveUp('not-converged', { field: 'Q' });
}

/** Every diagonal entry stands still; state by state, so that no unit of a state counts more than another. */
function isSettled(more: Matrix, H: Matrix): boolean {
  const diagonal = H.diagonal();
  return more.diagonal().every((change, i) => Math.abs(change) <= 2 ** -52 * Math.abs(diagonal[i]!));
}

function gainOf({ A, B, R, S }: Dare, X: Matrix): Matrix {
  const BtX = B.transpose().mmul(X);
  return solveFor(symmetrise(Matrix.add(R, BtX.mmul(B))), Matrix.add(BtX.mmul(A), S.transpose()), 'R');
}

function residualOf(equation: Dare, X: Matrix): number {
  const { A, B, Q, S } = equation;
  const At = A.transpose();
  const cross = Matrix.add(At.mmul(X).mmul(B), S);
  const right = At.mmul(X)
    .mmul(A)
    .sub(cross.mmul(gainOf(equation, X)))
    .add(Q);
  return largest(Matrix.sub(X, right)) / (largest(X) || 1);
}

/** X of the Lyapunov equation of the closed loop with the gain of the last X; null when that loop is not stable. */
function newtonStep(equation: Dare, X: Matrix): Matrix | null {
  const { A, B, Q, R, S } = equation;
  const F = gainOf(equation, X);
  const closed = Matrix.sub(A, B.mmul(F));
  if (!(Math.max(...eigenvaluesOf(closed, 'A').map((e) => Math.hypot(e.re, e.im))) < 1)) return null;
  const SF = S.mmul(F);
  const cost = Matrix.add(Q, F.transpose().mmul(R).mmul(F)).sub(SF).sub(SF.transpose());
  return dlyap(closed.transpose(), symmetrise(cost));
}

/**
 * The Kalman filter's steady state: predicted covariance P, filtered covariance, innovation covariance S = C P Cᵀ + R,
 * filter gain L = P Cᵀ S⁻¹ and predictor gain K = A L, error modes eig(A − K C), residual of the Riccati equation.
 */
export type SteadyFilter = {
  predictedCovariance: number[][];
  filteredCovariance: number[][];
  innovationCovariance: number[][];
  filterGain: number[][];
  predictorGain: number[][];
  modes: Complex[];
  residual: number;
};

/**
 * Steady state of the Kalman filter of x[k+1] = A x + w, y = C x + v: P = A P Aᵀ − A P Cᵀ(C P Cᵀ + R)⁻¹C P Aᵀ + Q (the
 * dual of {@link solveDare}; Anderson & Moore 1979, eq. 4.4.2). A, Q n×n, C m×n, R m×m. Refuses `singular` (R),
 * `not-positive-semidefinite` (Q or R), `not-detectable` (C), `not-controllable` (Q: a mode that does not decay and that
 * no noise drives, as a constant bias).
 */
export function steadyFilter(model: { A: Rows; C: Rows; Q: Rows; R: Rows }): Result<SteadyFilter> {
  return attempt(() => {
    const A = readSquare(model?.A, 'A');
    const C = readMatrix(model.C, 'C', { columns: A.rows });
    const Q = readSemidefinite(model.Q, 'Q', A.rows);
    const R = readDefinite(model.R, 'R', C.rows);
    const steady = steadyState({ A, C, Q, R });
    return {
      predictedCovariance: rowsOf(steady.P),
      filteredCovariance: rowsOf(steady.filtered),
      innovationCovariance: rowsOf(steady.S),
      filterGain: rowsOf(steady.L),
      predictorGain: rowsOf(steady.K),
      modes: steady.modes,
      residual: steady.residual,
    };
  });
}

/** {@link steadyFilter} on matrices. Throws `Refused`. */
export function steadyState({ A, C, Q, R }: { A: Matrix; C: Matrix; Q: Matrix; R: Matrix }) {
  requireDecay(A, C, 'not-detectable', 'C');
  requireDecay(A.transpose(), semidefiniteFactor(Q, 'Q').transpose(), 'not-controllable', 'Q');
  const S0 = Matrix.zeros(A.rows, C.rows);
  const { X: P, closedLoop, residual } = dare({ A: A.transpose(), B: C.transpose(), Q, R, S: S0 });
  const PCt = P.mmul(C.transpose());
  const S = symmetrise(Matrix.add(C.mmul(PCt), R));
  choleskyOf(S, 'R');
  const L = solveFor(S, PCt.transpose(), 'R').transpose();
  const rest = Matrix.sub(Matrix.eye(A.rows), L.mmul(C));
  const filtered = symmetrise(rest.mmul(P).mmul(rest.transpose()).add(L.mmul(R).mmul(L.transpose())));
  return { P, filtered, S, L, K: A.mmul(L), modes: closedLoop, residual };
}

/** Refuses when a mode that C does not see fails to decay by itself. */
function requireDecay(
  A: Matrix,
  C: Matrix,
  reason: 'not-detectable' | 'not-controllable',
  field: string,
): void {
  const hidden = unobservableBasis(A, C);
  if (hidden.columns === 0) return;
  const inner = hidden.transpose().mmul(A).mmul(hidden);
  const time = { domain: 'discrete', step: 1 } as const;
  const lasting = eigenvaluesOf(inner, 'A').filter((e) => timeConstantOf(e, time, oneNorm(A)) === null);
  if (lasting.length > 0) giveUp(reason, { field, figure: Math.hypot(lasting[0]!.re, lasting[0]!.im) });
}
