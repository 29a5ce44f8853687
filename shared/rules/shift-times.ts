import { Temporal } from 'temporal-polyfill';
import type { Shift } from '../contracts/sampling.ts';

/** A shift as it was or will be; instants are UTC milliseconds. */
export interface ShiftSpan {
  name: string;
  from: number;
  until: number;
  /** Of how many shifts that begin on its day of the site it is which, from 0. */
  ofDay: { index: number; count: number };
  /** Day of the site on which it begins: 1 Monday to 7 Sunday. */
  dayOfWeek: number;
}

type Start = Omit<ShiftSpan, 'until'>;

/** A time of a day by the clocks: the first of two, and for one that they skipped the instant at which they went on. */
function instantOf(local: Temporal.PlainDateTime, zone: string): number {
  const first = local.toZonedDateTime(zone, { disambiguation: 'earlier' });
  const shown = first.toPlainDateTime().equals(local);
  return (shown ? first : first.getTimeZoneTransition('next')!).epochMilliseconds;
}

/** Beginnings of shifts on a day of the site. */
function startsOn(day: Temporal.PlainDate, shifts: readonly Shift[], zone: string): Start[] {
  return shifts.map(({ name, from }, index) => ({
    name,
    from: instantOf(day.toPlainDateTime(Temporal.PlainTime.from(from)), zone),
    ofDay: { index, count: shifts.length },
    dayOfWeek: day.dayOfWeek,
  }));
}

/**
 * The shift at an instant, or one beside it. Each lasts until the next begins, across midnight and changes of the clocks.
 * A beginning that the clocks skip is the first instant after, and one that they show twice is the first; a shift that
 * falls into the skipped time whole is left out.
 * @param shifts when shifts begin by the clock of the site, in order of time; one at least
 * @param zone IANA zone of the site
 * @param at UTC milliseconds
 * @param beside how many shifts later; negative for earlier
 */
export function shiftAt(shifts: readonly Shift[], zone: string, at: number, beside = 0): ShiftSpan {
  const today = Temporal.Instant.fromEpochMilliseconds(at).toZonedDateTimeISO(zone).toPlainDate();
  const around = 2 + Math.ceil(Math.abs(beside) / shifts.length);
  const days = Array.from({ length: 2 * around + 1 }, (_, index) => today.add({ days: index - around }));
  const starts = days
    .flatMap((day) => startsOn(day, shifts, zone))
    .filter(({ from }, index, all) => from !== all[index + 1]?.from);
  const current = starts.findLastIndex(({ from }) => from <= at) + beside;
  return { ...starts[current]!, until: starts[current + 1]!.from };
}
