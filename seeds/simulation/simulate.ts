import { setImmediate as letOthers } from 'node:timers/promises';
import { integrate, settled } from '../physics/physical-model.ts';
import { streamOf } from '../random.ts';
import { controlSystem } from './control-system.ts';
import { sequenceOf } from './drive.ts';
import { readingsOf } from './instrument.ts';
import { type LaboratoryResult, resultOf, samplingTimes } from './laboratory.ts';
import type { DemoSensor, DemoUnit, Stop } from './unit.ts';

const minuteMs = 60_000;
const quarterMs = 15 * minuteMs;
const dayMs = 86_400_000;
/** A unit comes down and up again over some hours. */
const changeoverMs = 3 * 3_600_000;
/** No samples until a unit has been up for a day. */
const quietAfterStartMs = dayMs;

/** A simulation is a function of the seed and its first day: run on later, it says the same and more. */
export interface Period {
  seed: number;
  startMs: number;
  /** Nothing after this instant is told: neither readings nor results reported later. */
  untilMs: number;
  /** Hours that local standard time is ahead of UTC. */
  hoursAhead: number;
  /** Readings before this instant are left out; absent: all are kept. */
  keepFromMs?: number;
}

export interface UnitHistory {
  /** By tag: instants and values. External estimates are among them. */
  readings: Map<string, { at: number[]; value: number[] }>;
  /** By tag name of the soft sensor, oldest first. */
  samples: Map<string, LaboratoryResult[]>;
}

/** Runs a unit's simulation, in slices, so that a server that does this beside its work stays quick. */
export async function simulate(unit: DemoUnit, period: Period): Promise<UnitHistory> {
  const running = steps(unit, period);
  let n = 0;
  for (let slice = performance.now(); ;) {
    const step = running.next();
    if (step.done) return step.value;
    if (++n % 64 !== 0 || performance.now() - slice < 15) continue;
    await letOthers();
    slice = performance.now();
  }
}

function* steps(unit: DemoUnit, period: Period): Generator<undefined, UnitHistory> {
  const { seed, startMs, untilMs, hoursAhead } = period;
  const stream = (name: string) => streamOf(seed, `${unit.site}/${unit.name}/${name}`);
  const stepMs = unit.everyMinuteFromDay === undefined ? quarterMs : minuteMs;
  const drives = Object.entries(unit.drives).map(
    ([name, drive]) => [name, sequenceOf(drive, stepMs, stream(name))] as const,
  );
  const at = (ms: number, running: number) => {
    const u: Record<string, number> = {};
    for (const [name, sequence] of drives) u[name] = sequence(ms + hoursAhead * 3_600_000, running);
    return u;
  };
  const history: UnitHistory = { readings: new Map(), samples: new Map() };
  const recorders = recordersOf(unit, period, history, stream, stepMs);
  let running = 1;
  let u = at(startMs, running);
  let x = settled(unit.model, u);
  for (let ms = startMs; ms <= untilMs; ms += stepMs) {
    const day = (ms - startMs) / dayMs;
    const minutely = day >= (unit.everyMinuteFromDay ?? Infinity);
    if (minutely || ms % quarterMs === 0) {
      const values = { ...u, ...unit.model.outputs(x, u) };
      for (const record of recorders) record(values, ms, day);
    }
    x = integrate((state) => unit.model.derivative(state, u), x, stepMs / 1000, unit.model.longestStepS);
    running += ((stoppedAt(unit.stops, day) ? 0 : 1) - running) * (1 - Math.exp(-stepMs / changeoverMs));
    u = at(ms + stepMs, running);
    yield;
  }
  return history;
}

type Recorder = (values: Record<string, number>, ms: number, day: number) => void;

function recordersOf(
  unit: DemoUnit,
  period: Period,
  history: UnitHistory,
  stream: (name: string) => ReturnType<typeof streamOf>,
  stepMs: number,
): Recorder[] {
  const keep = (tag: string) => {
    const kept = { at: [] as number[], value: [] as number[] };
    history.readings.set(tag, kept);
    return (ms: number, value: number) => {
      if (ms < (period.keepFromMs ?? -Infinity)) return;
      kept.at.push(ms);
      kept.value.push(value);
    };
  };
  const measured = unit.instruments.map((instrument): Recorder => {
    const read = readingsOf(instrument, stream(instrument.tag));
    const put = keep(instrument.tag);
    return (values, ms, day) => put(ms, read(values[instrument.reads]!, day));
  });
  const judged = unit.sensors.map((sensor): Recorder => {
    const external = 'external' in sensor.estimate ? sensor.estimate.external : null;
    const computed = external && controlSystem(external, stepMs, stream(sensor.sheet.tagName));
    const put = computed && keep(sensor.sheet.tagName);
    const take = sampler(unit, sensor, period, history, stream(sensor.sampling.point));
    const scale = 10 ** (sensor.sheet.decimals + 1);
    return (values, ms, day) => {
      const truth = values[sensor.truth]!;
      const estimate = computed ? Math.round(computed.estimate(truth, ms) * scale) / scale : NaN;
      put?.(ms, estimate);
      if (ms % quarterMs === 0)
        take(truth, estimate, ms, day, (result, then) => computed?.reported(result, then, day));
    };
  });
  return [...measured, ...judged];
}

/** Takes the samples of one soft sensor. What reaches the sample point left the process one transport delay before. */
function sampler(
  unit: DemoUnit,
  sensor: DemoSensor,
  period: Period,
  history: UnitHistory,
  random: ReturnType<typeof streamOf>,
) {
  const { sampling, sheet } = sensor;
  const ahead = period.hoursAhead * 3_600_000;
  const next = samplingTimes(sampling, period.startMs + ahead + dayMs, random);
  const results: LaboratoryResult[] = [];
  history.samples.set(sheet.tagName, results);
  const onTheWay: { truth: number; estimate: number }[] = [];
  const delaySteps = Math.round(sheet.transportDelayMs / quarterMs);
  let due = next();
  return (
    truth: number,
    estimate: number,
    ms: number,
    day: number,
    tell: (result: LaboratoryResult, estimate: number) => void,
  ) => {
    onTheWay.push({ truth, estimate });
    const arriving = onTheWay.length > delaySteps ? onTheWay.shift()! : onTheWay[0]!;
    if (ms + ahead < due) return;
    due = next();
    const result = resultOf(sampling, arriving.truth, ms, day, random);
    if (day >= (sampling.silentFromDay ?? Infinity) || quietAt(unit.stops, day)) return;
    tell(result, arriving.estimate);
    if (result.reportedMs <= period.untilMs) results.push(result);
  };
}

export const stoppedAt = (stops: readonly Stop[] | undefined, day: number): boolean =>
  (stops ?? []).some(({ fromDay, toDay = Infinity }) => day >= fromDay && day < toDay);

const quietAt = (stops: readonly Stop[] | undefined, day: number): boolean =>
  (stops ?? []).some(
    ({ fromDay, toDay = Infinity }) => day >= fromDay && day < toDay + quietAfterStartMs / dayMs,
  );
