import { Matrix } from 'ml-matrix';
import { attemptSeries, giveUp } from './attempt.ts';
import { allFinite } from './input-checks.ts';
import {
  choleskyOf,
  finiteOrRefuse,
  readColumn,
  readDefinite,
  readSemidefinite,
  solveFor,
  symmetrise,
} from './linear-algebra.ts';
import type { Result } from './result.ts';
import { readModel } from './state-space.ts';
import type { ModelMatrices, ModelRows, NoiseRows, Rows } from './state-space.ts';

/*
 * The Kalman filter as it stands in the textbooks (Anderson & Moore 1979, chapter 3; Bar-Shalom, Li & Kirubarajan 2001,
 * section 5.2). The fast filter of filter-run.ts is tested against this one.
 */

/** Mean x (n×1) and covariance P (n×n) of the state. */
export type Gaussian = { x: Matrix; P: Matrix };

/** Start of a filter: x[0|−1] and P[0|−1], before the first measurement. */
export type FilterStart = { x0: number[]; P0: Rows };

/** Time update: x[k+1|k] = A x[k|k] + B u[k], P[k+1|k] = A P[k|k] Aᵀ + Q. Throws `Refused` on overflow. */
export function predict(
  { x, P }: Gaussian,
  { A, B, Q, u }: { A: Matrix; B: Matrix; Q: Matrix; u: Matrix },
): Gaussian {
  return {
    x: finiteOrRefuse(Matrix.add(A.mmul(x), B.mmul(u)), 'A'),
    P: symmetrise(finiteOrRefuse(A.mmul(P).mmul(A.transpose()).add(Q), 'A')),
  };
}

/** One measurement y = C x + offset + v, cov v = R (m×m, may be correlated); `offset` is D u. */
export type Measurement = { y: Matrix; C: Matrix; R: Matrix; offset: Matrix };

/** What a measurement update leaves behind, for the log-likelihood, the NIS and the smoother. */
export type Updated = Gaussian & {
  innovation: Matrix;
  S: Matrix;
  gain: Matrix;
  nis: number;
  logLikelihood: number;
};

/**
 * Measurement update: v = y − C x − D u, S = C P Cᵀ + R, L = P Cᵀ S⁻¹, x[k|k] = x + L v, and in Joseph's form
 * P[k|k] = (I − L C) P (I − L C)ᵀ + L R Lᵀ (Bucy & Joseph 1968). NIS = vᵀS⁻¹v, log-likelihood
 * −½ (m ln 2π + ln det S + NIS). Throws `Refused` (`not-positive-definite`, field R) when S is not regular.
 */
export function update({ x, P }: Gaussian, { y, C, R, offset }: Measurement): Updated {
  const innovation = Matrix.sub(y, C.mmul(x)).sub(offset);
  const PCt = P.mmul(C.transpose());
  const S = symmetrise(Matrix.add(C.mmul(PCt), R));
  const root = choleskyOf(S, 'R');
  const gain = solveFor(S, PCt.transpose(), 'R').transpose();
  const rest = Matrix.sub(Matrix.eye(P.rows), gain.mmul(C));
  const nis = innovation.dot(solveFor(S, innovation, 'R'));
  if (!Number.isFinite(nis)) return giveUp('out-of-range', { field: 'y' });
  const logDet = 2 * root.diagonal().reduce((sum, d) => sum + Math.log(d), 0);
  return {
    x: finiteOrRefuse(Matrix.add(x, gain.mmul(innovation)), 'C'),
    P: symmetrise(rest.mmul(P).mmul(rest.transpose()).add(gain.mmul(R).mmul(gain.transpose()))),
    innovation,
    S,
    gain,
    nis,
    logLikelihood: -0.5 * (y.rows * Math.log(2 * Math.PI) + logDet + nis),
  };
}

/**
 * Makes correlated readings independent: with R = U diag(r) Uᵀ (U unit lower triangle) the readings U⁻¹y have the rows
 * U⁻¹C and independent noises of variance r, and may be taken in one after the other (Bierman 1977, section III.3).
 */
export function decorrelate({ y, C, R, offset }: Measurement): Measurement {
  const root = choleskyOf(R, 'R');
  const diagonal = root.diagonal();
  const U = Matrix.mul(root, 1);
  diagonal.forEach((d, j) => U.mulColumn(j, 1 / d));
  return {
    y: solveFor(U, y, 'R'),
    C: solveFor(U, C, 'R'),
    R: Matrix.diag(diagonal.map((d) => d * d)),
    offset: solveFor(U, offset, 'R'),
  };
}

/** Rows of a measurement whose reading is present (not NaN); null when none is. */
export function present(measurement: Measurement): Measurement | null {
  const rows = measurement.y.to1DArray().flatMap((value, i) => (Number.isNaN(value) ? [] : [i]));
  if (rows.length === 0) return null;
  if (rows.length === measurement.y.rows) return measurement;
  return {
    y: measurement.y.selection(rows, [0]),
    C: measurement.C.subMatrixRow(rows),
    R: measurement.R.selection(rows, rows),
    offset: measurement.offset.selection(rows, [0]),
  };
}

/**
 * Readings and inputs on a regular grid of N steps: `y` N×m and `u` N×p, row after row. A missing reading is NaN in y;
 * u has none (the grid holds the last value, or the run ends).
 */
