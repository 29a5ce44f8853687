import { describe, expect, it } from 'vitest';
import type { EventKind } from '../../../shared/contracts/events.ts';
import { type Occurrence, settleEvents, type StandingEvent } from '../../../shared/rules/event-order.ts';

const now = Date.parse('2026-11-30T12:00:00Z');
const on = (day: number, hour = 0) => Date.UTC(2026, 10, day, hour);

const given = (kind: EventKind, at: number, until: number | null = null, line = 1): Occurrence => ({
  line,
  kind,
  at,
  until,
});
const stands = (...list: [EventKind, number][]): StandingEvent[] => list.map(([kind, at]) => ({ kind, at }));

function settle(occurrence: Occurrence, standing: StandingEvent[]) {
  const { fresh, problem } = settleEvents([occurrence], standing, now).get(occurrence)!;
  return problem ? [problem.field, problem.code, problem.figures] : fresh;
}

describe('an event to be recorded', () => {
  it('is refused where its time is still to come, lies before 1970, or its end can’t be', () => {
    const soon = now + 10 * 60_000;
    expect(settle(given('grade-change', soon), [])).toHaveLength(1);
    expect(settle(given('grade-change', soon + 1), [])).toEqual(['at', 'ahead', { at: soon + 1 }]);
    expect(settle(given('stop', on(29), soon + 1), [])).toEqual(['until', 'ahead', { at: soon + 1 }]);
    expect(settle(given('stop', -1), [])).toEqual(['at', 'before-1970', { at: -1 }]);
    expect(settle(given('stop', on(29), on(29)), [])).toEqual(['until', 'until-not-after', { at: on(29) }]);
    expect(settle(given('start', on(28), on(29)), [])).toEqual(['until', 'until-without-stop', {}]);
  });

  it('is recorded once: of a stop that stands only its new end is fresh', () => {
    const standing = stands(['stop', on(10)], ['method-change', on(11)]);
    expect(settle(given('method-change', on(11)), standing)).toEqual([]);
    expect(settle(given('stop', on(10), on(12)), standing)).toEqual(stands(['start', on(12)]));
    expect(settle(given('method-change', on(11, 1)), standing)).toHaveLength(1);
  });

  it('is refused as a stop of what stands, and says since when and until when', () => {
    expect(settle(given('turnaround', on(11)), stands(['stop', on(10)]))).toEqual([
      'at',
      'stopped-already',
      { since: on(10) },
    ]);
    const over = stands(['stop', on(10)], ['start', on(14)]);
    expect(settle(given('stop', on(12)), over)).toEqual([
      'at',
      'stopped-already',
      { since: on(10), next: on(14) },
    ]);
    expect(settle(given('stop', on(14)), over)).toHaveLength(1);
    expect(settle(given('stop', on(10)), stands(['turnaround', on(10)]))).toEqual([
      'at',
      'stopped-already',
      { since: on(10) },
    ]);
  });

  it('is refused as a stop that would reach into a later one', () => {
    const standing = stands(['stop', on(10)], ['start', on(14)]);
    expect(settle(given('stop', on(9)), standing)).toEqual(['at', 'stops-later', { at: on(10) }]);
    expect(settle(given('stop', on(9), on(12)), standing)).toEqual(['until', 'stops-later', { at: on(10) }]);
    expect(settle(given('stop', on(8), on(9)), standing)).toHaveLength(2);
    expect(settle(given('stop', on(8), on(10)), standing)).toHaveLength(2);
  });

  it('is refused as a start of what was not stopped', () => {
    const standing = stands(['start', on(1)], ['stop', on(14)]);
    expect(settle(given('start', on(13)), standing)).toEqual([
      'at',
      'started-already',
      { since: on(1), next: on(14) },
    ]);
    expect(settle(given('start', on(15)), standing)).toHaveLength(1);
    expect(settle(given('start', on(13)), stands(['stop', on(14)]))).toEqual([
      'at',
      'start-before-stop',
      { next: on(14) },
    ]);
    expect(settle(given('start', on(12)), stands(['stop', on(10)], ['start', on(14)]))).toEqual([
      'at',
      'starts-later',
      { at: on(14) },
    ]);
    expect(settle(given('stop', on(8), on(15)), stands(['start', on(14)]))).toEqual([
      'until',
      'started-already',
      { since: on(14) },
    ]);
  });

  it('may be a start where nothing else is known of the unit', () => {
    expect(settle(given('start', on(1)), stands(['grade-change', on(3)]))).toHaveLength(1);
  });
});

describe('events of a file', () => {
  const settleAll = (list: Occurrence[], standing: StandingEvent[] = []) =>
    [...settleEvents(list, standing, now).values()].map(
      ({ fresh, problem, as }) => problem?.code ?? (fresh.length > 0 ? fresh.length : `as ${as}`),
    );

  it('are taken in time, whatever the order of the rows', () => {
    const rows = [
      given('start', on(14), null, 2),
      given('stop', on(12), null, 3),
      given('start', on(4), null, 4),
      given('stop', on(2), null, 5),
      given('start', on(1), null, 6),
    ];
    expect(settleAll(rows)).toEqual([1, 1, 1, 1, 1]);
    expect(settleAll(rows, stands(['stop', on(20)]))).toEqual([1, 1, 1, 1, 'start-before-stop']);
  });

  it('count once, by the end of a stop or by a row of their own', () => {
    const rows = [
      given('stop', on(2), on(4), 2),
      given('start', on(4), null, 3),
      given('stop', on(2), null, 4),
    ];
    expect(settleAll(rows)).toEqual([2, 'as 2', 'as 2']);
  });

  it('are refused alone: a wrong row takes no other with it', () => {
    const rows = [
      given('stop', on(2), on(4), 2),
      given('stop', on(3), on(5), 3),
      given('stop', on(6), on(7), 4),
      given('start', on(8), null, 5),
    ];
    expect(settleAll(rows)).toEqual([2, 'stopped-already', 2, 'started-already']);
  });

  it('leave stops and starts taking turns, whatever is thrown at them', () => {
    let seed = 7;
    const random = (n: number) => (seed = (seed * 48_271) % 2_147_483_647) % n;
    for (let trial = 0; trial < 200; trial++) {
      const rows = Array.from({ length: 12 }, (_none, line) => {
        const kind = (['stop', 'start', 'turnaround'] as const)[random(3)]!;
        const at = on(1, random(48));
        return given(kind, at, kind !== 'start' && random(2) ? at + (1 + random(9)) * 3_600_000 : null, line);
      });
      const fresh = [...settleEvents(rows, [], now).values()].flatMap((row) => row.fresh);
      const turns = fresh
        .sort((a, b) => a.at - b.at || Number(b.kind === 'start') - Number(a.kind === 'start'))
        .map(({ kind }) => kind === 'start');
      expect(turns.some((start, index) => start === turns[index + 1])).toBe(false);
    }
  });
});
