import { describe, expect, test } from 'vitest';
import {
  dayAt,
  instantsOf,
  lastDayOf,
  lastDays,
  periodFromQuery,
  periodProblem,
} from '../../src/components/register/period.ts';

const zone = 'Europe/Copenhagen';

describe('a period of days', () => {
  test('runs from midnight to midnight at the site', () => {
    expect(instantsOf({ from: '2026-11-01', to: '2026-11-30' }, zone)).toEqual({
      from: '2026-10-31T23:00:00.000Z',
      to: '2026-11-30T23:00:00.000Z',
    });
  });

  // Value from memory: clocks in Denmark went back on 25 Oct 2026, a day of 25 hours.
  test('holds a day of 25 hours whole', () => {
    const { from, to } = instantsOf({ from: '2026-10-25', to: '2026-10-25' }, zone);
    expect(Date.parse(to) - Date.parse(from)).toBe(25 * 3_600_000);
  });

  test('falls on the day that the site’s calendar shows', () => {
    expect(dayAt('2026-11-30T23:30:00Z', zone)).toBe('2026-12-01');
    expect(dayAt('2026-11-30T23:30:00Z', 'America/Chicago')).toBe('2026-11-30');
  });

  test('counts the last day in', () => {
    expect(lastDays(30, '2026-12-01T06:00:00Z', zone)).toEqual({ from: '2026-11-02', to: '2026-12-01' });
    expect(dayAt(lastDayOf('2026-11-30T23:00:00.000Z'), zone)).toBe('2026-11-30');
  });
});

describe('the period in an address', () => {
  const now = '2026-12-01T06:00:00Z';

  test('is two days, else a preset, else 30 days', () => {
    expect(periodFromQuery({ from: '2026-10-01', to: '2026-10-31', days: '7' }, now, zone)).toEqual({
      days: { from: '2026-10-01', to: '2026-10-31' },
      preset: null,
    });
    expect(periodFromQuery({ days: '7' }, now, zone).days).toEqual({ from: '2026-11-25', to: '2026-12-01' });
    expect(periodFromQuery({ days: '11' }, now, zone).preset).toBe('30');
  });

  test('falls back where its days make no sense', () => {
    for (const query of [
      { from: '2026-10-31', to: '2026-10-01' },
      { from: '2026-02-30', to: '2026-03-01' },
      { from: 'yesterday', to: '2026-10-01' },
    ]) {
      expect(periodFromQuery(query, now, zone).preset).toBe('30');
    }
  });

  test('is refused with a sentence when typed the wrong way round', () => {
    expect(periodProblem('2026-10-31', '2026-10-01')).toBe('The last day must not be before the first.');
    expect(periodProblem('', '2026-10-01')).toBe('Choose both days.');
    expect(periodProblem('2026-10-01', '2026-10-01')).toBeNull();
  });
});
