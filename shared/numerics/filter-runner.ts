import { changeCoordinates, flat } from './fixed-gain.ts';
import type { FilterSetup, Pattern, SteadyPattern } from './filter-setup.ts';
import type { Gaussian, GridSeries } from './kalman.ts';
import { advance, advanceState } from './kernels/general-kernels.ts';
import { filterKernelFor } from './kernels/kernels.ts';
import type { FilterKernel, FilterWork } from './kernels/work.ts';

/*
 * The Kalman filter over long histories: the same results as kalmanFilter of kalman.ts, through kernels that are unrolled
 * for the number of states and that allocate nothing. Once P is within 1e-10 of the Riccati solution for the present
 * measurement pattern the gain is held fixed; when the pattern changes the time-varying filter takes over again.
 */

/** Largest |P − P∞| relative to √(Pᵢᵢ Pⱼⱼ) at which the gain counts as converged. */
const converged = 1e-10;

/** Steps between two looks at P. */
const chunk = 64;

/**
 * What a run does: `switching` to the fixed gain, and whether it fills `sd`, `nis` (all true by default) and
 * `innovations` (default false).
 */
export type FilterOptions = { switching?: boolean; sd?: boolean; nis?: boolean; innovations?: boolean };

/** A run under way: `k` is the next step, x and P are predicted for it where `predicted`, else filtered at k − 1. */
export type Runner = {
  readonly setup: FilterSetup;
  readonly kernel: FilterKernel;
  readonly work: FilterWork;
  readonly y: Float64Array;
  readonly scratch: Float64Array | null;
  readonly N: number;
  readonly switching: boolean;
  k: number;
  predicted: boolean;
  fixedGainSteps: number;
};

/** Sets up a run; the arrays of results are made here and nowhere later. */
export function startRunner(
  setup: FilterSetup,
  start: Gaussian,
  series: GridSeries,
  N: number,
  { switching = true, sd = true, nis = true, innovations = false }: FilterOptions,
): Runner {
  const room = (wanted: boolean) => new Float64Array(wanted ? N : 0);
  const white = new Float64Array(innovations ? N * setup.M.m : 0).fill(NaN);
  const scratch = setup.correlated || setup.feedthrough ? new Float64Array(chunk * setup.M.m) : null;
  return {
    setup,
    kernel: filterKernelFor(setup.M.n),
    work: {
      ...filterWork(setup, start, series),
      z: new Float64Array(N),
      sd: room(sd),
      nis: room(nis),
      white,
    },
    y: series.y,
    scratch,
    N,
    switching,
    k: 0,
    predicted: true,
    fixedGainSteps: 0,
  };
}

function filterWork(
  { M, Q, R }: FilterSetup,
  start: Gaussian,
  series: GridSeries,
): Omit<FilterWork, 'z' | 'sd' | 'nis' | 'white'> {
  return {
    n: M.n,
    m: M.m,
    p: M.p,
    A: flat(M.A),
    B: flat(M.B.transpose()),
    Q: flat(Q),
    C: flat(M.C),
    R: Float64Array.from(R.diagonal()),
    H: Float64Array.from(M.H.getRow(0)),
    F: Float64Array.from(M.F.getRow(0)),
    u: series.u,
    y: series.y,
    yStart: 0,
    x: flat(start.x),
    P: flat(start.P),
    sums: new Float64Array(4),
  };
}

/** Runs steps runner.k … `to` − 1. */
export function advanceTo(runner: Runner, to: number): void {
  while (runner.k < to) {
    const steady = runner.switching ? steadyNow(runner) : null;
    if (steady) runFixed(runner, steady, to);
    else runVarying(runner, Math.min(runner.k + chunk, to));
  }
}

/** Runs the one step runner.k and leaves x and P filtered at it. */
export function stepFiltered(runner: Runner): void {
  runVarying(runner, runner.k + 1);
}

/** x and P predicted for runner.k. */
export function predictNext(runner: Runner): void {
  if (runner.predicted || runner.k === 0) return;
  advance(runner.work, runner.k - 1);
  runner.predicted = true;
}

/** The pattern of row `k` of the readings. */
function patternAt(y: Float64Array, m: number, k: number): Pattern {
  let pattern = 0;
  for (let j = 0; j < m; j++) if (y[k * m + j]! === y[k * m + j]!) pattern |= 1 << j;
  return pattern;
}

