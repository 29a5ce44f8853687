import { describe, expect, it } from 'vitest';
import type { Shift } from '../../../shared/contracts/sampling.ts';
import { shiftAt } from '../../../shared/rules/shift-times.ts';

// Changes of the clocks are those of the IANA time zone database, as this runtime has it.
const three: Shift[] = [
  { name: 'Early', from: '06:00' },
  { name: 'Late', from: '14:00' },
  { name: 'Night', from: '22:00' },
];
const at = (iso: string) => Date.parse(iso);
const span = (iso: string, zone: string, beside = 0, shifts = three) => {
  const { name, from, until } = shiftAt(shifts, zone, at(iso), beside);
  return [name, new Date(from).toISOString(), new Date(until).toISOString(), (until - from) / 3_600_000];
};

describe('the shift at an instant', () => {
  it('lasts across midnight', () => {
    expect(span('2026-12-01T23:30:00Z', 'Europe/Copenhagen')).toEqual([
      'Night',
      '2026-12-01T21:00:00.000Z',
      '2026-12-02T05:00:00.000Z',
      8,
    ]);
    expect(shiftAt(three, 'Europe/Copenhagen', at('2026-12-01T23:30:00Z'))).toMatchObject({
      ofDay: { index: 2, count: 3 },
      dayOfWeek: 2,
    });
  });

  it('begins at its first instant and not before', () => {
    expect(span('2026-12-01T05:00:00Z', 'Europe/Copenhagen')[0]).toBe('Early');
    expect(span('2026-12-01T04:59:59.999Z', 'Europe/Copenhagen')[0]).toBe('Night');
  });

  it('is an hour shorter or longer in the night in which the clocks change', () => {
    expect(span('2026-03-28T23:30:00Z', 'Europe/Copenhagen')[3]).toBe(7);
    expect(span('2026-10-25T00:30:00Z', 'Europe/Copenhagen')[3]).toBe(9);
    expect(span('2026-10-24T16:30:00Z', 'Australia/Sydney', 0)[3]).toBe(8);
  });

  it('changes by half an hour on Lord Howe Island', () => {
    expect(span('2026-04-04T14:00:00Z', 'Australia/Lord_Howe')[3]).toBe(8.5);
    expect(span('2026-10-03T14:30:00Z', 'Australia/Lord_Howe')[3]).toBe(7.5);
  });

  it('follows a zone of a half-hour offset', () => {
    expect(span('2026-12-01T00:45:00Z', 'Asia/Kolkata').slice(0, 2)).toEqual([
      'Early',
      '2026-12-01T00:30:00.000Z',
    ]);
  });

  it('that would begin in the skipped hour begins at the first instant after, and in the double hour the first time', () => {
    const odd: Shift[] = [
      { name: 'A', from: '02:30' },
      { name: 'B', from: '14:30' },
    ];
    expect(span('2026-03-29T02:00:00Z', 'Europe/Copenhagen', 0, odd)).toEqual([
      'A',
      '2026-03-29T01:00:00.000Z',
      '2026-03-29T12:30:00.000Z',
      11.5,
    ]);
    expect(span('2026-03-29T00:59:59Z', 'Europe/Copenhagen', 0, odd)[0]).toBe('B');
    expect(span('2026-10-25T00:45:00Z', 'Europe/Copenhagen', 0, odd).slice(0, 2)).toEqual([
      'A',
      '2026-10-25T00:30:00.000Z',
    ]);
    // Lord Howe skips 02:00 to 02:30 on 4 October 2026, at 15:30 UTC of the day before.
    const early: Shift[] = [
      { name: 'A', from: '02:15' },
      { name: 'B', from: '14:15' },
    ];
    expect(span('2026-10-03T16:00:00Z', 'Australia/Lord_Howe', 0, early).slice(0, 2)).toEqual([
      'A',
      '2026-10-03T15:30:00.000Z',
    ]);
  });

  it('that lies in the skipped hour whole is left out', () => {
    const short: Shift[] = [
      { name: 'A', from: '02:00' },
      { name: 'B', from: '02:30' },
      { name: 'C', from: '14:00' },
    ];
    expect(span('2026-03-29T01:00:00Z', 'Europe/Copenhagen', 0, short)[0]).toBe('B');
    expect(span('2026-03-29T01:00:00Z', 'Europe/Copenhagen', -1, short)[0]).toBe('C');
  });

  it.each([
    ['America/Santiago', '2026-04-04', '2026-09-05'],
    ['Australia/Lord_Howe', '2026-04-04', '2026-10-03'],
    ['Europe/Copenhagen', '2026-03-28', '2026-10-24'],
    ['Africa/Casablanca', '2026-02-14', '2026-03-21'],
  ])('has neighbours that leave no gap while the clocks of %s change', (zone, ...days) => {
    const shifts: Shift[] = ['00:00', '01:45', '02:10', '02:20', '23:30'].map((from) => ({
      name: from,
      from,
    }));
    for (const day of days) {
      for (let minutes = 0; minutes < 48 * 60; minutes += 100) {
        const now = at(`${day}T00:00:00Z`) + minutes * 60_000;
        const current = shiftAt(shifts, zone, now);
        expect(current.from).toBeLessThanOrEqual(now);
        expect(current.until).toBeGreaterThan(now);
        expect(shiftAt(shifts, zone, now, 1).from).toBe(current.until);
        expect(shiftAt(shifts, zone, now, -1).until).toBe(current.from);
      }
    }
  });

  it('is the only one there is where a site has one', () => {
    expect(span('2026-12-01T03:00:00Z', 'UTC', 0, [{ name: 'Day', from: '06:00' }]).slice(1)).toEqual([
      '2026-11-30T06:00:00.000Z',
      '2026-12-01T06:00:00.000Z',
      24,
    ]);
  });
});
