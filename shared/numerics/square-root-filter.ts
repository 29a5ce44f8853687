import { Matrix, QrDecomposition } from 'ml-matrix';
import { attemptSeries, giveUp } from './attempt.ts';
import { allFinite } from './input-checks.ts';
import { longestReadableRun, present, readSeries, readStart, requireFinite } from './kalman.ts';
import type { FilterStart, GridSeries, Measurement } from './kalman.ts';
import {
  choleskyOf,
  finiteOrRefuse,
  readDefinite,
  readSemidefinite,
  semidefiniteFactor,
  solveFor,
} from './linear-algebra.ts';
import type { Result } from './result.ts';
import { readModel } from './state-space.ts';
import type { ModelRows, NoiseRows } from './state-space.ts';

/** Result of {@link squareRootFilter}: as of kalmanFilter, with x and the factor G (P = G Gᵀ) predicted for step N. */
export type SquareRootRun = {
  z: Float64Array;
  sd: Float64Array;
  nis: Float64Array;
  logLikelihood: number;
  readings: number;
  x: number[];
  factor: number[][];
};

/**
 * Square-root form of kalmanFilter: carries a factor G of P = G Gᵀ, so that P can't lose its positive semidefiniteness
 * and its condition number enters only as its root. Array algorithms (Kailath, Sayed & Hassibi 2000, section 12.3):
 * update [[R^½, C G], [0, G]] Θ = [[S^½, 0], [K̄, G⁺]] with L = K̄ S^(−½), prediction [A G, Q^½] Θ = [G⁺, 0], Θ orthogonal
 * (by QR). For models whose P is ill-conditioned; arguments, conventions and refusals as kalmanFilter.
 */
export function squareRootFilter(
  model: ModelRows,
  noise: NoiseRows,
  start: FilterStart,
  series: GridSeries,
): Result<SquareRootRun> {
  return attemptSeries(() => {
    const M = readModel(model);
    const rootQ = semidefiniteFactor(readSemidefinite(noise?.Q, 'Q', M.n), 'Q');
    const R = readDefinite(noise.R, 'R', M.m);
    const N = readSeries(M, series, longestReadableRun);
    requireFinite(series);
    const begin = readStart(start, M.n);
    let state = { x: begin.x, G: semidefiniteFactor(begin.P, 'P0') };
    const h = M.H.getRowVector(0);
    const f = M.F.getRowVector(0);
    const run = { z: new Float64Array(N), sd: new Float64Array(N), nis: new Float64Array(N).fill(NaN) };
    let logLikelihood = 0;
    let readings = 0;
    for (let k = 0; k < N; k++) {
      const u = Matrix.columnVector(series.u.slice(k * M.p, (k + 1) * M.p));
      const y = Matrix.columnVector(series.y.slice(k * M.m, (k + 1) * M.m));
      const measured = present({ y, C: M.C, R, offset: M.D.mmul(u) });
      if (measured) {
        const updated = updateRoot(state, measured);
        state = updated;
        run.nis[k] = updated.nis;
        logLikelihood += updated.logLikelihood;
        readings += measured.y.rows;
      }
      run.z[k] = h.mmul(state.x).get(0, 0) + f.mmul(u).get(0, 0);
      run.sd[k] = h.mmul(state.G).norm('frobenius');
      const x = finiteOrRefuse(Matrix.add(M.A.mmul(state.x), M.B.mmul(u)), 'A');
      state = { x, G: lowerOf(beside(M.A.mmul(state.G), rootQ)) };
    }
    finiteOrRefuse(state.G, 'A');
    if (!allFinite(run.z) || !allFinite(run.sd)) return giveUp('out-of-range', { field: 'H' });
    return { ...run, logLikelihood, readings, x: state.x.to1DArray(), factor: state.G.to2DArray() };
  });
}

function updateRoot({ x, G }: { x: Matrix; G: Matrix }, { y, C, R, offset }: Measurement) {
  const m = C.rows;
  const n = G.rows;
  const top = beside(choleskyOf(R, 'R'), C.mmul(G));
  const array = Matrix.zeros(m + n, m + n)
    .setSubMatrix(top, 0, 0)
    .setSubMatrix(G, m, m);
  const post = lowerOf(array);
  const rootS = post.subMatrix(0, m - 1, 0, m - 1);
  const white = solveFor(rootS, Matrix.sub(y, C.mmul(x)).sub(offset), 'R');
  const nis = white.dot(white);
  if (!Number.isFinite(nis)) return giveUp('out-of-range', { field: 'y' });
  const logDet = 2 * rootS.diagonal().reduce((sum, d) => sum + Math.log(Math.abs(d)), 0);
  return {
    x: Matrix.add(x, post.subMatrix(m, m + n - 1, 0, m - 1).mmul(white)),
    G: post.subMatrix(m, m + n - 1, m, m + n - 1),
    nis,
    logLikelihood: -0.5 * (m * Math.log(2 * Math.PI) + logDet + nis),
  };
}

/** Lower triangle L with L Lᵀ = M Mᵀ: the transposed R of the QR decomposition of Mᵀ. */
function lowerOf(M: Matrix): Matrix {
  const rows = M.rows;
  return new QrDecomposition(M.transpose()).upperTriangularMatrix
    .subMatrix(0, rows - 1, 0, rows - 1)
    .transpose();
}

function beside(left: Matrix, right: Matrix): Matrix {
  return Matrix.zeros(left.rows, left.columns + right.columns)
    .setSubMatrix(left, 0, 0)
    .setSubMatrix(right, 0, left.columns);
}
