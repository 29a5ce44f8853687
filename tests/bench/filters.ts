import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { filterSeries } from '../../shared/numerics/filter-run.ts';
import { filterWithLateSamples } from '../../shared/numerics/late-samples.ts';
import { runObserver } from '../../shared/numerics/observer.ts';
import type { Figure } from './figure.ts';
import { compiledPeer, fastest, statsmodelsPeer } from './filter-peers.ts';
import type { Peer, PeerLine } from './filter-peers.ts';

/** Four lumps in a row, two measured, two inputs; a reading a minute for a year. */
const problem = {
  A: [
    [0.985, 0.012, 0, 0],
    [0.008, 0.975, 0.015, 0],
    [0, 0.011, 0.969, 0.016],
    [0, 0, 0.013, 0.978],
  ],
  B: [
    [0.21, 0],
    [0, 0],
    [0, 0],
    [0, 0.055],
  ],
  C: [
    [0, 1, 0, 0],
    [0, 0, 0, 1],
  ],
  H: [[1, 0, 0, 0]],
  Q: [0.09, 0.04, 0.04, 0.02].map((q, i) => [0, 1, 2, 3].map((j) => (i === j ? q : 0))),
  R: [
    [1.44, 0],
    [0, 0.49],
  ],
  x0: [1100, 550, 320, 240],
  P0: [0, 1, 2, 3].map((i) => [0, 1, 2, 3].map((j) => (i === j ? 100 : 0))),
};
const steps = 525_600;
const rounds = 20;

/** Inputs and readings of the problem; the noise comes from the Park–Miller generator that the peers use. */
function history() {
  const u = new Float64Array(2 * steps);
  const y = new Float64Array(2 * steps);
  let state = 1;
  const random = () => (state = (16807 * state) % 2147483647) / 2147483647;
  for (let k = 0; k < steps; k++) {
    const day = (2 * Math.PI * k) / 1440;
    const week = (2 * Math.PI * k) / 10080;
    u[2 * k] = 50 + 10 * Math.sin(day);
    u[2 * k + 1] = 20 + 3 * Math.sin(week);
    y[2 * k] = 562 + 15 * Math.sin(day - 0.5) + 4 * (random() - 0.5);
    y[2 * k + 1] = 242 + 6 * Math.sin(week) + 2 * (random() - 0.5);
  }
  return { u, y };
}

type Outcome = { z: Float64Array; logLikelihood?: number };

/** Shortest of several runs, ms, and the outcome. */
class Stopwatch {
  best = Infinity;
  outcome: Outcome | null = null;
  constructor(private readonly run: () => { ok: boolean }) {}

  lap(): void {
    const begun = performance.now();
    const result = this.run();
    this.best = Math.min(this.best, performance.now() - begun);
    if (!result.ok) throw new Error(`refused: ${JSON.stringify(result)}`);
    this.outcome = result as unknown as Outcome;
  }
}

/** Throws unless ours and the peer's agree to 9 digits. */
function requireAgreement(name: string, ours: Outcome, peer: PeerLine | undefined): void {
  if (!peer) return;
  let sum = 0;
  for (const value of ours.z) sum += value;
  const pairs: [number, number][] = [
    [sum, peer.sumZ],
    [ours.z[steps - 1]!, peer.lastZ],
  ];
  if (peer.logLikelihood !== undefined) pairs.push([ours.logLikelihood!, peer.logLikelihood]);
  for (const [a, b] of pairs) {
    if (Math.abs(a / b - 1) > 1e-9) throw new Error(`${name}: ${a} against ${b} of ${peer.peer}`);
  }
}

function figure(
  name: string,
  value: number,
  peer: string,
  peerValue: number | null,
  target: number,
  unit = 'ms',
): Figure {
  const ratio = peerValue === null ? null : value / peerValue;
  return { name, value, unit, peer, peerValue, ratio, target, met: ratio === null ? null : ratio <= target };
}

/** Bytes that a run holds at its end (it allocates nothing on the way) together with its inputs, in units of the inputs. */
function memoryRatio(series: { u: Float64Array; y: Float64Array }): number {
  const held = () => process.memoryUsage().arrayBuffers;
  const before = held();
  const run = filterSeries(problem, problem, problem, series);
  if (!run.ok) throw new Error('refused');
  const inputs = series.u.byteLength + series.y.byteLength;
  return (inputs + Math.max(held() - before, 0)) / inputs;
}

