import { add } from 'date-fns';
import { describe, expect, test } from 'vitest';
import type { Interval } from '../../../shared/contracts/interval.ts';
import { interval } from '../../../shared/contracts/interval.ts';
import {
  addDays,
  dateAt,
  daysBetween,
  hourAt,
  instantOf,
  nextDueOn,
} from '../../../shared/rules/due-dates.ts';

const months = (every: number, own: Partial<Interval> = {}): Interval => ({
  every,
  unit: 'months',
  counted: 'last-done',
  anchorOn: null,
  ...own,
});
const doneOn = (on: string, dueOn: string | null = null) => ({ on, first: false, dueOn });

describe('counted from last done', () => {
  test.each([
    ['2026-01-31', 1],
    ['2028-01-31', 1],
    ['2026-11-30', 3],
    ['2026-08-31', 6],
    ['2028-02-29', 12],
    ['2026-12-31', 14],
  ])('%s and %i months agree with date-fns', (on, every) => {
    // date-fns 4, `add` with months: an independent implementation of clamping to the end of the month.
    const outside = add(new Date(`${on}T12:00:00`), { months: every });
    const expected = [outside.getFullYear(), outside.getMonth() + 1, outside.getDate()]
      .map((part) => String(part).padStart(2, '0'))
      .join('-');
    expect(nextDueOn(months(every), doneOn(on))).toBe(expected);
  });

  test('31 January and a month is 28 February, and 29 in a leap year', () => {
    expect(nextDueOn(months(1), doneOn('2026-01-31'))).toBe('2026-02-28');
    expect(nextDueOn(months(1), doneOn('2028-01-31'))).toBe('2028-02-29');
  });

  test('days are days, whatever the months', () => {
    const days: Interval = { ...months(45), unit: 'days' };
    expect(nextDueOn(days, doneOn('2026-01-31'))).toBe('2026-03-17');
  });
});

describe('anchored', () => {
  const monthly = months(1, { counted: 'anchored', anchorOn: '2026-01-31' });
  const quarterly = months(3, { counted: 'anchored', anchorOn: '2026-03-31' });

  test('each occurrence comes from the anchor: 31 Jan, 28 Feb, 31 Mar', () => {
    const dates = ['2026-01-31'];
    for (let n = 0; n < 3; n++) dates.push(nextDueOn(monthly, doneOn(dates.at(-1)!, dates.at(-1)!)));
    expect(dates).toEqual(['2026-01-31', '2026-02-28', '2026-03-31', '2026-04-30']);
  });

  test('done late, the next occurrence stands, and missed ones are not caught up with', () => {
    expect(nextDueOn(quarterly, doneOn('2026-04-15', '2026-03-31'))).toBe('2026-06-30');
    expect(nextDueOn(quarterly, doneOn('2026-07-15', '2026-03-31'))).toBe('2026-09-30');
  });

  test('done early, that occurrence is attended to, and doing it again moves nothing further', () => {
    expect(nextDueOn(quarterly, doneOn('2026-03-20', '2026-03-31'))).toBe('2026-06-30');
    expect(nextDueOn(quarterly, doneOn('2026-03-21', '2026-06-30'))).toBe('2026-06-30');
    expect(nextDueOn(quarterly, doneOn('2026-03-22', '2026-06-30'))).toBe('2026-06-30');
  });

  test('never done, it is due on the anchor or the first occurrence from the start on', () => {
    expect(nextDueOn(quarterly, { on: '2026-01-10', first: true, dueOn: null })).toBe('2026-03-31');
    expect(nextDueOn(quarterly, { on: '2026-03-31', first: true, dueOn: null })).toBe('2026-03-31');
    expect(nextDueOn(quarterly, { on: '2026-04-01', first: true, dueOn: null })).toBe('2026-06-30');
  });

  test('of days, it counts days from the anchor', () => {
    const days: Interval = { every: 10, unit: 'days', counted: 'anchored', anchorOn: '2026-01-01' };
    expect(nextDueOn(days, doneOn('2026-03-05'))).toBe('2026-03-12');
  });
});

describe('what is no interval', () => {
  const problems = (given: object) =>
    interval
      .safeParse({ ...months(3), ...given })
      .error?.issues.map(({ path, message }) => [path.join('.'), message]);

  test('is refused beside its field: zero, a fraction, 31 February, an anchor that is missing', () => {
    expect(problems({ every: 0 })).toEqual([['every', expect.stringContaining('at least 1')]]);
    expect(problems({ every: 1.5 })).toEqual([['every', 'Write a whole number.']]);
    expect(problems({ every: 121 })).toEqual([['every', 'Keep the interval within 120 months.']]);
    expect(problems({ counted: 'anchored', anchorOn: '2027-02-31' })).toEqual([
      ['anchorOn', expect.stringContaining('Write a day that exists')],
    ]);
    expect(problems({ counted: 'anchored' })).toEqual([['anchorOn', 'Write the day that it counts from.']]);
  });
});

describe('dates at a site', () => {
  test('are its own: half an hour before midnight UTC it is tomorrow in Kolkata and today in Halifax', () => {
    const instant = new Date('2026-11-30T23:30:00Z');
    expect(dateAt(instant, 'Asia/Kolkata')).toBe('2026-12-01');
    expect(dateAt(instant, 'America/Halifax')).toBe('2026-11-30');
    expect(hourAt(instant, 'Asia/Kolkata')).toBe(5);
  });

  test('an hour of a day follows the clocks of its zone', () => {
    expect(instantOf('2026-07-01', 7, 'Europe/Copenhagen').toISOString()).toBe('2026-07-01T05:00:00.000Z');
    expect(instantOf('2026-12-01', 7, 'Europe/Copenhagen').toISOString()).toBe('2026-12-01T06:00:00.000Z');
    // 02:00 is skipped on that day in Copenhagen.
    expect(instantOf('2026-03-29', 2, 'Europe/Copenhagen').toISOString()).toBe('2026-03-29T01:00:00.000Z');
  });

  test('are counted in days across a change of clocks', () => {
    expect(daysBetween('2026-12-01', '2026-12-08')).toBe(7);
    expect(daysBetween('2026-12-08', '2026-12-01')).toBe(-7);
    expect(daysBetween('2026-03-28', '2026-03-30')).toBe(2);
    expect(addDays('2026-12-31', 1)).toBe('2027-01-01');
  });
});
