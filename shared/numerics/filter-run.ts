import { attemptSeries, giveUp } from './attempt.ts';
import { advanceTo, predictNext, startRunner } from './filter-runner.ts';
import type { FilterOptions, Runner } from './filter-runner.ts';
import { FilterSetup, mostReadings } from './filter-setup.ts';
import { readSeries, readStart, requireFinite } from './kalman.ts';
import type { FilterStart, GridSeries } from './kalman.ts';
import { readDefinite, readSemidefinite } from './linear-algebra.ts';
import type { Result } from './result.ts';
import { readModel } from './state-space.ts';
import type { ModelRows, NoiseRows } from './state-space.ts';

/**
 * A filter run over N steps: `z` and `sd` of the first estimated quantity (filtered), NIS of each step (NaN without a
 * reading; its expectation is the number of readings present), `innovations` N×m, S^(−1/2)v by the lower triangle (unit
 * variance and white under the model, NaN where a reading is missing), log-likelihood (convention of kalmanFilter), number
 * of readings, x and P predicted for step N (a start for what follows), and how many steps ran with the fixed gain.
 */
export type FilterSeries = {
  z: Float64Array;
  sd: Float64Array;
  nis: Float64Array;
  innovations: Float64Array;
  logLikelihood: number;
  readings: number;
  next: { x0: number[]; P0: number[][] };
  fixedGainSteps: number;
};

/**
 * Kalman filter over a regular grid of any length. Arguments, results and refusals are those of kalmanFilter; C has at
 * most 30 rows (`out-of-range`), and a run whose estimate leaves the range of numbers is refused (`unstable`, A).
 */
export function filterSeries(
  model: ModelRows,
  noise: NoiseRows,
  start: FilterStart,
  series: GridSeries,
  options: FilterOptions = {},
): Result<FilterSeries> {
  return attemptSeries(() => {
    const setup = readSetup(model, noise);
    const N = readSeries(setup.M, series);
    const runner = startRunner(setup, readStart(start, setup.M.n), series, N, options);
    advanceTo(runner, N);
    return finish(runner);
  });
}

/** Reads and checks model and noise. Throws `Refused`. */
export function readSetup(model: ModelRows, noise: NoiseRows): FilterSetup {
  const M = readModel(model);
  if (M.m > mostReadings) return giveUp('out-of-range', { field: 'C', figure: M.m });
  return new FilterSetup(M, readSemidefinite(noise?.Q, 'Q', M.n), readDefinite(noise.R, 'R', M.m));
}

/** The results of a run that has come to its end; refuses `unstable` when the estimate left the range of numbers. */
export function finish(runner: Runner): FilterSeries {
  predictNext(runner);
  const { x, P, n, z, sd, nis, white, sums } = runner.work;
  const [readings, logDet, quad, check] = sums as unknown as [number, number, number, number];
  const logLikelihood = -0.5 * (readings * Math.log(2 * Math.PI) + logDet + quad);
  const rows = Array.from({ length: n }, (_, i) => Array.from(P.subarray(i * n, (i + 1) * n)));
  if (![logLikelihood, check, ...x, ...P].every(Number.isFinite)) {
    requireFinite({ u: runner.work.u, y: runner.y });
    return [...x, ...P].every(Number.isFinite)
      ? giveUp('out-of-range', { field: 'y' })
      : giveUp('unstable', { field: 'A' });
  }
  const next = { x0: Array.from(x), P0: rows };
  return {
    z,
    sd,
    nis,
    innovations: white,
    logLikelihood,
    readings,
    next,
    fixedGainSteps: runner.fixedGainSteps,
  };
}
