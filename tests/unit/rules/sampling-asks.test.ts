import { describe, expect, it } from 'vitest';
import type { SamplingPlan } from '../../../shared/contracts/sampling.ts';
import {
  asksOf,
  countInShift,
  type OpenRequest,
  type SampledSensor,
} from '../../../shared/rules/sampling-asks.ts';
import type { ShiftSpan } from '../../../shared/rules/shift-times.ts';

const hour = 3_600_000;
const from = Date.UTC(2026, 11, 1, 21);
const night: ShiftSpan = {
  name: 'Night',
  from,
  until: from + 8 * hour,
  ofDay: { index: 2, count: 3 },
  dayOfWeek: 2,
};
const sensor = (id: number, own: Partial<SampledSensor> = {}): SampledSensor => ({
  id,
  tagName: `TY-${id}`,
  quantity: 'temperature',
  unit: '°C',
  samplePointId: 1,
  methodId: 1,
  plan: { count: 1, per: 'shift' },
  stoppedSince: null,
  ...own,
});
const request = (own: Partial<OpenRequest> = {}): OpenRequest => ({
  id: 5,
  softSensorId: 1,
  askedBy: 'Marco',
  reason: '',
  missing: 4,
  from: night.from,
  until: night.until,
  ...own,
});

describe('a sampling plan', () => {
  const overAWeek = (plan: SamplingPlan) =>
    Array.from({ length: 21 }, (_, shift) =>
      countInShift(plan, {
        ...night,
        ofDay: { index: shift % 3, count: 3 },
        dayOfWeek: Math.floor(shift / 3) + 1,
      }),
    );
  const sum = (counts: number[]) => counts.reduce((total, count) => total + count, 0);

  it('asks in every shift, or once a day in the first, or once a week on Monday', () => {
    expect(overAWeek({ count: 2, per: 'shift' })).toEqual(Array(21).fill(2));
    expect(overAWeek({ count: 1, per: 'day' }).slice(0, 6)).toEqual([1, 0, 0, 1, 0, 0]);
    expect(overAWeek({ count: 1, per: 'week' })).toEqual([1, ...Array(20).fill(0)]);
  });

  it('spreads several evenly and asks for no more and no less of them', () => {
    for (let count = 1; count <= 24; count++) {
      expect(sum(overAWeek({ count, per: 'week' }))).toBe(count);
      expect(sum(overAWeek({ count, per: 'day' }))).toBe(7 * count);
      const counts = overAWeek({ count, per: 'week' });
      expect(Math.max(...counts) - Math.min(...counts)).toBeLessThanOrEqual(1);
    }
  });
});

