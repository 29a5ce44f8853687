import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { createTimeReader, detectDateOrder, type TimeRead } from '../../../shared/rules/local-time.ts';
import { wallClock } from '../../../shared/rules/format.ts';
import localTimes from './values/local-times.json';
import rfc3339 from './values/rfc3339.json';

interface LocalCase {
  zone: string;
  local: string;
  kind: string;
  utc?: string;
  utc_earlier?: string;
  utc_later?: string;
  utc_using_offset_before?: string;
  utc_using_offset_after?: string;
}
const read = (
  text: string,
  order: Parameters<typeof createTimeReader>[0]['order'] = 'iso',
  zone = 'Europe/Berlin',
) => createTimeReader({ order, zone })(text);
const at = (result: TimeRead) => (result.ok ? new Date(result.at).toISOString() : result);
const iso = (text: string | undefined) => new Date(text!).toISOString();

// Source: IANA time zone database, computed with another implementation (see the file of values).
describe.each(localTimes.local as LocalCase[])('$local in $zone, which is $kind', (known) => {
  const result = read(known.local, 'iso', known.zone);
  it('is read or refused as the time zone database says', () => {
    if (known.kind === 'unique') expect(at(result)).toBe(iso(known.utc));
    else if (known.kind === 'ambiguous') {
      const figures = { earlier: iso(known.utc_earlier), later: iso(known.utc_later) };
      expect(result).toEqual({ ok: false, code: 'double-hour', figures });
    } else {
      const figures = {
        earlier: iso(known.utc_using_offset_after),
        later: iso(known.utc_using_offset_before),
      };
      expect(result).toEqual({ ok: false, code: 'missing-hour', figures });
    }
  });
});

// Source: the same, for wall times that carry their offset.
describe.each(localTimes.instants)('the instant $utc', (known) => {
  it('is read alike from the wall clock of four zones with its offset', () => {
    const { utc, ...walls } = known;
    for (const wall of Object.values(walls)) expect(at(read(wall))).toBe(iso(utc));
  });
});

describe('texts of RFC 3339', () => {
  const valid = rfc3339.cases.filter((known) => known.valid);
  // Well-defined though RFC 3339 forbids them: laboratories write them so.
  const takenOnPurpose: Record<string, string> = {
    '2024-06-01T12:00:00': '2024-06-01T10:00:00.000Z',
    '2024-06-01T12:00Z': '2024-06-01T12:00:00.000Z',
    '2024-06-01T12:00:00+0200': '2024-06-01T10:00:00.000Z',
    '2024-6-1T12:00:00Z': '2024-06-01T12:00:00.000Z',
  };

  // Source: RFC 3339, sections 5.6 to 5.8.
  it.each(valid)('$text is that instant', ({ text, epoch_ms }) => {
    expect(read(text)).toEqual({ ok: true, at: epoch_ms });
  });

  it.each(rfc3339.cases.filter(({ valid, text }) => !valid && !(text in takenOnPurpose)))(
    '$text is refused',
    ({ text }) => {
      expect(read(text).ok).toBe(false);
    },
  );

  it.each(Object.entries(takenOnPurpose))('%s is taken although the RFC asks for more', (text, instant) => {
    expect(at(read(text))).toBe(instant);
  });
});

describe('the order of day and month', () => {
  it('comes from the rule, never from the cell', () => {
    expect(at(read('03/04/2025 06:00', 'day-month-year', 'UTC'))).toBe('2025-04-03T06:00:00.000Z');
    expect(at(read('03/04/2025 06:00', 'month-day-year', 'UTC'))).toBe('2025-03-04T06:00:00.000Z');
    expect(read('03/04/2025 06:00', 'iso', 'UTC')).toMatchObject({ ok: false, code: 'unreadable-time' });
  });

  it('lets year-first dates and month names stand under any order', () => {
    for (const order of ['iso', 'day-month-year', 'month-day-year'] as const) {
      expect(at(read('2025-04-03 06:00', order, 'UTC'))).toBe('2025-04-03T06:00:00.000Z');
      expect(at(read('3 Apr 2025 6:00', order, 'UTC'))).toBe('2025-04-03T06:00:00.000Z');
      expect(at(read('03-Apr-25, 06:00', order, 'UTC'))).toBe('2025-04-03T06:00:00.000Z');
    }
  });

  it('reads dots, slashes, two-digit years, 12-hour clocks and fractions', () => {
    expect(at(read('3.4.25 06:00', 'day-month-year', 'UTC'))).toBe('2025-04-03T06:00:00.000Z');
    expect(at(read('4/3/2025 12:05 AM', 'month-day-year', 'UTC'))).toBe('2025-04-03T00:05:00.000Z');
    expect(at(read('4/3/2025 12:05:30 p.m.', 'month-day-year', 'UTC'))).toBe('2025-04-03T12:05:30.000Z');
    expect(at(read('2025-04-03\u00a006:00:01,25', 'iso', 'UTC'))).toBe('2025-04-03T06:00:01.250Z');
  });

  it('reads milliseconds since 1970 only when told so', () => {
    expect(at(read('1743660000000', 'epoch-ms'))).toBe('2025-04-03T06:00:00.000Z');
    expect(read('1743660000000', 'iso')).toMatchObject({ code: 'unreadable-time' });
    expect(read('2025-04-03 06:00', 'epoch-ms')).toMatchObject({ code: 'unreadable-time' });
  });
});

