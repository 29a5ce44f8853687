import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  formatAge,
  formatClock,
  formatCount,
  formatDate,
  formatDay,
  formatInstant,
  formatNumber,
  formatQuantity,
  formatSigned,
  formatSignedQuantity,
  formatZoneInWords,
  plural,
  wallClock,
  zoneOffsetMinutes,
} from '../../../shared/rules/format.ts';

const TARNBY = 'Europe/Copenhagen';

describe('numbers', () => {
  test('carry commas at the thousands and a true minus sign', () => {
    expect(formatNumber(1504, 0)).toBe('1,504');
    expect(formatNumber(-1234567.891, 2)).toBe('−1,234,567.89');
    expect(formatCount(124000)).toBe('124,000');
  });

  test('that round to zero carry no sign', () => {
    expect(formatNumber(-0.04, 1)).toBe('0.0');
    expect(formatSigned(-0, 0)).toBe('0');
    expect(formatSigned(0.4, 0)).toBe('0');
    expect(formatSigned(-0.049, 1)).toBe('0.0');
  });

  test('that stand for differences carry their sign', () => {
    expect(formatSigned(9.8, 1)).toBe('+9.8');
    expect(formatSigned(-15.3, 1)).toBe('−15.3');
    expect(formatSignedQuantity(-15.3, '°C', 1)).toBe('−15.3\u00a0°C');
  });

  test('stay on one line with their unit, and drop it when there is no value', () => {
    expect(formatQuantity(15.3, '°C', 1)).toBe('15.3\u00a0°C');
    expect(formatQuantity(0.16, 'mol%', 2)).toBe('0.16\u00a0mol%');
    expect(formatQuantity(4, '', 0)).toBe('4');
    expect(formatQuantity(null, '°C', 1)).toBe('–');
    expect(formatNumber(Number.NaN, 1)).toBe('–');
  });

  test('read back as the number that was rounded, whatever the number', () => {
    const number = fc.double({ min: -1e9, max: 1e9, noNaN: true });
    fc.assert(
      fc.property(number, fc.integer({ min: 0, max: 6 }), (value, decimals) => {
        const text = formatSigned(value, decimals);
        const back = Number(text.replaceAll(',', '').replace('−', '-'));
        expect(Math.abs(back - value)).toBeLessThanOrEqual(0.5 * 10 ** -decimals * (1 + 1e-6) + 1e-7);
        expect(text.startsWith('+')).toBe(back > 0);
        expect(text.startsWith('−')).toBe(back < 0);
      }),
    );
  });

  test('count things in the singular only for one', () => {
    expect(plural(1, 'sample')).toBe('1 sample');
    expect(plural(0, 'sample')).toBe('0 samples');
    expect(plural(1504, 'soft sensor')).toBe('1,504 soft sensors');
    expect(plural(2, 'duty', 'duties')).toBe('2 duties');
  });
});

describe('days and times', () => {
  test('fall on the day of the site, not of the server', () => {
    expect(formatDay('2026-11-09T23:30:00Z', TARNBY)).toBe('10 Nov');
    expect(formatDay('2026-11-10T03:00:00Z', 'America/New_York')).toBe('9 Nov');
    expect(formatInstant('2026-11-29T13:00:00Z', TARNBY)).toBe('29 Nov 2026 14:00');
  });

  test('that are calendar dates are the same day in every zone', () => {
    expect(formatDay('2026-11-10', 'Pacific/Kiritimati')).toBe('10 Nov');
    expect(formatDay('2026-11-10', 'Pacific/Pago_Pago')).toBe('10 Nov');
    expect(formatDate('2026-11-10', 'Pacific/Pago_Pago')).toBe('10 Nov 2026');
  });

  test('name the year only when it is not the current one', () => {
    expect(formatDay('2026-11-10', TARNBY, '2026-12-01T06:00:00Z')).toBe('10 Nov');
    expect(formatDay('2027-03-14', TARNBY, '2026-12-01T06:00:00Z')).toBe('14 Mar 2027');
    // New Year at the site comes an hour before New Year in UTC.
    expect(formatDay('2027-01-01', TARNBY, '2026-12-31T23:30:00Z')).toBe('1 Jan');
  });

  test('show midnight as 00:00 and abbreviate September to three letters', () => {
    expect(formatInstant('2026-09-01T22:00:00Z', TARNBY)).toBe('2 Sep 2026 00:00');
  });

  test('refuse what is no time and no zone', () => {
    expect(() => formatInstant('yesterday', TARNBY)).toThrow(RangeError);
    expect(() => formatInstant('2026-11-29T13:00:00Z', 'Mars/Olympus')).toThrow(RangeError);
    expect(() => formatAge('yesterday', '2026-11-29T13:00:00Z')).toThrow('Not a time');
  });
});

