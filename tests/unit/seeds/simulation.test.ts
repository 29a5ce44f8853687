import { describe, expect, it } from 'vitest';
import { streamOf } from '../../../seeds/random.ts';
import { controlSystem } from '../../../seeds/simulation/control-system.ts';
import { sequenceOf } from '../../../seeds/simulation/drive.ts';
import { readingsOf } from '../../../seeds/simulation/instrument.ts';
import { type Sampling, resultOf, samplingTimes } from '../../../seeds/simulation/laboratory.ts';
import { type UnitHistory, simulate } from '../../../seeds/simulation/simulate.ts';
import { demoUnits } from '../../../seeds/units.ts';

const dayMs = 86_400_000;
const startMs = Date.UTC(2026, 5, 2);
const unitNamed = (name: string) => demoUnits.find((unit) => unit.name === name)!;
const run = (name: string, days: number, more: { seed?: number; keepFromMs?: number } = {}) =>
  simulate(unitNamed(name), { seed: 11, startMs, untilMs: startMs + days * dayMs, hoursAhead: 1, ...more });

const sdOf = (values: readonly number[]) => {
  const mean = values.reduce((total, value) => total + value, 0) / values.length;
  return Math.sqrt(values.reduce((total, value) => total + (value - mean) ** 2, 0) / (values.length - 1));
};

/** Two histories one behind the other. */
function joined(first: UnitHistory, second: UnitHistory) {
  return [...first.readings].map(([tag, { at, value }]) => {
    const then = second.readings.get(tag)!;
    return [tag, [...at, ...then.at], [...value, ...then.value]] as const;
  });
}

describe('a simulation', () => {
  it('gives the same numbers for the same seed, and others for another', async () => {
    const [one, again, other] = [
      await run('Digester 1', 5),
      await run('Digester 1', 5),
      await run('Digester 1', 5, { seed: 12 }),
    ];
    expect(again).toEqual(one);
    expect(other.readings.get('TI-1211')!.value).not.toEqual(one.readings.get('TI-1211')!.value);
  });

  it('gives the same when it is gone on with as when it runs at once', async () => {
    for (const name of ['Digester 1', 'Pusher furnace 3']) {
      const whole = await run(name, 12.3);
      const first = await run(name, 7.21);
      const lastMs = first.readings.values().next().value!.at.at(-1)!;
      const second = await run(name, 12.3, { keepFromMs: lastMs + 1 });
      expect(joined(first, second)).toEqual(
        [...whole.readings].map(([tag, { at, value }]) => [tag, at, value]),
      );
      for (const [tag, results] of first.samples) {
        expect(whole.samples.get(tag)!.slice(0, results.length)).toEqual(results);
        expect(second.samples.get(tag)).toEqual(whole.samples.get(tag));
      }
    }
  });

  it('is the same on whichever day it begins', async () => {
    const later = await simulate(unitNamed('Reformer'), {
      seed: 11,
      startMs: startMs + 40 * dayMs,
      untilMs: startMs + 43 * dayMs,
      hoursAhead: 9.5,
    });
    const now = await simulate(unitNamed('Reformer'), {
      seed: 11,
      startMs,
      untilMs: startMs + 3 * dayMs,
      hoursAhead: 9.5,
    });
    expect(later.readings.get('DI-8104')!.value).toEqual(now.readings.get('DI-8104')!.value);
  });

  it('tells of no result before the laboratory reported it', async () => {
    const { samples } = await run('Reformer', 3.5);
    for (const result of [...samples.values()].flat())
      expect(result.reportedMs).toBeLessThanOrEqual(startMs + 3.5 * dayMs);
  });

  it('records a quarter of an hour apart, and every minute from the day that says so', async () => {
    const boiler = { ...unitNamed('Power boiler 4'), everyMinuteFromDay: 2 };
    const { readings } = await simulate(boiler, {
      seed: 11,
      startMs,
      untilMs: startMs + 2.5 * dayMs,
      hoursAhead: -6,
    });
    const { at } = readings.get('FI-4401')!;
    expect(at).toHaveLength(2 * 96 + 12 * 60 + 1);
    expect(at[1]! - at[0]!).toBe(900_000);
    expect(at.at(-1)! - at.at(-2)!).toBe(60_000);
  });

  it('takes no samples while a unit stands still, nor on the day after', async () => {
    const unit = { ...unitNamed('Pusher furnace 3'), stops: [{ fromDay: 3, toDay: 5 }] };
    const { samples, readings } = await simulate(unit, {
      seed: 11,
      startMs,
      untilMs: startMs + 9 * dayMs,
      hoursAhead: 1,
    });
    const days = samples.get('TY-3301')!.map(({ takenMs }) => (takenMs - startMs) / dayMs);
    expect(days.filter((day) => day >= 3 && day < 6)).toEqual([]);
    expect(days.filter((day) => day < 3).length).toBeGreaterThan(3);
    expect(days.filter((day) => day >= 6).length).toBeGreaterThan(4);
    const { value } = readings.get('WI-3320')!;
    expect(value[4 * 96]).toBeLessThan(1);
  });
});

