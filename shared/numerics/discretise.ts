import { Matrix } from 'ml-matrix';
import { attempt, giveUp } from './attempt.ts';
import {
  oneNorm,
  readMatrix,
  readPositive,
  readSemidefinite,
  readSquare,
  rowsOf,
  symmetrise,
} from './linear-algebra.ts';
import { expm } from './matrix-exponential.ts';
import type { Result } from './result.ts';
import { readModel, readNames } from './state-space.ts';
import type { ContinuousModel, DiscreteModel, Rows } from './state-space.ts';

/** Discrete matrices of one sampling interval: x[k+1] = A x[k] + B u[k]. */
export type SampledMatrices = { A: number[][]; B: number[][] };

/**
 * Zero-order hold: Ad = e^{A T}, Bd = ∫₀ᵀ e^{A s} ds B, both read off the exponential of [[A, B], [0, 0]] T, which also
 * serves where A is singular (Van Loan 1978, theorem 1; Franklin, Powell & Workman 1998, eq. 4.58).
 * A n×n, B n×p, `step` T > 0 in the time unit of A (seconds in every model here).
 */
export function zeroOrderHold(A: Rows, B: Rows, step: number): Result<SampledMatrices> {
  return attempt(() => {
    const a = readSquare(A, 'A');
    const held = holdInputs(a, readMatrix(B, 'B', { rows: a.rows }), readPositive(step, 'step'));
    return { A: rowsOf(held.Ad), B: rowsOf(held.Bd) };
  });
}

/** {@link zeroOrderHold} on matrices. Throws `Refused`. */
export function holdInputs(A: Matrix, B: Matrix, step: number): { Ad: Matrix; Bd: Matrix } {
  const n = A.rows;
  const p = B.columns;
  const augmented = Matrix.zeros(n + p, n + p);
  augmented.setSubMatrix(Matrix.mul(A, step), 0, 0);
  if (p > 0) augmented.setSubMatrix(Matrix.mul(B, step), 0, n);
  const E = expm(augmented);
  const Bd = p > 0 ? E.subMatrix(0, n - 1, n, n + p - 1) : new Matrix(n, 0);
  return { Ad: E.subMatrix(0, n - 1, 0, n - 1), Bd };
}

/**
 * Process noise of one sampling interval: Qd = ∫₀ᵀ e^{A s} G q Gᵀ e^{Aᵀ s} ds for white noise of spectral density q
 * entering through G (A n×n, G n×r, q r×r; unit of q: (unit of input)² · time). Returns Ad = e^{A T} with it.
 */
export function processNoise(
  A: Rows,
  G: Rows,
  q: Rows,
  step: number,
): Result<{ A: number[][]; Q: number[][] }> {
  return attempt(() => {
    const a = readSquare(A, 'A');
    const g = readMatrix(G, 'G', { rows: a.rows });
    const density = g.mmul(readSemidefinite(q, 'q', g.columns)).mmul(g.transpose());
    const { Ad, Qd } = integrateNoise(a, density, readPositive(step, 'step'));
    return { A: rowsOf(Ad), Q: rowsOf(Qd) };
  });
}

/** Doublings of the interval: 2⁶⁰ times the fastest time constant is no sampling interval. */
const mostDoublings = 60;

/**
 * Van Loan's block exponential (IEEE Trans. Automatic Control 23 (1978) 395–404): with exp([[−A, W], [0, Aᵀ]] h) =
 * [[·, F12], [0, F22]], Ad = F22ᵀ and Qd = Ad F12. Taken over h = T/2ˢ with ‖A‖h ≤ 1 and then doubled by
 * Qd(2h) = Qd(h) + Ad(h) Qd(h) Ad(h)ᵀ, so that fast modes do not overflow e^{−A T}. Throws `Refused`.
 */
export function integrateNoise(A: Matrix, W: Matrix, step: number): { Ad: Matrix; Qd: Matrix } {
  const n = A.rows;
  const s = Math.ceil(Math.log2(Math.max(oneNorm(A) * step, 1)));
  if (s > mostDoublings) return giveUp('out-of-range', { field: 'step', figure: step });
  const h = step / 2 ** s;
  const block = Matrix.zeros(2 * n, 2 * n);
  block.setSubMatrix(Matrix.mul(A, -h), 0, 0);
  block.setSubMatrix(Matrix.mul(W, h), 0, n);
  block.setSubMatrix(Matrix.mul(A.transpose(), h), n, n);
  const E = expm(block);
  let Ad = E.subMatrix(n, 2 * n - 1, n, 2 * n - 1).transpose();
  let Qd = symmetrise(Ad.mmul(E.subMatrix(0, n - 1, n, 2 * n - 1)));
  for (let i = 0; i < s; i++) {
    Qd = symmetrise(Matrix.add(Qd, Ad.mmul(Qd).mmul(Ad.transpose())));
    Ad = Ad.mmul(Ad);
  }
  return { Ad, Qd };
}

/** The discrete model of a continuous one for inputs held over `step` seconds; names and units are kept. */
export function discretise(model: ContinuousModel, step: number): Result<{ model: DiscreteModel }> {
  return attempt(() => {
    const M = readModel(model);
    const { Ad, Bd } = holdInputs(M.A, M.B, readPositive(step, 'step'));
    const { D, H, F, C } = M;
    const rest = { C: rowsOf(C), D: rowsOf(D), H: rowsOf(H), F: rowsOf(F), ...readNames(model, M) };
    return { model: { domain: 'discrete', step, A: rowsOf(Ad), B: rowsOf(Bd), ...rest } };
  });
}
