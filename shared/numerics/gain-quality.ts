import { Matrix } from 'ml-matrix';
import { attempt, giveUp } from './attempt.ts';
import { settle } from './error-decay.ts';
import {
  eigenvaluesOf,
  oneNorm,
  readColumn,
  readDefinite,
  readMatrix,
  readPositive,
  readSemidefinite,
  rowsOf,
  symmetrise,
} from './linear-algebra.ts';
import type { Complex } from './linear-algebra.ts';
import { dlyap } from './lyapunov.ts';
import { timeConstantOf } from './observability.ts';
import type { Result } from './result.ts';
import { readModel } from './state-space.ts';
import type { ModelRows, NoiseRows } from './state-space.ts';

/** An error mode: eigenvalue of (I − L C) A (the same as of A − K C), its time constant (s) and damping ratio. */
export type ErrorMode = { eigenvalue: Complex; timeConstant: number; damping: number };

/**
 * What a filter gain does. `settling`: seconds until the simulated error norm stays within 2 %; `dominantSettling`: ln 50
 * time constants of the slowest mode, for comparison. `noiseSd`: SD that measurement noise alone puts into z; `sd`: SD of
 * the error of z (noise of process and measurement), `covariance` n×n of the filtered error. `initialErrorResponses[i]`:
 * error of z after state i starts one unit off; `readingStepResponses[j]`: change of the estimate when reading j shifts by
 * one unit for good. Times of the responses in `times` (s); noiseSd and sd are for each estimated quantity.
 */
export type GainQuality = {
  modes: ErrorMode[];
  settling: number;
  dominantSettling: number;
  noiseSd: number[];
  sd: number[];
  covariance: number[][];
  times: number[];
  initialErrorResponses: number[][];
  readingStepResponses: number[][];
};

/** Points of a response; the whole of it covers twice the settling time. */
const responsePoints = 120;

/**
 * Judges a filter gain L (n×m) of a discrete model: e[k] = (I − L C)(A e[k−1] + w) − L v, so that the covariance solves
 * Σ = (I − LC)(A Σ Aᵀ + Q)(I − LC)ᵀ + L R Lᵀ (Anderson & Moore 1979, section 4.4). `initialError` (n, default one unit in
 * every state) is where the settling time starts. Responses are of the first estimated quantity. Refuses `unstable`
 * (filterGain, `figure`: largest modulus).
 */
export function gainQuality(
  model: ModelRows & { step: number },
  noise: NoiseRows,
  filterGain: number[][],
  initialError?: number[],
): Result<GainQuality> {
  return attempt(() => {
    const M = readModel(model);
    const step = readPositive(model.step, 'step');
    const L = readMatrix(filterGain, 'filterGain', { rows: M.n, columns: M.m });
    const Q = readSemidefinite(noise?.Q, 'Q', M.n);
    const R = readDefinite(noise.R, 'R', M.m);
    const rest = Matrix.sub(Matrix.eye(M.n), L.mmul(M.C));
    const error = rest.mmul(M.A);
    const modes = errorModes(error, step);
    const LRLt = L.mmul(R).mmul(L.transpose());
    const fromNoise = dlyap(error, symmetrise(LRLt));
    const covariance = dlyap(error, symmetrise(rest.mmul(Q).mmul(rest.transpose()).add(LRLt)));
    const start =
      initialError === undefined ? Matrix.ones(M.n, 1) : readColumn(initialError, 'initialError', M.n);
    const steps = settle(error, start, 0.02);
    const sdOf = (S: Matrix) => rowsOf(M.H).map((h) => Math.sqrt(Math.max(quadratic(h, S), 0)));
    const every = Math.max(1, Math.ceil((2 * steps) / responsePoints));
    return {
      modes,
      settling: steps * step,
      dominantSettling: Math.max(...modes.map((mode) => mode.timeConstant)) * Math.log(50),
      noiseSd: sdOf(fromNoise),
      sd: sdOf(covariance),
      covariance: rowsOf(covariance),
      ...responses(error, L, M.H, every, every * step),
    };
  });
}

function quadratic(h: number[], S: Matrix): number {
  const column = Matrix.columnVector(h);
  return column.dot(S.mmul(column));
}

/** Modes, slowest first. */
function errorModes(error: Matrix, step: number): ErrorMode[] {
  const eigenvalues = eigenvaluesOf(error, 'filterGain');
  const radius = Math.max(...eigenvalues.map((e) => Math.hypot(e.re, e.im)));
  return eigenvalues
    .map((eigenvalue) => {
      const timeConstant = timeConstantOf(eigenvalue, { domain: 'discrete', step }, oneNorm(error));
      if (timeConstant === null) return giveUp('unstable', { field: 'filterGain', figure: radius });
      const decay = -Math.log(Math.hypot(eigenvalue.re, eigenvalue.im));
      const turn = Math.atan2(eigenvalue.im, eigenvalue.re);
      const damping = Number.isFinite(decay) ? decay / Math.hypot(decay, turn) : 1;
      return { eigenvalue, timeConstant, damping };
    })
    .sort((a, b) => b.timeConstant - a.timeConstant);
}

function responses(error: Matrix, L: Matrix, H: Matrix, every: number, spacing: number) {
  const h = H.getRowVector(0);
  const trace = (start: Matrix, push: Matrix) => {
    let e = start;
    const seen = [h.mmul(e).get(0, 0)];
    for (let k = 1; k <= every * responsePoints; k++) {
      e = Matrix.add(error.mmul(e), push);
      if (k % every === 0) seen.push(h.mmul(e).get(0, 0));
    }
    return seen;
  };
  const I = Matrix.eye(error.rows);
  const columns = (X: Matrix) => Array.from({ length: X.columns }, (_, j) => X.getColumnVector(j));
  return {
    times: Array.from({ length: responsePoints + 1 }, (_, i) => i * spacing),
    initialErrorResponses: columns(I).map((e) => trace(e, Matrix.zeros(error.rows, 1))),
    readingStepResponses: columns(L).map((column) => trace(column, column)),
  };
}
