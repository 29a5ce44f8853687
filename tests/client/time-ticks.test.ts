import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { formatInstant, wallClock } from '../../shared/rules/format.ts';
import { rangeWords, tickLabel, timeTicks } from '../../src/components/charts/time-ticks.ts';

const TARNBY = 'Europe/Copenhagen';
const HOUR = 3_600_000;
const labels = (from: string, to: string, zone: string, most: number) =>
  timeTicks(Date.parse(from), Date.parse(to), zone, most).map((at) => tickLabel(at, zone));

describe('ticks of the time axis', () => {
  test('of a month count days from the 1st, at midnight of the site', () => {
    expect(labels('2026-10-31T23:00:00Z', '2026-11-30T22:00:00Z', TARNBY, 12)).toEqual([
      '1 Nov',
      '6 Nov',
      '11 Nov',
      '16 Nov',
      '21 Nov',
      '26 Nov',
    ]);
  });

  test('leave out a day that would crowd the next 1st', () => {
    const shown = labels('2026-10-20T00:00:00Z', '2026-11-10T00:00:00Z', TARNBY, 5);
    expect(shown).toContain('1 Nov');
    expect(shown).not.toContain('31 Oct');
  });

  // The clocks go back on 25 October 2026 and forward on 29 March 2026 at 01:00 UTC (IANA time zone database).
  test('stay at midnight across both changes of the clocks', () => {
    for (const [from, to] of [
      ['2026-10-22T22:00:00Z', '2026-10-28T00:00:00Z'],
      ['2026-03-26T23:00:00Z', '2026-04-01T00:00:00Z'],
    ]) {
      const ticks = timeTicks(Date.parse(from!), Date.parse(to!), TARNBY, 6);
      expect(ticks.length).toBeGreaterThan(4);
      expect(ticks.map((at) => wallClock(at, TARNBY).hour)).toEqual(ticks.map(() => 0));
    }
  });

  test('skip the missing hour in spring without doubling a tick', () => {
    expect(labels('2026-03-28T23:00:00Z', '2026-03-29T04:00:00Z', TARNBY, 8)).toEqual([
      '29 Mar',
      '01:00',
      '03:00',
      '04:00',
      '05:00',
      '06:00',
    ]);
  });

  test('stay at the same hours of the day after the clocks have gone back', () => {
    expect(labels('2026-10-24T22:00:00Z', '2026-10-26T23:00:00Z', TARNBY, 9)).toEqual([
      '25 Oct',
      '06:00',
      '12:00',
      '18:00',
      '26 Oct',
      '06:00',
      '12:00',
      '18:00',
      '27 Oct',
    ]);
  });

  test('stand on whole hours of a zone half an hour off', () => {
    const ticks = timeTicks(
      Date.parse('2026-11-10T00:00:00Z'),
      Date.parse('2026-11-11T00:00:00Z'),
      'Asia/Kolkata',
      8,
    );
    expect(ticks.map((at) => wallClock(at, 'Asia/Kolkata').minute)).toEqual(ticks.map(() => 0));
    expect(ticks.map((at) => tickLabel(at, 'Asia/Kolkata'))).toContain('11 Nov');
  });

  test('of years name the year where it begins', () => {
    expect(labels('2025-06-01T00:00:00Z', '2027-08-01T00:00:00Z', 'UTC', 6)).toEqual([
      '1 Jul',
      '1 Jan 2026',
      '1 Jul',
      '1 Jan 2027',
      '1 Jul',
    ]);
  });

  test('lie within the range, rise, and are about as many as there is room for, at any scale', () => {
    const zones = [TARNBY, 'Asia/Kolkata', 'America/St_Johns', 'Australia/Lord_Howe', 'UTC'];
    const span = fc.double({ min: Math.log(60_000), max: Math.log(20 * 365 * 24 * HOUR), noNaN: true });
    const start = fc.integer({ min: Date.UTC(2010, 0), max: Date.UTC(2030, 0) });
    fc.assert(
      fc.property(start, span, fc.constantFrom(...zones), (from, log, zone) => {
        const to = from + Math.exp(log);
        const ticks = timeTicks(from, to, zone, 8);
        expect(ticks.length).toBeLessThanOrEqual(12);
        expect(
          ticks.every((at, index) => at >= from && at <= to && (index === 0 || at > ticks[index - 1]!)),
        ).toBe(true);
      }),
      { numRuns: 300 },
    );
  });
});

describe('a range in words', () => {
  test.each([
    ['2026-10-31T23:00:00Z', '2026-11-30T23:00:00Z', '1 to 30 Nov 2026'],
    ['2026-10-14T10:00:00Z', '2026-11-09T10:00:00Z', '14 Oct to 9 Nov 2026'],
    ['2026-12-20T10:00:00Z', '2027-01-09T10:00:00Z', '20 Dec 2026 to 9 Jan 2027'],
    ['2026-11-12T05:00:00Z', '2026-11-12T11:30:00Z', '12 Nov 2026 06:00 to 12:30'],
    ['2026-11-12T05:00:00Z', '2026-11-13T02:00:00Z', '12 Nov 2026 06:00 to 13 Nov 2026 03:00'],
  ])('%s to %s is "%s"', (from, to, words) => {
    expect(rangeWords(Date.parse(from), Date.parse(to), TARNBY)).toBe(words);
  });

  test('begins and ends on the days of the instants', () => {
    const from = Date.parse('2026-11-03T12:00:00Z');
    expect(rangeWords(from, from + 100 * HOUR, 'UTC')).toBe(
      `3 to ${formatInstant(from + 100 * HOUR, 'UTC').slice(0, -6)}`,
    );
  });
});
