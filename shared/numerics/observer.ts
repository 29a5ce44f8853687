import { Matrix } from 'ml-matrix';
import { attemptSeries, giveUp } from './attempt.ts';
import { mostReadings } from './filter-setup.ts';
import { changeCoordinates, fixedGain, flat } from './fixed-gain.ts';
import type { FixedGain } from './fixed-gain.ts';
import { readSeries, requireFinite } from './kalman.ts';
import type { GridSeries } from './kalman.ts';
import { hasPattern } from './kernels/general-kernels.ts';
import type { FilterWork, SteadyWork } from './kernels/work.ts';
import { readColumn, readMatrix, spectralRadius } from './linear-algebra.ts';
import type { Result } from './result.ts';
import { readModel } from './state-space.ts';
import type { ModelMatrices, ModelRows, Rows } from './state-space.ts';

/**
 * A typed gain n×m. Filter form: x[k|k] = x[k|k−1] + L (y − C x[k|k−1] − D u); predictor form (Luenberger 1971):
 * x[k+1|k] = A x[k|k−1] + B u + K (y − C x[k|k−1] − D u), K = A L.
 */
export type ObserverGain = { form: 'filter' | 'predictor'; gain: Rows };

/**
 * An observer's run: `z` of the first estimated quantity, filtered (filter form) or predicted (predictor form), and `x`
 * predicted for the step after the last.
 */
export type ObserverSeries = { z: Float64Array; x: number[] };

/**
 * Runs a fixed-gain observer over a grid of N steps from x0, the state before the first reading. Where a reading is missing
 * (NaN) its innovation is left out: the model runs on by itself, the last reading is never used again. Refuses
 * `unstable` (gain, `figure`: largest modulus of A − K C), `wrong-shape`, `non-finite-input`.
 */
export function runObserver(
  model: ModelRows,
  gain: ObserverGain,
  x0: number[],
  series: GridSeries,
): Result<ObserverSeries> {
  return attemptSeries(() => {
    const M = readModel(model);
    if (M.m > mostReadings) return giveUp('out-of-range', { field: 'C', figure: M.m });
    const { L, K } = readGain(gain, M);
    const radius = spectralRadius(Matrix.sub(M.A, K.mmul(M.C)), 'gain');
    if (radius >= 1) return giveUp('unstable', { field: 'gain', figure: radius });
    const start = readColumn(x0, 'x0', M.n);
    const N = readSeries(M, series);
    const all = Array.from({ length: M.m }, (_, j) => j);
    const steady = fixedGain(M, { L, K, C: M.C, present: all });
    const work = observerWork(M, start, withoutFeedthrough(M, series), N);
    run(work, steady, N);
    if (![...work.x, work.sums[3]!].every(Number.isFinite)) {
      requireFinite(series);
      return giveUp('unstable', { field: 'A' });
    }
    return { z: work.z, x: Array.from(work.x) };
  });
}

/** L and K; the predictor form reports x[k|k−1], so its L is taken as 0. */
function readGain(gain: ObserverGain, M: ModelMatrices): { L: Matrix; K: Matrix } {
  const G = readMatrix(gain?.gain, 'gain', { rows: M.n, columns: M.m });
  if (gain.form === 'filter') return { L: G, K: M.A.mmul(G) };
  if (gain.form === 'predictor') return { L: Matrix.zeros(M.n, M.m), K: G };
  return giveUp('out-of-range', { field: 'form' });
}

/** y − D u, a copy only where D is not zero. */
function withoutFeedthrough(M: ModelMatrices, { u, y }: GridSeries): GridSeries {
  if (M.D.max() === 0 && M.D.min() === 0) return { u, y };
  const less = y.slice();
  for (let k = 0; k * M.m < y.length; k++) {
    for (let j = 0; j < M.m; j++) {
      for (let i = 0; i < M.p; i++) less[k * M.m + j]! -= M.D.get(j, i) * u[k * M.p + i]!;
    }
  }
  return { u, y: less };
}

const none = new Float64Array(0);

function observerWork(M: ModelMatrices, start: Matrix, { u, y }: GridSeries, N: number): FilterWork {
  return {
    ...{ n: M.n, m: M.m, p: M.p, u, y, yStart: 0, x: flat(start), z: new Float64Array(N) },
    ...{
      A: none,
      B: none,
      Q: none,
      C: none,
      R: none,
      H: none,
      F: none,
      P: none,
      sd: none,
      nis: none,
      white: none,
    },
    sums: new Float64Array(4),
  };
}

/** The kernel while all readings are there, one step at a time where some are not. */
function run(work: FilterWork, fixed: FixedGain, N: number): void {
  const { kernel, work: steady } = fixed;
  changeCoordinates(fixed.toKernel, work.x);
  const next = new Float64Array(work.n);
  let k = 0;
  while (k < N) {
    k = kernel(work, steady, k, N);
    while (k < N && !hasPattern(work.y, k * work.m, steady.present, steady.absent))
      stepWithGaps(work, steady, k++, next);
  }
  changeCoordinates(fixed.fromKernel, work.x);
}

/** x = (A − K C) x + K y + B u where the innovation of each missing reading is put to 0, by y = C x. */
function stepWithGaps(work: FilterWork, steady: SteadyWork, k: number, next: Float64Array): void {
  const { n, m, p, x, u, y } = work;
  const { M, B, K, C, H, G, F } = steady;
  let z = 0;
  for (let i = 0; i < n; i++) {
    z += H[i]! * x[i]!;
    next[i] = 0;
    for (let l = 0; l < n; l++) next[i]! += M[i * n + l]! * x[l]!;
  }
  for (let j = 0; j < m; j++) {
    let expected = 0;
    for (let l = 0; l < n; l++) expected += C[j * n + l]! * x[l]!;
    const reading = y[k * m + j]!;
    const value = reading === reading ? reading : expected;
    z += G[j]! * (value - expected);
    for (let i = 0; i < n; i++) next[i]! += K[j * n + i]! * value;
  }
  for (let j = 0; j < p; j++) {
    z += F[j]! * u[k * p + j]!;
    for (let i = 0; i < n; i++) next[i]! += B[j * n + i]! * u[k * p + j]!;
  }
  work.z[k] = z;
  work.sums[3]! += z - z;
  x.set(next);
}
