import { attemptSeries, giveUp } from './attempt.ts';
import { finish, readSetup } from './filter-run.ts';
import type { FilterSeries } from './filter-run.ts';
import { advanceTo, startRunner, stepFiltered } from './filter-runner.ts';
import type { FilterOptions, Runner } from './filter-runner.ts';
import { readSeries, readStart } from './kalman.ts';
import type { FilterStart, GridSeries } from './kalman.ts';
import { takeIn, varianceOf } from './kernels/general-kernels.ts';
import type { FilterWork } from './kernels/work.ts';
import { readNumber, readPositive } from './linear-algebra.ts';
import type { Result } from './result.ts';
import type { ModelRows, NoiseRows } from './state-space.ts';

/**
 * A laboratory result: value = row · x + v, var v = `variance`. `takenAt` and `reportedAt` in steps of the grid; the
 * sample belongs to the step nearest to takenAt and is known from the first step not before reportedAt. `row` (n) is the
 * model's estimated quantity unless given (with a bias state of the laboratory, for instance).
 */
export type LateSample = {
  takenAt: number;
  reportedAt: number;
  value: number;
  variance: number;
  row?: number[];
};

/** A sample as the filter met it: `estimate` and `sd` at takenAt as recorded before it entered, and the update's figures. */
export type MetSample = { step: number; estimate: number; sd: number; innovation: number; nis: number };

/**
 * `z` and `sd` as they were known at each step (a sample changes nothing before its reportedAt); `revised` as they are
 * known at the end, each late sample taken into account from takenAt on. `samples` in the order given, null for those
 * not reported within the run. `stepsRepeated`: how many steps were computed a second time.
 */
export type LateSampleRun = FilterSeries & {
  revised: { z: Float64Array; sd: Float64Array };
  samples: (MetSample | null)[];
  stepsRepeated: number;
};

/**
 * Kalman filter over a grid with laboratory samples that are reported later than they were taken. When one arrives, the
 * filter goes back to the checkpoint at its takenAt (x, P after that step's readings), takes it in and is carried forward
 * again, with every other sample known by then; so from reportedAt on the state, its covariance and the log-likelihood are
 * those of a run in which the sample had arrived on time. z at the step of takenAt itself never contains the sample (an
 * estimate is compared with a sample as it was before it). Refuses as filterSeries does, and `out-of-range` or
 * `non-finite-input` for a sample (`samples[i].…`).
 */
export function filterWithLateSamples(
  model: ModelRows,
  noise: NoiseRows,
  start: FilterStart,
  series: GridSeries,
  samples: LateSample[],
  options: Pick<FilterOptions, 'switching'> = {},
): Result<LateSampleRun> {
  return attemptSeries(() => {
    const setup = readSetup(model, noise);
    const N = readSeries(setup.M, series);
    const runner = startRunner(setup, readStart(start, setup.M.n), series, N, options);
    const read = readSamples(samples, setup.M.H.getRow(0), N);
    return new LateRun(runner, read).run();
  });
}

type Sample = { at: number; known: number; c: Float64Array; r: number; value: number };
type Checkpoint = { x: Float64Array; P: Float64Array; sums: Float64Array };

function readSamples(samples: unknown, h: number[], N: number): Sample[] {
  if (!Array.isArray(samples)) return giveUp('wrong-shape', { field: 'samples' });
  return samples.map((sample: LateSample, i) => {
    const field = (name: string) => `samples[${i}].${name}`;
    const taken = readNumber(sample?.takenAt, field('takenAt'));
    const reported = readNumber(sample.reportedAt, field('reportedAt'));
    const at = Math.round(taken);
    if (at < 0 || at >= N) return giveUp('out-of-range', { field: field('takenAt'), figure: taken });
    if (reported < taken) return giveUp('out-of-range', { field: field('reportedAt'), figure: reported });
    const row: unknown = sample.row ?? h;
    if (!Array.isArray(row) || row.length !== h.length) {
      return giveUp('wrong-shape', { field: field('row'), needed: h.length });
    }
    const c = Float64Array.from(row.map((value) => readNumber(value, field('row'))));
    const r = readPositive(sample.variance, field('variance'));
    return {
      at,
      known: Math.max(at, Math.ceil(reported)),
      c,
      r,
      value: readNumber(sample.value, field('value')),
    };
  });
}

/** Something to do: a sample taken (after its step) or reported (before the step `at`). */
type Event = { kind: 'taken' | 'reported'; at: number; samples: number[] };

/** Events in order; within a step what is already known comes before what is still awaited. */
function eventsOf(samples: Sample[], N: number): Event[] {
  const events = new Map<number, Event>();
  const add = (position: number, kind: Event['kind'], at: number, i: number) => {
    const event = events.get(position) ?? { kind, at, samples: [] };
    event.samples.push(i);
    events.set(position, event);
  };
  samples.forEach((sample, i) => add(sample.at, 'taken', sample.at, i));
  samples.forEach((sample, i) => {
    if (sample.known > sample.at && sample.known < N) add(sample.known - 0.5, 'reported', sample.known, i);
  });
  return [...events.entries()].sort(([a], [b]) => a - b).map(([, event]) => event);
}