/** First step after `from` whose pattern is another, at most `to`. */
function patternEnd(y: Float64Array, m: number, pattern: Pattern, from: number, to: number): number {
  let k = from;
  while (k < to && patternAt(y, m, k) === pattern) k++;
  return k;
}

/** The steady state to switch to: the pattern has lasted a chunk and P has come within 1e-10 of the Riccati solution. */
function steadyNow({ setup, work, y, k, predicted }: Runner): SteadyPattern | null {
  const { m } = setup.M;
  if (k < chunk) return null;
  const pattern = patternAt(y, m, k);
  if (patternEnd(y, m, pattern, k - chunk, k) < k) return null;
  const steady = setup.steady(pattern);
  if (!steady) return null;
  return isNear(work.P, predicted ? steady.predicted : steady.filtered, work.n) ? steady : null;
}

function isNear(P: Float64Array, limit: Float64Array, n: number): boolean {
  for (let i = 0; i < n; i++) {
    for (let j = 0; j <= i; j++) {
      const allowed = converged * Math.sqrt(Math.abs(limit[i * n + i]! * limit[j * n + j]!));
      if (!(Math.abs(P[i * n + j]! - limit[i * n + j]!) <= allowed)) return false;
    }
  }
  return true;
}

function runFixed(runner: Runner, steady: SteadyPattern, to: number): void {
  const { work, scratch } = runner;
  const from = runner.k;
  if (!runner.predicted) advanceState(work, from - 1, new Float64Array(work.n));
  changeCoordinates(steady.toKernel, work.x);
  if (runner.setup.feedthrough && scratch) {
    let end = from;
    while (runner.k < to && end === runner.k) {
      end = Math.min(runner.k + chunk, to);
      withoutFeedthrough(runner, end);
      runner.k = steady.kernel(work, steady.work, runner.k, end);
    }
    readPlain(runner);
  } else {
    runner.k = steady.kernel(work, steady.work, from, to);
  }
  changeCoordinates(steady.fromKernel, work.x);
  const steps = runner.k - from;
  if (work.sd.length > 0) work.sd.fill(steady.sd, from, runner.k);
  work.sums[0]! += steps * steady.work.m;
  work.sums[1]! += steps * steady.logDet;
  work.P.set(steady.predicted);
  runner.predicted = true;
  runner.fixedGainSteps += steps;
}

function runVarying(runner: Runner, to: number): void {
  const { work, setup, y } = runner;
  let end = to;
  if (setup.correlated) {
    const pattern = patternAt(y, setup.M.m, runner.k);
    end = patternEnd(y, setup.M.m, pattern, runner.k, to);
    withoutFeedthrough(runner, end);
    makeIndependent(runner, pattern, end);
  } else if (setup.feedthrough) {
    withoutFeedthrough(runner, end);
  }
  runner.kernel(work, runner.k, end, runner.predicted);
  runner.k = end;
  runner.predicted = false;
  readPlain(runner);
}

/** Points the kernels at a scratch copy of rows runner.k … `to` − 1 that holds y − D u. */
function withoutFeedthrough({ work, scratch, setup, k, y }: Runner, to: number): void {
  const { D, m, p } = setup.M;
  for (let row = k; row < to; row++) {
    for (let j = 0; j < m; j++) {
      let value = y[row * m + j]!;
      for (let i = 0; i < p; i++) value -= D.get(j, i) * work.u[row * p + i]!;
      scratch![(row - k) * m + j] = value;
    }
  }
  work.y = scratch!;
  work.yStart = k;
}

/** Replaces the scratch rows by readings with independent noise, and C and R by theirs. */
function makeIndependent({ work, setup, k, scratch }: Runner, pattern: Pattern, to: number): void {
  const { C, R, inverse, present } = setup.independent(pattern);
  const { m } = setup.M;
  for (let row = k; row < to; row++) {
    const at = (row - k) * m;
    // U⁻¹ is a lower triangle: from the last row up, each reading needs only those before it.
    for (let i = present.length - 1; i >= 0; i--) {
      let value = 0;
      for (let j = 0; j <= i; j++) value += inverse.get(i, j) * scratch![at + present[j]!]!;
      scratch![at + present[i]!] = value;
    }
  }
  work.C = C;
  work.R = R;
}

/** Points the kernels back at the readings themselves. */
function readPlain({ work, y }: Runner): void {
  work.y = y;
  work.yStart = 0;
}
