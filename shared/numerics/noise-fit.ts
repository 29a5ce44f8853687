import { Matrix } from 'ml-matrix';
import { attempt, giveUp } from './attempt.ts';
import { filterSeries } from './filter-run.ts';
import { readSeries, readStart, requireFinite } from './kalman.ts';
import type { FilterStart, GridSeries } from './kalman.ts';
import { eigenvaluesOf, readMatrix, readPositive, readSymmetric, rowsOf } from './linear-algebra.ts';
import { hessianOf, inverseOf, maximise } from './maximise.ts';
import type { Maximum, Objective } from './maximise.ts';
import { notEnough } from './result.ts';
import type { Result } from './result.ts';
import { readModel } from './state-space.ts';
import type { ModelRows, NoiseRows, Rows } from './state-space.ts';

/**
 * A variance to be found: `pattern` (n×n for Q, m×m for R; a 1 on the diagonal, mostly) times it is added to that
 * covariance. `start` inside the bounds `low` < `high`, all above zero.
 */
export type VarianceParameter = {
  name: string;
  in: 'Q' | 'R';
  pattern: Rows;
  start: number;
  low: number;
  high: number;
};

/** A variance found: its standard error and 95 % interval (from the curvature of the log-likelihood in ln variance). */
export type FittedVariance = {
  name: string;
  variance: number;
  standardError: number;
  low: number;
  high: number;
};

/** The fit: variances, Q and R with them, the largest log-likelihood and the readings it rests on. */
export type NoiseFit = {
  parameters: FittedVariance[];
  Q: number[][];
  R: number[][];
  logLikelihood: number;
  readings: number;
};

/** Readings needed for each variance. */
export const readingsPerVariance = 20;

/** Widest 95 % interval, up or down, that still counts as an answer. */
const widestFactor = 10;

/** Two log-likelihoods closer than this (χ²₁ at 95 %, halved) are not told apart by the data. */
const toldApart = 1.92;

/** Each start multiplies the variances of Q and of R by these. */
const starts = [
  { Q: 1, R: 1 },
  { Q: 30, R: 1 },
  { Q: 1 / 30, R: 1 },
  { Q: 1, R: 10 },
];

/**
 * Noise variances by maximum likelihood: the largest log-likelihood of the Kalman filter over the history (Harvey 1989,
 * section 3.4), searched in ln variance from several starts. The first `burnIn` steps start the filter and do not count
 * (all steps up to the first complete set of readings, for a start that knows nothing). Refuses `not-enough-data`, and
 * `cannot-tell` with the field of the variance (`figure`: the factor of its 95 % interval): at a bound, a 95 % interval
 * wider than a factor of 10 either way, a flat direction, or two answers as likely as each other.
 */
export function fitNoise(
  model: ModelRows,
  fixed: NoiseRows,
  parameters: VarianceParameter[],
  start: FilterStart,
  series: GridSeries,
  burnIn = 0,
): Result<NoiseFit> {
  return attempt(() => {
    const job = readJob(model, fixed, parameters, start, series, burnIn);
    const box = {
      low: job.parameters.map((p) => Math.log(p.low)),
      high: job.parameters.map((p) => Math.log(p.high)),
    };
    const likelihood: Objective = (x) => logLikelihoodAt(job, x);
    const found = starts
      .map((factor) => job.parameters.map((p) => Math.log(p.start * factor[p.in])))
      .map((x) => maximise(likelihood, x, box))
      .sort((a, b) => b.value - a.value);
    const best = found[0]!;
    if (!Number.isFinite(best.value)) return giveUp('not-converged', { field: 'parameters' });
    const errors = standardErrors(likelihood, best, box);
    requireOneAnswer(found, errors);
    const { Q, R } = covariances(job, best.x);
    return {
      parameters: job.parameters.map((p, i) => fitted(p.name, best.x[i]!, errors[i]!)),
      Q: rowsOf(Q),
      R: rowsOf(R),
      logLikelihood: best.value,
      readings: job.readings,
    };
  });
}

function readJob(
  model: ModelRows,
  fixed: NoiseRows,
  parameters: VarianceParameter[],
  start: FilterStart,
  series: GridSeries,
  burnIn: number,
) {
  const M = readModel(model);
  const N = readSeries(M, series);
  requireFinite(series);
  readStart(start, M.n);
  const base = { Q: readSymmetric(fixed?.Q, 'Q', M.n), R: readSymmetric(fixed.R, 'R', M.m) };
  const read = readParameters(parameters, M);
  if (!Number.isInteger(burnIn) || burnIn < 0 || burnIn >= N) {
    return giveUp('out-of-range', { field: 'burnIn', figure: burnIn });
  }
  const late = { u: series.u.subarray(burnIn * M.p), y: series.y.subarray(burnIn * M.m) };
  const early = { u: series.u.subarray(0, burnIn * M.p), y: series.y.subarray(0, burnIn * M.m) };
  const readings = late.y.reduce((count, value) => count + (Number.isNaN(value) ? 0 : 1), 0);
  const needed = readingsPerVariance * read.length;
  const few = notEnough('y', needed, readings);
  if (readings < needed) return giveUp(few.reason, few);
  return { model, base, parameters: read, start, early, late, readings };
}

