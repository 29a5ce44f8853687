import { differenceInMinutes } from 'date-fns';

/** Shown where there is no value: an en dash, as in a printed table. */
export const NO_VALUE = '–';

const MINUTES_PER_HOUR = 60;
const MINUTES_PER_DAY = 24 * MINUTES_PER_HOUR;
const CALENDAR_DAY = /^(\d{4})-(\d{2})-(\d{2})$/;
/** English months in full, January first; dates show their first three letters. */
export const monthNames = [
  'January',
  'February',
  'March',
  'April',
  'May',
  'June',
  'July',
  'August',
  'September',
  'October',
  'November',
  'December',
] as const;
const MONTHS = monthNames.map((name) => name.slice(0, 3));

type Sign = 'negative' | 'exceptZero';

const numberFormats = new Map<string, Intl.NumberFormat>();
const clockFormats = new Map<string, Intl.DateTimeFormat>();
const offsetFormats = new Map<string, Intl.DateTimeFormat>();

function remembered<T>(store: Map<string, T>, key: string, make: () => T): T {
  const known = store.get(key);
  if (known !== undefined) return known;
  const made = make();
  store.set(key, made);
  return made;
}

function withDecimals(value: number | null | undefined, decimals: number, signDisplay: Sign): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return NO_VALUE;
  const format = remembered(numberFormats, `${signDisplay}${decimals}`, () => {
    const digits = { minimumFractionDigits: decimals, maximumFractionDigits: decimals };
    return new Intl.NumberFormat('en-US', { ...digits, signDisplay });
  });
  return format.format(value).replace('-', '−');
}

/**
 * A number as people read it here: commas at the thousands, a full stop, a true minus sign.
 * What rounds to zero carries no sign.
 * @param value the number; null, undefined, NaN and infinities give an en dash ("–")
 * @param decimals digits after the full stop, 0 to 100
 * @returns for example "1,504.3" or "−15.3"
 * @throws RangeError when `decimals` is not between 0 and 100
 */
export function formatNumber(value: number | null | undefined, decimals = 0): string {
  return withDecimals(value, decimals, 'negative');
}

/**
 * A number that stands for a difference: "+9.8", "−15.3"; what rounds to zero carries no sign ("0", "0.0").
 * @param value the difference; null, undefined, NaN and infinities give an en dash ("–")
 * @param decimals digits after the full stop, 0 to 100
 * @throws RangeError when `decimals` is not between 0 and 100
 */
export function formatSigned(value: number | null | undefined, decimals = 0): string {
  return withDecimals(value, decimals, 'exceptZero');
}

/**
 * A number with its unit: "15.3 °C", "41 %". A no-break space keeps the two on one line.
 * @param value the number, in `unit`; null, undefined, NaN and infinities give an en dash without a unit
 * @param unit the engineering unit as the data sheet writes it; empty for a pure number
 * @param decimals digits after the full stop
 */
export function formatQuantity(value: number | null | undefined, unit: string, decimals = 0): string {
  return joinUnit(formatNumber(value, decimals), unit);
}

/**
 * A difference with its sign and unit: "+9.8 °C", "0.0 °C".
 * @param value the difference, in `unit`; null, undefined, NaN and infinities give an en dash without a unit
 * @param unit the engineering unit; empty for a pure number
 * @param decimals digits after the full stop
 */
export function formatSignedQuantity(value: number | null | undefined, unit: string, decimals = 0): string {
  return joinUnit(formatSigned(value, decimals), unit);
}

function joinUnit(number: string, unit: string): string {
  return unit === '' || number === NO_VALUE ? number : `${number}\u00a0${unit}`;
}

/** A count with commas: "1,504". */
export function formatCount(count: number): string {
  return formatNumber(count, 0);
}

/**
 * A count and its noun: "1 sample", "1,504 samples", "0 samples".
 * @param count how many
 * @param one the noun for exactly one
 * @param many the noun for any other count; `one` with an s when left out
 */
export function plural(count: number, one: string, many = `${one}s`): string {
  return `${formatCount(count)} ${count === 1 ? one : many}`;
}

/** Year, month (1 to 12), day, hour and minute shown by a wall clock. */
export interface WallClock {
  year: number;
  month: number;
  day: number;
  hour: number;
  minute: number;
}

/**
 * What a wall clock in `zone` shows at an instant.
 * @param instant ISO 8601 instant with offset or Z, a Date, or milliseconds since 1970
 * @param zone IANA time zone, such as "Europe/Copenhagen"
 * @throws RangeError when the instant is no time or the zone is not known
 */
export function wallClock(instant: string | number | Date, zone: string): WallClock {
  const format = remembered(clockFormats, zone, () => {
    const date = { year: 'numeric', month: 'numeric', day: 'numeric' } as const;
    const time = { hour: 'numeric', minute: 'numeric', hourCycle: 'h23' } as const;
    return new Intl.DateTimeFormat('en-US', { timeZone: zone, calendar: 'gregory', ...date, ...time });
  });
  const parts = new Map(format.formatToParts(new Date(instant)).map((part) => [part.type, part.value]));
  const part = (type: Intl.DateTimeFormatPartTypes) => Number(parts.get(type));
  return {
    year: part('year'),
    month: part('month'),
    day: part('day'),
    hour: part('hour'),
    minute: part('minute'),
  };
}

