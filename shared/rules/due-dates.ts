import { Temporal } from 'temporal-polyfill';
import type { Interval } from '../contracts/interval.ts';

/** What the next due date is counted from, as dates at the site. */
export interface Attended {
  /** When the duty was last done, or when the soft sensor came into service. */
  on: string;
  /** Never done yet: `on` is the day it came into service. */
  first: boolean;
  /** The due date that was attended to; null where it is not known. */
  dueOn: string | null;
}

/**
 * When a duty falls due next. Months are calendar months, clamped to the end of the month (31 Jan + 1 month = 28 or
 * 29 Feb). Counted from last done: `on` + one interval. Anchored: the first occurrence after `on` (on it or after it
 * where it was never done), each computed from the anchor, so that 31 Jan, 28 Feb, 31 Mar follow each other; whoever
 * attends early has attended to that occurrence, and the one after it is next. Arithmetic of `Temporal.PlainDate.add`
 * with overflow 'constrain' (RFC 5545 would skip the short months instead).
 * @returns "YYYY-MM-DD"
 * @throws RangeError where a date does not exist, or an anchored interval has no anchor
 */
export function nextDueOn(interval: Interval, attended: Attended): string {
  const on = Temporal.PlainDate.from(attended.on);
  if (interval.counted === 'last-done') return step(on, interval, 1).toString();
  if (interval.anchorOn === null) throw new RangeError('An anchored interval needs the day it counts from.');
  const anchor = Temporal.PlainDate.from(interval.anchorOn);
  const after = attended.first ? on.subtract({ days: 1 }) : on;
  const k = occurrenceAfter(anchor, interval, after);
  const next = step(anchor, interval, k);
  const following = step(anchor, interval, k + 1);
  const done = attended.dueOn;
  return done === next.toString() || done === following.toString() ? following.toString() : next.toString();
}

const step = (from: Temporal.PlainDate, { every, unit }: Interval, count: number): Temporal.PlainDate =>
  from.add({ [unit]: every * count });

/** Number of the first occurrence, counted from the anchor as 0, that lies after a day. */
function occurrenceAfter(anchor: Temporal.PlainDate, interval: Interval, day: Temporal.PlainDate): number {
  const isAfter = (k: number) => Temporal.PlainDate.compare(step(anchor, interval, k), day) > 0;
  const { every, unit } = interval;
  const passed = anchor.until(day, { largestUnit: unit })[unit];
  let k = Math.max(0, Math.floor(passed / every) - 1);
  while (!isAfter(k)) k++;
  return k;
}

/** Whole days from one date to another ("2026-12-01" to "2026-12-08" is 7); negative where it lies before. */
export function daysBetween(from: string, to: string): number {
  return Temporal.PlainDate.from(from).until(Temporal.PlainDate.from(to)).days;
}

/** A date some days later (negative: earlier): "2026-12-01" and 7 give "2026-12-08". */
export function addDays(date: string, days: number): string {
  return Temporal.PlainDate.from(date).add({ days }).toString();
}

/**
 * The calendar date that a zone shows at an instant, "2026-12-01".
 * @param zone IANA time zone
 */
export function dateAt(instant: Date, zone: string): string {
  return zoned(instant, zone).toPlainDate().toString();
}

/** The instant at which a clock in `zone` shows an hour of a date; where that hour is skipped, the one after it. */
export function instantOf(date: string, hour: number, zone: string): Date {
  const plain = Temporal.PlainDate.from(date).toPlainDateTime({ hour });
  return new Date(plain.toZonedDateTime(zone, { disambiguation: 'later' }).epochMilliseconds);
}

/** The hour, 0 to 23, that a clock in `zone` shows. */
export const hourAt = (instant: Date, zone: string): number => zoned(instant, zone).hour;

const zoned = (instant: Date, zone: string) =>
  Temporal.Instant.fromEpochMilliseconds(instant.getTime()).toZonedDateTimeISO(zone);