type Job = ReturnType<typeof readJob>;

function readParameters(parameters: unknown, { n, m }: { n: number; m: number }) {
  if (!Array.isArray(parameters)) return giveUp('wrong-shape', { field: 'parameters' });
  if (parameters.length < 1 || parameters.length > 8) {
    return giveUp('out-of-range', { field: 'parameters', figure: parameters.length });
  }
  return parameters.map((given: VarianceParameter, i) => {
    const field = `parameters[${i}]`;
    if (given?.in !== 'Q' && given?.in !== 'R') return giveUp('out-of-range', { field: `${field}.in` });
    const pattern = readSymmetric(given.pattern, `${field}.pattern`, given.in === 'Q' ? n : m);
    const low = readPositive(given.low, `${field}.low`);
    const high = readPositive(given.high, `${field}.high`);
    const start = readPositive(given.start, `${field}.start`);
    if (!(low < high)) return giveUp('out-of-range', { field: `${field}.high`, figure: high });
    if (start < low || start > high)
      return giveUp('out-of-range', { field: `${field}.start`, figure: start });
    return { name: String(given.name), in: given.in, pattern, low, high, start };
  });
}

function covariances({ base, parameters }: Job, x: readonly number[]): { Q: Matrix; R: Matrix } {
  const sums = { Q: base.Q.clone(), R: base.R.clone() };
  parameters.forEach((p, i) => sums[p.in].add(Matrix.mul(p.pattern, Math.exp(x[i]!))));
  return sums;
}

/** Log-likelihood of the readings after the burn-in; −Infinity where the filter refuses these variances. */
function logLikelihoodAt(job: Job, x: readonly number[]): number {
  const { Q, R } = covariances(job, x);
  const noise = { Q: rowsOf(Q), R: rowsOf(R) };
  const run = (start: FilterStart, series: GridSeries) =>
    filterSeries(job.model, noise, start, series, { sd: false, nis: false });
  let { start } = job;
  if (job.early.y.length > 0) {
    const first = run(start, job.early);
    if (!first.ok) return -Infinity;
    start = first.next;
  }
  const rest = run(start, job.late);
  return rest.ok ? rest.logLikelihood : -Infinity;
}

/** Standard errors of ln variance from the inverse of the observed information (Harvey 1989, eq. 3.4.60 from memory). */
function standardErrors(f: Objective, { x }: Maximum, box: { low: number[]; high: number[] }): number[] {
  x.forEach((value, i) => {
    const atBound = value - box.low[i]! < 0.1 || box.high[i]! - value < 0.1;
    if (atBound) giveUp('cannot-tell', { field: `parameters[${i}]`, figure: Math.exp(value) });
  });
  const information = readMatrix(
    hessianOf(f, x).map((row) => row.map((value) => -value)),
    'parameters',
  );
  const flattest = Math.min(...eigenvaluesOf(information, 'parameters').map((e) => e.re));
  if (!(flattest > 0)) return giveUp('cannot-tell', { field: 'parameters', figure: flattest });
  const errors = inverseOf(rowsOf(information), 'parameters').diagonal().map(Math.sqrt);
  errors.forEach((error, i) => {
    const factor = Math.exp(1.96 * error);
    if (factor > widestFactor) giveUp('cannot-tell', { field: `parameters[${i}]`, figure: factor });
  });
  return errors;
}

/** Refuses when another start ended elsewhere with a log-likelihood that the data can't tell from the best. */
function requireOneAnswer(found: Maximum[], errors: number[]): void {
  const best = found[0]!;
  for (const other of found.slice(1)) {
    if (best.value - other.value > toldApart) continue;
    const apart = other.x.findIndex((value, i) => Math.abs(value - best.x[i]!) > 4 * errors[i]!);
    if (apart >= 0)
      giveUp('cannot-tell', { field: `parameters[${apart}]`, figure: Math.exp(other.x[apart]!) });
  }
}

function fitted(name: string, x: number, error: number): FittedVariance {
  const variance = Math.exp(x);
  const factor = Math.exp(1.96 * error);
  return { name, variance, standardError: variance * error, low: variance / factor, high: variance * factor };
}
