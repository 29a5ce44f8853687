import { Temporal } from 'temporal-polyfill';
import { type DateOrder, monthNamed, yearFirst, yearLast } from './date-shape.ts';

export {
  type DateOrder,
  type DateShape,
  dateOrderOf,
  dateShape,
  detectDateOrder,
  looksLikeTime,
} from './date-shape.ts';

/** Why a text gives no instant. The figures say what was found; sentences are made elsewhere. */
export interface TimeProblem {
  ok: false;
  code:
    | 'no-time-of-day'
    | 'missing-hour'
    | 'double-hour'
    | 'impossible-date'
    | 'impossible-time'
    | 'unreadable-time';
  figures: Record<string, string | number>;
}
export type TimeRead = { ok: true; at: number } | TimeProblem;

interface Parts {
  year: number;
  month: number;
  day: number;
  /** Missing where the text holds a date alone. */
  clock?: { hour: number; minute: number; second: number; millisecond: number };
  /** Minutes ahead of UTC, where the text says so. */
  offset?: number;
}

const minuteMs = 60_000;
const dayMs = 86_400_000;
const monthNames = ['jan', 'feb', 'mar', 'apr', 'may', 'jun', 'jul', 'aug', 'sep', 'oct', 'nov', 'dec'];

const epochMs = /^-?\d{1,15}$/;

/**
 * Makes a reader of times as files write them.
 *
 * It takes year-first dates (ISO 8601, RFC 3339; one-digit months and days too), day-month-year or month-day-year with
 * `.`, `/` or `-` as the order says, English month names, 12- and 24-hour clocks, fractions of a second (cut to
 * milliseconds) and offsets; or whole milliseconds since 1970 with the order `epoch-ms`. A year of two digits is read
 * as 1970 to 2069 (POSIX). A text with an offset stands for itself; any other is a time on the clock of the zone, and
 * a time that this clock skipped or showed twice is refused with both instants it may mean.
 *
 * @param rule.order order of day and month; a year-first text is read whatever the order
 * @param rule.zone IANA zone of texts without an offset
 * @returns a function from text to `{ ok: true, at }` (UTC, milliseconds since 1970) or a problem with its code:
 * `no-time-of-day` { on: 'YYYY-MM-DD' }, `missing-hour` and `double-hour` { earlier, later: ISO instants },
 * `impossible-date` { year, month, day }, `impossible-time`, `unreadable-time`
 * @throws RangeError from the returned function when the zone is not known
 */
export function createTimeReader(rule: { order: DateOrder; zone: string }): (text: string) => TimeRead {
  const toInstant = zoneClock(rule.zone);
  return (text) => {
    const trimmed = text.trim();
    if (rule.order === 'epoch-ms') {
      return epochMs.test(trimmed) ? { ok: true, at: Number(trimmed) } : problem('unreadable-time');
    }
    const parts = partsOf(trimmed, rule.order);
    return 'code' in parts ? parts : resolve(parts, toInstant);
  };
}

const problem = (code: TimeProblem['code'], figures: TimeProblem['figures'] = {}): TimeProblem => ({
  ok: false,
  code,
  figures,
});

function partsOf(text: string, order: DateOrder): Parts | TimeProblem {
  const iso = yearFirst.exec(text);
  if (iso) return withClock(Number(iso[1]), Number(iso[3]), Number(iso[4]), iso);
  const named = monthNamed.exec(text);
  if (named) {
    const month = monthNames.indexOf(named[3]!.toLowerCase()) + 1;
    return month === 0
      ? problem('unreadable-time')
      : withClock(fullYear(named[4]!), month, Number(named[1]), named);
  }
  const last = order === 'iso' ? null : yearLast.exec(text);
  if (!last) return problem('unreadable-time');
  const [first, second] = [Number(last[1]), Number(last[3])];
  const [day, month] = order === 'day-month-year' ? [first, second] : [second, first];
  return withClock(fullYear(last[4]!), month, day, last);
}

function fullYear(digits: string): number {
  const year = Number(digits);
  if (digits.length === 4) return year;
  return year < 70 ? 2000 + year : 1900 + year;
}

/** Adds clock and offset, which are groups 5 to 10: hour, minute, second, fraction, a or p, offset. */
function withClock(year: number, month: number, day: number, match: RegExpExecArray): Parts | TimeProblem {
  if (!isDay(year, month, day)) return problem('impossible-date', { year, month, day });
  const [hours, minutes, seconds = '0', fraction = '', half, ahead] = match.slice(5);
  if (hours === undefined) return { year, month, day };
  const hour = half === undefined ? Number(hours) : hourOfHalfDay(Number(hours), half);
  const minute = Number(minutes);
  const second = Number(seconds);
  if (hour > 23 || minute > 59 || second > 60) return problem('impossible-time');
  const millisecond = Number(fraction.slice(0, 3).padEnd(3, '0'));
  const clock = { hour, minute, second, millisecond };
  if (ahead === undefined) return { year, month, day, clock };
  const offset = offsetMinutes(ahead);
  return offset === null ? problem('unreadable-time') : { year, month, day, clock, offset };
}