/** A run under way with its samples. */
class LateRun {
  private readonly met: (MetSample | null)[];
  private readonly known: boolean[];
  private readonly checkpoints: (Checkpoint | undefined)[] = [];
  private readonly events: Event[];
  private readonly recorded: Pick<FilterWork, 'z' | 'sd' | 'nis'>;
  private readonly revised: { z: Float64Array; sd: Float64Array };
  private repeated = 0;

  constructor(
    private readonly runner: Runner,
    private readonly samples: Sample[],
  ) {
    this.met = samples.map(() => null);
    this.known = samples.map((sample) => sample.known === sample.at);
    this.events = eventsOf(samples, runner.N);
    const { z, sd, nis } = runner.work;
    this.recorded = { z, sd, nis };
    this.revised = { z: new Float64Array(runner.N), sd: new Float64Array(runner.N) };
  }

  run(): LateSampleRun {
    this.events.forEach((event, place) => {
      if (event.kind === 'taken') {
        this.forward(event.at + 1);
        this.meet(event);
      } else {
        this.forward(event.at);
        this.goBack(event, place);
      }
    });
    this.forward(this.runner.N);
    const { revised, met } = this;
    return { ...finish(this.runner), revised, samples: met, stepsRepeated: this.repeated };
  }

  /** Runs up to step `to`, the last one filtered and not predicted further where samples meet it. */
  private forward(to: number): void {
    const from = this.runner.k;
    this.runUntil(to);
    this.revised.z.set(this.recorded.z.subarray(from, to), from);
    this.revised.sd.set(this.recorded.sd.subarray(from, to), from);
  }

  private runUntil(to: number): void {
    if (to <= this.runner.k) return;
    advanceTo(this.runner, to - 1);
    stepFiltered(this.runner);
  }

  /** After the step of an event: takes in the samples known by now, keeps a checkpoint for those awaited. */
  private meet({ at, samples }: Event): void {
    for (const i of samples) if (this.known[i]) this.enter(i);
    for (const i of samples) if (!this.known[i]) this.checkpoints[i] = this.checkpoint();
    if (samples.some((i) => this.known[i])) this.reviseHere(at);
  }

  private enter(i: number): void {
    const sample = this.samples[i]!;
    const { innovation, S } = takeIn(this.runner.work, sample);
    const { sums } = this.runner.work;
    const nis = (innovation * innovation) / S;
    sums[0]! += 1;
    sums[1]! += Math.log(S);
    sums[2]! += nis;
    const { z, sd } = this.recorded;
    this.met[i] = { step: sample.at, estimate: z[sample.at]!, sd: sd[sample.at]!, innovation, nis };
  }

  private reviseHere(at: number): void {
    const { H, F, x, P, u, p } = this.runner.work;
    let z = 0;
    for (let i = 0; i < H.length; i++) z += H[i]! * x[i]!;
    for (let j = 0; j < p; j++) z += F[j]! * u[at * p + j]!;
    this.revised.z[at] = z;
    this.revised.sd[at] = Math.sqrt(Math.max(varianceOf(H, P), 0));
  }

  private checkpoint(): Checkpoint {
    const { x, P, sums } = this.runner.work;
    return { x: x.slice(), P: P.slice(), sums: sums.slice() };
  }

  /** Samples reported at step `at`: from the checkpoint of the earliest one forward again, into the revised series. */
  private goBack({ at: now, samples }: Event, place: number): void {
    const { runner } = this;
    const first = Math.min(...samples.map((i) => this.samples[i]!.at));
    const earliest = samples.find((i) => this.samples[i]!.at === first)!;
    const { x, P, sums } = this.checkpoints[earliest]!;
    runner.work.x.set(x);
    runner.work.P.set(P);
    runner.work.sums.set(sums);
    runner.k = first + 1;
    runner.predicted = false;
    this.repeated += now - runner.k;
    samples.forEach((i) => (this.known[i] = true));
    Object.assign(runner.work, this.revised, { nis: new Float64Array(0) });
    let from = place;
    while (from > 0 && this.events[from - 1]!.at >= first) from--;
    for (const event of this.events.slice(from, place)) {
      if (event.kind === 'reported') continue;
      this.runUntil(event.at + 1);
      // What had entered at the first step before is in its checkpoint already.
      const open =
        event.at > first ? event.samples : event.samples.filter((i) => samples.includes(i) || !this.known[i]);
      this.meet({ ...event, samples: open });
    }
    this.runUntil(now);
    Object.assign(runner.work, this.recorded);
  }
}