// Offsets and change-over instants: IANA time zone database, as shipped with Node's ICU.
describe('zones in words', () => {
  test('follow the clocks in autumn: the same hour is shown twice with two offsets', () => {
    expect(formatClock('2026-10-25T00:30:00Z', TARNBY)).toBe('02:30');
    expect(formatClock('2026-10-25T01:30:00Z', TARNBY)).toBe('02:30');
    expect(formatZoneInWords('2026-10-25T00:30:00Z', TARNBY, 'Tarnby')).toBe('Tarnby time (UTC+2)');
    expect(formatZoneInWords('2026-10-25T01:30:00Z', TARNBY, 'Tarnby')).toBe('Tarnby time (UTC+1)');
  });

  test('follow the clocks in spring: the missing hour is skipped', () => {
    expect(formatClock('2026-03-29T00:59:00Z', TARNBY)).toBe('01:59');
    expect(formatClock('2026-03-29T01:00:00Z', TARNBY)).toBe('03:00');
  });

  test('say half and quarter hours, west with a true minus, and nothing for UTC itself', () => {
    const summer = '2026-07-01T00:00:00Z';
    expect(formatZoneInWords(summer, 'Asia/Kolkata', 'Kallara')).toBe('Kallara time (UTC+5:30)');
    expect(formatZoneInWords(summer, 'Asia/Kathmandu', 'Kallara')).toBe('Kallara time (UTC+5:45)');
    expect(formatZoneInWords(summer, 'America/St_Johns', 'Ostrander')).toBe('Ostrander time (UTC−2:30)');
    expect(formatZoneInWords(summer, 'UTC', 'Head office')).toBe('Head office time (UTC)');
    expect(formatClock(summer, 'Asia/Kathmandu')).toBe('05:45');
  });

  test('agree with the wall clock at any instant in zones that change by half hours and not at all', () => {
    const zones = ['Australia/Lord_Howe', 'America/St_Johns', 'Asia/Kolkata', TARNBY, 'UTC'];
    const instant = fc.integer({ min: Date.UTC(2000, 0), max: Date.UTC(2040, 0) });
    fc.assert(
      fc.property(instant, fc.constantFrom(...zones), (at, zone) => {
        const { year, month, day, hour, minute } = wallClock(at, zone);
        const shown = Date.UTC(year, month - 1, day, hour, minute);
        const minuteOfAt = Math.floor(at / 60_000) * 60_000;
        expect((shown - minuteOfAt) / 60_000).toBe(zoneOffsetMinutes(at, zone));
      }),
    );
  });
});

describe('ages', () => {
  const now = '2026-12-01T06:00:00Z';
  test.each([
    ['2026-12-01T05:59:30Z', 'just now'],
    ['2026-12-01T05:48:00Z', '12 min ago'],
    ['2026-12-01T00:00:00Z', '6 h ago'],
    ['2026-11-30T06:01:00Z', '23 h ago'],
    ['2026-11-30T06:00:00Z', '1 d ago'],
    ['2026-10-16T05:00:00Z', '46 d ago'],
    ['2026-12-07T06:00:00Z', 'in 6 d'],
  ])('%s reads "%s"', (iso, words) => {
    expect(formatAge(iso, now)).toBe(words);
  });

  test('count elapsed time across a change of the clocks', () => {
    expect(formatAge('2026-10-24T12:00:00Z', '2026-10-25T11:30:00Z')).toBe('23 h ago');
  });
});