function samplesEvery8Hours(lateSteps: number) {
  return Array.from({ length: Math.floor(steps / 480) - 1 }, (_, i) => {
    const takenAt = 480 * (i + 1);
    return { takenAt, reportedAt: takenAt + lateSteps, value: 1112, variance: 4 };
  });
}

/**
 * The filters on a year of minutes against the C peer, statsmodels and themselves: best of several rounds in which all
 * take turns, results compared to 9 digits. A peer that is not there is skipped.
 */
export async function filterFigures(): Promise<Figure[]> {
  const folder = mkdtempSync(join(tmpdir(), 'filter-bench-'));
  try {
    return measure(compiledPeer(folder), statsmodelsPeer());
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

function measure(runC: (() => Peer) | null, statsmodels: Peer): Figure[] {
  const series = history();
  const lean = { sd: false, nis: false };
  const model = problem;
  const late = (lateSteps: number | null) => {
    const samples = lateSteps === null ? [] : samplesEvery8Hours(lateSteps);
    return new Stopwatch(() =>
      filterWithLateSamples(model, model, model, series, samples, { switching: false }),
    );
  };
  const varying = new Stopwatch(() =>
    filterSeries(model, model, model, series, { ...lean, switching: false }),
  );
  const switching = new Stopwatch(() => filterSeries(model, model, model, series, lean));
  const steady = lastGain(series);
  const observer = new Stopwatch(() =>
    runObserver(model, { form: 'filter', gain: steady }, model.x0, series),
  );
  const [none, two, eight] = [late(null), late(120), late(480)];
  let c: Peer = null;
  for (let round = 0; round < rounds; round++) {
    for (const watch of [varying, switching, observer, none, two, eight]) watch.lap();
    c = fastest(c, runC?.() ?? null);
  }
  requireAgreement('filter', varying.outcome!, c?.filter);
  requireAgreement('filter', varying.outcome!, statsmodels?.filter);
  requireAgreement('filter with the converged gain', switching.outcome!, c?.filter);
  requireAgreement('observer', observer.outcome!, c?.observer);
  const filterMs = c?.filter.ms ?? null;
  const observerMs = c?.observer.ms ?? null;
  return [
    figure(
      'Kalman filter, time-varying, a year of minutes',
      varying.best,
      'C -O3, plain update',
      filterMs,
      2,
    ),
    figure('Kalman filter, the same', varying.best, 'statsmodels', statsmodels?.filter.ms ?? null, 1 / 8),
    figure(
      'Kalman filter, converged gain, with log-likelihood',
      switching.best,
      'C -O3, fixed gain',
      observerMs,
      1.5,
    ),
    figure('fixed-gain observer', observer.best, 'C -O3, fixed gain', observerMs, 1.5),
    figure(
      'laboratory sample every 8 h, reported 2 h late',
      two.best,
      'the same run without samples',
      none.best,
      1.4,
    ),
    figure(
      'laboratory sample every 8 h, reported 8 h late',
      eight.best,
      'the same run without samples',
      none.best,
      2.2,
    ),
    figure('memory at the end of a run', memoryRatio(series), 'its inputs', 1, 3, '× inputs'),
  ];
}

/** The gain that the C peer's observer holds: the filter's last one. */
function lastGain(series: { u: Float64Array; y: Float64Array }): number[][] {
  const run = filterSeries(problem, problem, problem, series, { switching: false, sd: false, nis: false });
  if (!run.ok) throw new Error('refused');
  const P = run.next.P0;
  const S = problem.C.map((a, i) => problem.C.map((b, j) => quadratic(a, P, b) + problem.R[i]![j]!));
  const determinant = S[0]![0]! * S[1]![1]! - S[0]![1]! * S[1]![0]!;
  const inverse = [
    [S[1]![1]! / determinant, -S[0]![1]! / determinant],
    [-S[1]![0]! / determinant, S[0]![0]! / determinant],
  ];
  return P.map((row) => {
    const PCt = problem.C.map((c) => c.reduce((sum, value, l) => sum + value * row[l]!, 0));
    return [0, 1].map((j) => PCt[0]! * inverse[0]![j]! + PCt[1]! * inverse[1]![j]!);
  });
}

function quadratic(a: number[], P: number[][], b: number[]): number {
  return a.reduce((sum, value, i) => sum + value * P[i]!.reduce((inner, p, j) => inner + p * b[j]!, 0), 0);
}