describe('the samples asked for in a shift', () => {
  it('are shared by the soft sensors of one point and method, the largest count counting', () => {
    const asks = asksOf(night, [sensor(1), sensor(2, { plan: { count: 3, per: 'shift' } })], [], [], []);
    expect(asks).toHaveLength(3);
    expect(asks[0]!.sensors.map(({ id }) => id)).toEqual([1, 2]);
  });

  it('are not shared across methods, which take bottles of their own', () => {
    expect(asksOf(night, [sensor(1), sensor(2, { methodId: 2 })], [], [], [])).toHaveLength(2);
  });

  it('are spread over the shift', () => {
    const asks = asksOf(night, [sensor(1, { plan: { count: 4, per: 'shift' } })], [], [], []);
    expect(asks.map(({ askedFor }) => (askedFor - from) / hour)).toEqual([1, 3, 5, 7]);
  });

  it('are answered by the nearest sample taken at the point in the shift, each by one', () => {
    const plan = { count: 4, per: 'shift' } as const;
    const taken = [
      { id: 70, samplePointId: 1, methodId: 1, takenAt: from + 3.2 * hour },
      { id: 71, samplePointId: 1, methodId: null, takenAt: from + 3.4 * hour },
      { id: 72, samplePointId: 1, methodId: 1, takenAt: from - 1 },
      { id: 73, samplePointId: 2, methodId: 1, takenAt: from + 7 * hour },
      { id: 74, samplePointId: 1, methodId: 9, takenAt: from + 7 * hour },
    ];
    const asks = asksOf(night, [sensor(1, { plan })], [], taken, []);
    expect(asks.map(({ answer }) => answer)).toEqual([null, { taken: 70 }, { taken: 71 }, null]);
  });

  it('are answered by a record that names the one that was not taken', () => {
    const asks = asksOf(night, [sensor(1)], [], [], [{ id: 9, samplePointId: 1, askedFor: from + 4 * hour }]);
    expect(asks[0]!.answer).toEqual({ notTaken: 9 });
  });

  it('say once that the unit is stopped, since all of the point stand still, unless one of them runs', () => {
    const stopped = sensor(1, { stoppedSince: 7, plan: { count: 3, per: 'shift' } });
    const answers = (...sensors: SampledSensor[]) =>
      asksOf(night, sensors, [], [], []).map(({ answer }) => answer);
    expect(answers(stopped)).toEqual([{ stoppedSince: 7 }]);
    expect(answers(stopped, sensor(2, { stoppedSince: 9 }))).toEqual([{ stoppedSince: 9 }]);
    const [one, ...others] = asksOf(night, [stopped, sensor(2)], [], [], []);
    expect(one).toMatchObject({ answer: null, sensors: [{ id: 2 }] });
    // The three a shift are those of the one that stands still.
    expect(others).toEqual([]);
  });

  it('keep what was taken, and what was not, before the unit stopped', () => {
    const stopped = sensor(1, { stoppedSince: from + 6 * hour, plan: { count: 4, per: 'shift' } });
    const taken = [{ id: 70, samplePointId: 1, methodId: 1, takenAt: from + hour }];
    const notTaken = [{ id: 9, samplePointId: 1, askedFor: from + 3 * hour }];
    expect(asksOf(night, [stopped], [], taken, notTaken).map(({ answer }) => answer)).toEqual([
      { taken: 70 },
      { notTaken: 9 },
      { stoppedSince: from + 6 * hour },
    ]);
  });

  it('come to nothing where nobody asks, stopped or not', () => {
    const bare = sensor(1, { plan: null });
    expect(asksOf(night, [bare], [], [], [])).toEqual([]);
    expect(asksOf(night, [{ ...bare, stoppedSince: 7 }], [], [], [])).toEqual([]);
  });

  it('of a request are an even share of what is missing over the shifts that are left', () => {
    const bare = sensor(1, { plan: null });
    expect(asksOf(night, [bare], [request()], [], [])).toHaveLength(4);
    expect(asksOf(night, [bare], [request({ until: night.until + 8 * hour })], [], [])).toHaveLength(2);
    expect(asksOf(night, [bare], [request({ missing: 0 })], [], [])).toEqual([]);
    expect(asksOf(night, [bare], [request({ softSensorId: 3 })], [], [])).toEqual([]);
  });

  it('count for plan and request at once, and name who asked', () => {
    const asks = asksOf(night, [sensor(1)], [request({ missing: 2 })], [], []);
    expect(asks.map(({ request: one }) => one?.id)).toEqual([5, 5]);
  });

  it('leave those of the plan where they are when somebody asks for more, which come into the widest gaps', () => {
    const times = (sensors: SampledSensor[], requests: OpenRequest[]) =>
      asksOf(night, sensors, requests, [], []).map(({ askedFor }) => (askedFor - from) / hour);
    expect(times([sensor(1)], [])).toEqual([4]);
    expect(times([sensor(1)], [request({ missing: 3 })])).toEqual([2, 4, 6]);
    // Asked two hours before the shift ends: nothing is wanted sooner.
    const late = request({ missing: 2, from: from + 6 * hour });
    expect(times([sensor(1)], [late])).toEqual([4, 7]);
    expect(times([sensor(1, { plan: null })], [late])).toEqual([6.5, 7.5]);
  });

  it('never share a moment at one point, however many there are', () => {
    for (let missing = 1; missing <= 50; missing++) {
      const asks = asksOf(night, [sensor(1)], [request({ missing })], [], []);
      expect(new Set(asks.map(({ askedFor }) => askedFor)).size).toBe(missing);
      expect(asks.every(({ askedFor }) => askedFor >= night.from && askedFor < night.until)).toBe(true);
    }
  });
});