describe('a drive', () => {
  it('walks about its mean with the SD that it states', () => {
    const next = sequenceOf({ mean: 50, slow: 2, hours: 6 }, 900_000, streamOf(3, 'walk'));
    const values = Array.from({ length: 40_000 }, (_, k) => next(k * 900_000, 1));
    expect(values.reduce((total, value) => total + value, 0) / values.length).toBeCloseTo(50, 0);
    expect(sdOf(values)).toBeCloseTo(2, 0);
  });

  it('is highest in the afternoon and repeats the next day', () => {
    const next = sequenceOf({ mean: 10, daily: 3 }, 3_600_000, streamOf(3, 'day'));
    const values = Array.from({ length: 48 }, (_, hour) => next(hour * 3_600_000, 1));
    expect(values.indexOf(Math.max(...values))).toBe(14);
    expect(values[30]).toBeCloseTo(values[6]!, 9);
  });

  it('goes to its idle value as the unit comes down', () => {
    const next = sequenceOf({ mean: 10, idle: 2 }, 900_000, streamOf(3, 'stop'));
    expect([next(0, 1), next(0, 0.5), next(0, 0)]).toEqual([10, 6, 2]);
  });
});

describe('an instrument', () => {
  const at = { tag: 'T', description: '', unit: '°C', reads: 't', digits: 1 };
  const read = (fault: Parameters<typeof readingsOf>[0]['fault'], noise = 0) =>
    readingsOf({ ...at, noise, fault }, streamOf(5, 'tag'));

  it('reads the truth with its noise, rounded as it is recorded', () => {
    const reading = read(undefined, 0.5);
    const values = Array.from({ length: 5000 }, () => reading(20, 1));
    expect(sdOf(values)).toBeCloseTo(0.5, 1);
    expect(values[0]! * 10).toBeCloseTo(Math.round(values[0]! * 10), 9);
  });

  it('ages, steps and sticks from the day that says so', () => {
    const ageing = read({ kind: 'rise', fromDay: 10, perDay: 0.5, most: 3 });
    expect([ageing(20, 9), ageing(20, 12), ageing(20, 90)]).toEqual([20, 21, 23]);
    const step = read({ kind: 'step', fromDay: 10, by: -4 });
    expect([step(20, 9.9), step(20, 10)]).toEqual([20, 16]);
    const stuck = read({ kind: 'stuck', fromDay: 10 });
    expect([stuck(20, 9), stuck(21, 10), stuck(25, 11)]).toEqual([20, 21, 21]);
  });
});

describe('the laboratory', () => {
  const sampling: Sampling = {
    point: 'P',
    method: { name: 'M', repeatability: 1, reproducibility: 2.77, detectionLimit: 5 },
    everyHours: 8,
    firstHour: 6,
    reportedAfterHours: 2,
    digits: 3,
  };

  it('scatters as its reproducibility says: R = 2.77 SD (ISO 5725)', () => {
    const random = streamOf(9, 'lab');
    const results = Array.from({ length: 20_000 }, (_, k) => resultOf(sampling, 100, k, 0, random).value);
    expect(sdOf(results)).toBeCloseTo(1, 1);
  });

  it('says less than its limit where it found less, and how late it reported', () => {
    const result = resultOf(sampling, 0, 1000, 0, streamOf(9, 'lab'));
    expect(result).toMatchObject({ value: 5, qualifier: '<', asWritten: '<5' });
    expect(result.reportedMs - result.takenMs).toBeGreaterThan(1.4 * 3_600_000);
  });

  it('differs by the step of a changed method from its day on', () => {
    const changed = { ...sampling, change: { fromDay: 20, by: -3 } };
    const on = (day: number) => resultOf(changed, 100, 0, day, streamOf(9, 'lab')).value;
    expect(on(20) - on(19)).toBeCloseTo(-3, 6);
  });

  it('takes samples by the clock, a little late, and leaves some out', () => {
    const next = samplingTimes(sampling, startMs, streamOf(9, 'times'));
    const times = Array.from({ length: 300 }, next);
    const late = times.map((ms) => (ms - startMs - 6 * 3_600_000) % (8 * 3_600_000));
    expect(Math.max(...late)).toBeLessThan(3_600_000);
    expect(Math.min(...late)).toBeGreaterThanOrEqual(0);
    const span = (times.at(-1)! - times[0]!) / (8 * 3_600_000);
    expect(span).toBeGreaterThan(303);
    expect(span).toBeLessThan(340);
  });
});

describe('a control system', () => {
  it('widens its errors by √2 where somebody types in every last difference', () => {
    const truth = 50;
    const errorsOf = (chasedFromDay?: number) => {
      const computed = controlSystem(
        { wander: 0, hours: 10, noise: 0, chasedFromDay },
        900_000,
        streamOf(4, 'dcs'),
      );
      const laboratory = streamOf(4, 'results');
      return Array.from({ length: 4000 }, (_, k) => {
        const takenMs = k * 28_800_000;
        const estimate = computed.estimate(truth, takenMs);
        const value = truth + laboratory.normal();
        computed.reported(
          { takenMs, reportedMs: takenMs + 3_600_000, value, qualifier: null, asWritten: '' },
          estimate,
          k / 3,
        );
        return estimate - value;
      });
    };
    expect(sdOf(errorsOf())).toBeCloseTo(1, 1);
    // An error less the one before: twice the variance of one result.
    expect(sdOf(errorsOf(0))).toBeCloseTo(Math.SQRT2, 1);
  });
});