/**
 * How far a zone is ahead of UTC at an instant, in minutes (negative west of Greenwich).
 * @param instant ISO 8601 instant, a Date, or milliseconds since 1970
 * @param zone IANA time zone
 * @throws RangeError when the instant is no time or the zone is not known
 */
export function zoneOffsetMinutes(instant: string | number | Date, zone: string): number {
  const format = remembered(
    offsetFormats,
    zone,
    () => new Intl.DateTimeFormat('en-US', { timeZone: zone, timeZoneName: 'longOffset' }),
  );
  const name = format.formatToParts(new Date(instant)).find((part) => part.type === 'timeZoneName')?.value;
  const match = /^GMT([+-])(\d{2}):(\d{2})/.exec(name ?? '');
  if (match === null) return 0;
  const minutes = Number(match[2]) * MINUTES_PER_HOUR + Number(match[3]);
  return match[1] === '-' ? -minutes : minutes;
}

function dayOf(iso: string | number | Date, zone: string): Pick<WallClock, 'year' | 'month' | 'day'> {
  const calendar = typeof iso === 'string' ? CALENDAR_DAY.exec(iso) : null;
  if (calendar === null) return wallClock(iso, zone);
  return { year: Number(calendar[1]), month: Number(calendar[2]), day: Number(calendar[3]) };
}

function dayWords(day: Pick<WallClock, 'year' | 'month' | 'day'>, withYear: boolean): string {
  return `${day.day} ${MONTHS[day.month - 1]}${withYear ? ` ${day.year}` : ''}`;
}

function clockWords({ hour, minute }: WallClock): string {
  return `${String(hour).padStart(2, '0')}:${String(minute).padStart(2, '0')}`;
}

/**
 * A day: "10 Nov", and "10 Nov 2025" when `now` is given and falls in another year.
 * A calendar date ("2026-11-10") is that day in every zone; an instant is the day it falls on in `zone`.
 * @param iso calendar date or ISO 8601 instant
 * @param zone IANA time zone of the site
 * @param now the current instant; without it the year is left out
 * @throws RangeError when `iso` is no time or the zone is not known
 */
export function formatDay(iso: string | number | Date, zone: string, now?: string | number | Date): string {
  const day = dayOf(iso, zone);
  return dayWords(day, now !== undefined && wallClock(now, zone).year !== day.year);
}

/**
 * A day with its year: "10 Nov 2026". Takes what {@link formatDay} takes.
 * @throws RangeError when `iso` is no time or the zone is not known
 */
export function formatDate(iso: string | number | Date, zone: string): string {
  return dayWords(dayOf(iso, zone), true);
}

/**
 * A time of day in `zone`: "14:00".
 * @throws RangeError when `iso` is no time or the zone is not known
 */
export function formatClock(iso: string | number | Date, zone: string): string {
  return clockWords(wallClock(iso, zone));
}

/**
 * An instant on the clock of `zone`: "29 Nov 2026 14:00". Say the zone beside it with {@link formatZoneInWords}.
 * @throws RangeError when `iso` is no time or the zone is not known
 */
export function formatInstant(iso: string | number | Date, zone: string): string {
  const clock = wallClock(iso, zone);
  return `${dayWords(clock, true)} ${clockWords(clock)}`;
}

/**
 * A zone in words with its offset at an instant: "Tarnby time (UTC+1)", "Kallara time (UTC+5:30)".
 * @param iso the instant, because the offset changes with the clocks
 * @param zone IANA time zone of the site
 * @param siteName the place as people there say it
 * @throws RangeError when `iso` is no time or the zone is not known
 */
export function formatZoneInWords(iso: string | number | Date, zone: string, siteName: string): string {
  const offset = zoneOffsetMinutes(iso, zone);
  const hours = Math.floor(Math.abs(offset) / MINUTES_PER_HOUR);
  const minutes = Math.abs(offset) % MINUTES_PER_HOUR;
  const sign = offset < 0 ? '−' : '+';
  const amount = `${hours}${minutes === 0 ? '' : `:${String(minutes).padStart(2, '0')}`}`;
  return `${siteName} time (UTC${offset === 0 ? '' : sign + amount})`;
}

/**
 * How long ago an instant was, in full minutes, hours or days of elapsed time: "12 min ago", "6 h ago", "46 d ago";
 * "just now" within a minute, "in 6 d" for what lies ahead.
 * @param iso ISO 8601 instant
 * @param now the current instant
 * @throws RangeError when either is no time
 */
export function formatAge(iso: string | number | Date, now: string | number | Date): string {
  const minutes = differenceInMinutes(new Date(now), new Date(iso));
  if (Number.isNaN(minutes)) throw new RangeError(`Not a time: ${String(iso)} or ${String(now)}.`);
  const size = Math.abs(minutes);
  if (size < 1) return 'just now';
  const amount =
    size < MINUTES_PER_HOUR
      ? `${size} min`
      : size < MINUTES_PER_DAY
        ? `${Math.floor(size / MINUTES_PER_HOUR)} h`
        : `${formatCount(Math.floor(size / MINUTES_PER_DAY))} d`;
  return minutes > 0 ? `${amount} ago` : `in ${amount}`;
}
