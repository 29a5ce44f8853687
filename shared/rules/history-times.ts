import { Temporal } from 'temporal-polyfill';
import type { HistoryDateOrder, HistoryRefusalCode } from '../contracts/history.ts';

/** How the times of a file are read. `latestMs`: instants after it are yet to come and refused. */
export interface TimeForm {
  dateOrder: HistoryDateOrder;
  zone: string;
  latestMs: number;
}

const clock = String.raw`(?:(?:T|,?\s+)(\d{1,2})[:.](\d{2})(?:[:.](\d{2})(?:[.,](\d{1,9}))?)?\s*([ap]\.?m\.?)?\s*(Z|UTC|GMT|[+-]\d{2}(?::?\d{2})?)?)?`;
const month = String.raw`(\d{1,2}|[a-z]{3,9})`;
const forms = {
  iso: new RegExp(String.raw`^(\d{4})[-/.](\d{1,2})[-/.](\d{1,2})${clock}$`, 'i'),
  'day-month-year': new RegExp(String.raw`^(\d{1,2})[-/. ]${month}[-/. ](\d{4}|\d{2})${clock}$`, 'i'),
  'month-day-year': new RegExp(String.raw`^${month}[-/. ](\d{1,2})[-/. ](\d{4}|\d{2})${clock}$`, 'i'),
};
const places = { iso: [1, 2, 3], 'day-month-year': [3, 2, 1], 'month-day-year': [3, 1, 2] } as const;
const monthNames = ['jan', 'feb', 'mar', 'apr', 'may', 'jun', 'jul', 'aug', 'sep', 'oct', 'nov', 'dec'];
const dayMs = 86_400_000;

/**
 * Makes a reader of the times of one file.
 * @returns a function from a cell to its instant in milliseconds since 1970, or to the code that says why it has none.
 * A time without offset is on the clock of `zone`: the hour that spring skips and the one that autumn repeats are
 * refused, as is a date that no calendar holds. Fractions finer than a millisecond are cut off.
 * @throws RangeError when the zone is not known
 */
export function timeReader(form: TimeForm): (text: string) => number | HistoryRefusalCode {
  const read =
    form.dateOrder === 'epoch-ms' || form.dateOrder === 'epoch-s'
      ? epochReader(form.dateOrder)
      : dateReader(form);
  // In a file with a row for each reading the same time stands in many rows, one after the other.
  let lastText = '';
  let last: number | HistoryRefusalCode = 'time-missing';
  return (text) => {
    if (text === lastText) return last;
    lastText = text;
    const found = text.trim() === '' ? 'time-missing' : read(text.trim());
    last =
      typeof found !== 'number'
        ? found
        : found < 0
          ? 'before-1970'
          : found > form.latestMs
            ? 'in-the-future'
            : found;
    return last;
  };
}

function epochReader(order: 'epoch-ms' | 'epoch-s') {
  return (text: string): number | HistoryRefusalCode => {
    if (!/^-?\d{1,15}(\.\d+)?$/.test(text)) return 'time-unreadable';
    return Math.trunc(Number(text) * (order === 'epoch-s' ? 1000 : 1));
  };
}

function dateReader({ dateOrder, zone }: TimeForm) {
  const order = dateOrder as keyof typeof forms;
  const form = forms[order];
  const [yearAt, monthAt, dayAt] = places[order];
  const offsets = localOffsets(zone);
  return (text: string): number | HistoryRefusalCode => {
    const found = form.exec(text);
    if (!found) return 'time-unreadable';
    if (found[4] === undefined) return 'time-without-clock';
    const year = wholeYear(found[yearAt]!);
    const monthNumber = monthOf(found[monthAt]!);
    const day = Number(found[dayAt]);
    if (monthNumber === 0) return 'time-unreadable';
    // `Date.UTC` would take the years 0 to 99 for 1900 to 1999.
    if (year < 1900) return 'before-1970';
    const hour = hourOf(Number(found[4]), found[8]);
    const minute = Number(found[5]);
    const second = Number(found[6] ?? 0);
    if (day < 1 || day > daysIn(year, monthNumber) || hour > 23 || minute > 59 || second > 59)
      return 'no-such-time';
    const milli = found[7] === undefined ? 0 : Math.trunc(Number(`0.${found[7]}`) * 1000);
    const local = Date.UTC(year, monthNumber - 1, day, hour, minute, second, milli);
    if (found[9] !== undefined) return local - offsetMs(found[9]);
    return offsets(local);
  };
}

/** Two digits mean 1970 to 2069, as POSIX reads them. */
function wholeYear(text: string): number {
  const year = Number(text);
  if (text.length === 4) return year;
  return year < 70 ? 2000 + year : 1900 + year;
}

function monthOf(text: string): number {
  const number = Number(text);
  if (!Number.isNaN(number)) return number >= 1 && number <= 12 ? number : 0;
  return monthNames.indexOf(text.slice(0, 3).toLowerCase()) + 1;
}

const daysIn = (year: number, monthNumber: number): number =>
  new Date(Date.UTC(year, monthNumber, 0)).getUTCDate();

function hourOf(hour: number, half: string | undefined): number {
  if (half === undefined) return hour;
  if (hour < 1 || hour > 12) return 24;
  return (hour % 12) + (half.toLowerCase().startsWith('p') ? 12 : 0);
}

function offsetMs(text: string): number {
  const found = /^([+-])(\d{2}):?(\d{2})?$/.exec(text);
  if (!found) return 0;
  const minutes = Number(found[2]) * 60 + Number(found[3] ?? 0);
  return (found[1] === '-' ? -minutes : minutes) * 60_000;
}

/**
 * From clock time, written as if it were UTC, to its instant. A day on which the clock does not change has one offset,
 * asked for once; on the others every time is asked for by itself.
 */
function localOffsets(zone: string) {
  const days = new Map<number, number | null>();
  return (local: number): number | HistoryRefusalCode => {
    const day = Math.floor(local / dayMs);
    let offset = days.get(day);
    if (offset === undefined) {
      offset = offsetOfDay(day, zone);
      days.set(day, offset);
    }
    return offset === null ? instantOf(local, zone) : local - offset;
  };
}

function offsetOfDay(day: number, zone: string): number | null {
  const date = new Date(day * dayMs);
  const first = Temporal.PlainDate.from({
    year: date.getUTCFullYear(),
    month: date.getUTCMonth() + 1,
    day: date.getUTCDate(),
  });
  const begins = first.toZonedDateTime(zone);
  const ends = first.add({ days: 1 }).toZonedDateTime(zone);
  const steady = begins.offsetNanoseconds === ends.offsetNanoseconds && begins.hoursInDay === 24;
  return steady ? begins.offsetNanoseconds / 1e6 : null;
}

function instantOf(local: number, zone: string): number | HistoryRefusalCode {
  const wall = Temporal.PlainDateTime.from(new Date(local).toISOString().slice(0, -1));
  try {
    return wall.toZonedDateTime(zone, { disambiguation: 'reject' }).epochMilliseconds;
  } catch {
    const taken = wall.toZonedDateTime(zone, { disambiguation: 'earlier' }).toPlainDateTime();
    return taken.equals(wall) ? 'hour-twice' : 'hour-skipped';
  }
}