export type GridSeries = { u: Float64Array; y: Float64Array };

/** One step of a filter run: predicted, filtered, the update's figures where a reading was present, A to the next step. */
export type FilterStep = { predicted: Gaussian; filtered: Gaussian; update: Updated | null; A: Matrix };

/** A filter run on a grid: `z` and `sd` of the first estimated quantity, NIS (NaN without a reading), log-likelihood. */
export type FilterRun = {
  z: Float64Array;
  sd: Float64Array;
  nis: Float64Array;
  logLikelihood: number;
  readings: number;
  steps: FilterStep[];
};

/** Most steps of the readable filter, which keeps every covariance; longer histories go through filter-run.ts. */
export const longestReadableRun = 20_000;

/**
 * Kalman filter over a regular grid: at each k the readings present update, z[k] = H x[k|k] + F u[k] is reported, then
 * x[k+1|k] follows. Log-likelihood: Σ over the steps with readings, the first one included, −½(mₖ ln 2π + ln det Sₖ +
 * NISₖ), given x0 and P0. Refuses `singular` (R), `not-positive-semidefinite` (Q, P0), `wrong-shape` (u, y, x0),
 * `non-finite-input` (u; an infinity in y).
 */
export function kalmanFilter(
  model: ModelRows,
  noise: NoiseRows,
  start: FilterStart,
  series: GridSeries,
): Result<FilterRun> {
  return attemptSeries(() => {
    const M = readModel(model);
    const Q = readSemidefinite(noise?.Q, 'Q', M.n);
    const R = readDefinite(noise.R, 'R', M.m);
    const N = readSeries(M, series, longestReadableRun);
    requireFinite(series);
    return runFilter({ M, Q, R, state: readStart(start, M.n), ...series, N });
  });
}

function runFilter(
  job: { M: ModelMatrices; Q: Matrix; R: Matrix; state: Gaussian; N: number } & GridSeries,
): FilterRun {
  const { M, Q, R, N } = job;
  let { state } = job;
  const run: FilterRun = {
    z: new Float64Array(N),
    sd: new Float64Array(N),
    nis: new Float64Array(N).fill(NaN),
    logLikelihood: 0,
    readings: 0,
    steps: [],
  };
  const h = M.H.getRowVector(0);
  for (let k = 0; k < N; k++) {
    const u = columnAt(job.u, k, M.p);
    const predicted = state;
    const measured = present({ y: columnAt(job.y, k, M.m), C: M.C, R, offset: M.D.mmul(u) });
    const updated = measured ? update(predicted, measured) : null;
    const filtered = updated ?? predicted;
    run.steps.push({ predicted, filtered, update: updated, A: M.A });
    run.z[k] = h.mmul(filtered.x).get(0, 0) + M.F.getRowVector(0).mmul(u).get(0, 0);
    run.sd[k] = Math.sqrt(Math.max(h.mmul(filtered.P).mmul(h.transpose()).get(0, 0), 0));
    if (updated) run.nis[k] = updated.nis;
    run.logLikelihood += updated?.logLikelihood ?? 0;
    run.readings += updated?.innovation.rows ?? 0;
    state = predict(filtered, { A: M.A, B: M.B, Q, u });
  }
  if (!allFinite(run.z) || !allFinite(run.sd)) return giveUp('out-of-range', { field: 'H' });
  return run;
}

function columnAt(series: Float64Array, k: number, width: number): Matrix {
  const column = new Matrix(width, 1);
  for (let i = 0; i < width; i++) column.set(i, 0, series[k * width + i]!);
  return column;
}

/** Reads x0 and P0. Throws `Refused`. */
export function readStart(start: FilterStart, n: number): Gaussian {
  return { x: readColumn(start?.x0, 'x0', n), P: readSemidefinite(start?.P0, 'P0', n) };
}

/** Checks the shapes of u and y and gives the number of steps N. Throws `Refused`. */
export function readSeries(M: ModelMatrices, series: GridSeries, longest = 200_000_000): number {
  const { u, y } = series ?? {};
  if (!(y instanceof Float64Array)) return giveUp('wrong-shape', { field: 'y' });
  if (!(u instanceof Float64Array)) return giveUp('wrong-shape', { field: 'u' });
  const N = y.length / M.m;
  if (!Number.isInteger(N))
    return giveUp('wrong-shape', { field: 'y', needed: Math.ceil(N) * M.m, got: y.length });
  if (N < 1) return giveUp('not-enough-data', { field: 'y', needed: M.m, got: y.length });
  if (N > longest) return giveUp('out-of-range', { field: 'y', figure: N });
  if (u.length !== N * M.p) return giveUp('wrong-shape', { field: 'u', needed: N * M.p, got: u.length });
  return N;
}

/**
 * Refuses `non-finite-input` for a NaN or an infinity in u or an infinity in y. The fast filter calls it only when its
 * result is not finite: each of them poisons the state for good, so that a sound history needs no pass of its own.
 */
export function requireFinite({ u, y }: GridSeries): void {
  if (!u.every(Number.isFinite)) giveUp('non-finite-input', { field: 'u' });
  if (y.some((value) => Math.abs(value) === Infinity)) giveUp('non-finite-input', { field: 'y' });
}