describe('what can’t be an instant', () => {
  it('names the day that does not exist', () => {
    const figures = { year: 2026, month: 11, day: 31 };
    expect(read('31.11.2026 06:00', 'day-month-year')).toEqual({
      ok: false,
      code: 'impossible-date',
      figures,
    });
    expect(read('2100-02-29 06:00')).toMatchObject({ code: 'impossible-date' });
    expect(read('11/30/2026', 'day-month-year')).toMatchObject({ figures: { day: 11, month: 30 } });
  });

  it('keeps the day of a date without a time', () => {
    expect(read('29.11.2026', 'day-month-year')).toEqual({
      ok: false,
      code: 'no-time-of-day',
      figures: { on: '2026-11-29' },
    });
  });

  it.each(['2026-11-29 24:00', '2026-11-29 12:60', '2026-11-29 13:00 PM', '2026-11-29 23:59:60'])(
    '%s is no time of day',
    (text) => {
      expect(read(text)).toMatchObject({ code: 'impossible-time' });
    },
  );

  it.each(['', 'yesterday', '45123.5', '29-11/2026', '12:00', '=NOW()', '29 Nix 2026'])(
    '“%s” is unreadable',
    (text) => {
      expect(read(text, 'day-month-year')).toMatchObject({ code: 'unreadable-time' });
    },
  );
});

it('gives back the instant of any wall time that occurs once', () => {
  const zones = [
    'Europe/Berlin',
    'America/Chicago',
    'Australia/Adelaide',
    'Australia/Lord_Howe',
    'Asia/Kolkata',
    'Africa/Casablanca',
  ];
  const instant = fc.date({
    min: new Date('1971-01-01T00:00:00Z'),
    max: new Date('2037-12-31T00:00:00Z'),
    noInvalidDate: true,
  });
  fc.assert(
    fc.property(instant, fc.constantFrom(...zones), (date, zone) => {
      const minute = Math.floor(date.getTime() / 60_000) * 60_000;
      const { year, month, day, hour, minute: min } = wallClock(minute, zone);
      const two = (n: number) => String(n).padStart(2, '0');
      const result = read(`${year}-${two(month)}-${two(day)} ${two(hour)}:${two(min)}`, 'iso', zone);
      if (result.ok) return result.at === minute;
      const either = [result.figures.earlier, result.figures.later];
      return result.code === 'double-hour' && either.includes(new Date(minute).toISOString());
    }),
    { numRuns: 2000 },
  );
});

describe('the order that a column shows', () => {
  it('is open while every day is 12 or less, and settled by one above', () => {
    expect(detectDateOrder(['03/04/2025', '05/06/2025 10:00'])).toBeNull();
    expect(detectDateOrder(['03/04/2025', '', '13/04/2025'])).toBe('day-month-year');
    expect(detectDateOrder(['03/04/2025', '04/13/2025'])).toBe('month-day-year');
    expect(detectDateOrder(['2025-04-03', '03.04.2025'])).toBeNull();
    expect(detectDateOrder(['2025-04-03', '13.04.2025'])).toBe('day-month-year');
  });

  it('is open where cells contradict each other or hold no date', () => {
    expect(detectDateOrder(['13/04/2025', '04/13/2025'])).toBeNull();
    expect(detectDateOrder(['n/a', ''])).toBeNull();
  });

  it('stands against a slip in one of ten', () => {
    const days = Array.from({ length: 9 }, (_, index) => `${13 + index}.11.2026`);
    expect(detectDateOrder([...days, '11.30.2026'])).toBe('day-month-year');
    expect(detectDateOrder([...days.slice(1), '11.30.2026'])).toBeNull();
  });

  it('knows year-first, named months and milliseconds', () => {
    expect(detectDateOrder(['2025-04-03T06:00:00Z'])).toBe('iso');
    expect(detectDateOrder(['3 Apr 2025'])).toBe('day-month-year');
    expect(detectDateOrder(['1743660000000'])).toBe('epoch-ms');
  });
});