const hourOfHalfDay = (hour: number, half: string): number =>
  hour < 1 || hour > 12 ? Infinity : (hour % 12) + (half.toLowerCase() === 'p' ? 12 : 0);

function isDay(year: number, month: number, day: number): boolean {
  const date = new Date(Date.UTC(year, month - 1, day));
  return date.getUTCFullYear() === year && date.getUTCMonth() === month - 1 && date.getUTCDate() === day;
}

function offsetMinutes(text: string): number | null {
  if (!/^[+-]/.test(text)) return 0;
  const hours = Number(text.slice(1, 3));
  const minutes = text.length > 3 ? Number(text.slice(-2)) : 0;
  if (hours > 23 || minutes > 59) return null;
  return (text.startsWith('-') ? -1 : 1) * (hours * 60 + minutes);
}

const calendarDay = ({ year, month, day }: Parts): string =>
  `${String(year).padStart(4, '0')}-${String(month).padStart(2, '0')}-${String(day).padStart(2, '0')}`;

function resolve(parts: Parts, toInstant: (parts: Parts) => TimeRead): TimeRead {
  const { clock, offset } = parts;
  if (!clock) return problem('no-time-of-day', { on: calendarDay(parts) });
  if (clock.second === 60) return leapSecond(parts);
  if (offset === undefined) return toInstant(parts);
  return { ok: true, at: wallMs(parts) - offset * minuteMs };
}

/** A leap second exists only at the end of June or December in UTC; it is read as second 59 (RFC 3339, section 5.7). */
function leapSecond(parts: Parts): TimeRead {
  if (parts.offset === undefined) return problem('impossible-time');
  const at = wallMs({ ...parts, clock: { ...parts.clock!, second: 59 } }) - parts.offset * minuteMs;
  const next = new Date(Math.floor(at / 1000) * 1000 + 1000);
  const halfYear = next.getTime() % dayMs === 0 && next.getUTCDate() === 1 && next.getUTCMonth() % 6 === 0;
  return halfYear ? { ok: true, at } : problem('impossible-time');
}

function wallMs({ year, month, day, clock }: Parts): number {
  const { hour, minute, second, millisecond } = clock!;
  return Date.UTC(year, month - 1, day, hour, minute, second, millisecond);
}

/**
 * Local time to instant. A day on which the clocks stand still needs one offset, kept for the next text of that day;
 * on any other day each time is asked for, and one that was skipped or shown twice is refused.
 */
function zoneClock(zone: string): (parts: Parts) => TimeRead {
  const offsets = new Map<number, number | null>();
  return (parts) => {
    const midnight = Date.UTC(parts.year, parts.month - 1, parts.day);
    let offset = offsets.get(midnight);
    if (offset === undefined) {
      offset = steadyOffset(parts, zone);
      offsets.set(midnight, offset);
    }
    return offset === null ? askZone(parts, zone) : { ok: true, at: wallMs(parts) - offset };
  };
}

/** Milliseconds ahead of UTC throughout a local day; null for a day that the clocks change on. */
function steadyOffset({ year, month, day }: Parts, zone: string): number | null {
  const date = new Temporal.PlainDate(year, month, day);
  const start = date.toZonedDateTime(zone);
  const change = start.getTimeZoneTransition('next');
  const end = date.add({ days: 1 }).toZonedDateTime(zone);
  if (change && change.epochMilliseconds < end.epochMilliseconds) return null;
  const midnight = Date.UTC(year, month - 1, day);
  const offset = start.offsetNanoseconds / 1e6;
  return start.epochMilliseconds + offset === midnight ? offset : null;
}

function askZone(parts: Parts, zone: string): TimeRead {
  const { year, month, day, clock } = parts;
  const { hour, minute, second, millisecond } = clock!;
  const plain = new Temporal.PlainDateTime(year, month, day, hour, minute, second, millisecond);
  try {
    return { ok: true, at: plain.toZonedDateTime(zone, { disambiguation: 'reject' }).epochMilliseconds };
  } catch {
    const earlier = plain.toZonedDateTime(zone, { disambiguation: 'earlier' });
    const later = plain.toZonedDateTime(zone, { disambiguation: 'later' });
    const shown = earlier.toPlainDateTime().equals(plain);
    return problem(shown ? 'double-hour' : 'missing-hour', {
      earlier: new Date(earlier.epochMilliseconds).toISOString(),
      later: new Date(later.epochMilliseconds).toISOString(),
    });
  }
}

/**
 * The end of a calendar day on the clock of a zone: the instant at which the next one begins.
 * @param on "YYYY-MM-DD"
 * @returns UTC, milliseconds since 1970
 */
export function endOfDay(on: string, zone: string): number {
  return Temporal.PlainDate.from(on).add({ days: 1 }).toZonedDateTime(zone).epochMilliseconds;
}
