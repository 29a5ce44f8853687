import type { EventCounts, EventKind } from '../contracts/events.ts';
import { formatClock, formatCount, formatInstant, plural, zoneOffsetMinutes } from './format.ts';
import type { EventFileProblem, EventReason } from './event-row.ts';
import type { EventProblem, Occurrence } from './event-order.ts';
import type { TimeProblem } from './local-time.ts';
import { eventWords, stops } from './event-words.ts';
import { sayFileProblem } from './sample-sentences.ts';

/** "Stop of Melting furnace 1 from 28 Nov 2026 04:10 to 29 Nov 2026 14:00", "Grade change of TY-1402 on …". */
export function sayOccurrence(
  { kind, at, until }: Omit<Occurrence, 'line'>,
  name: string,
  zone: string,
): string {
  const what = `${eventWords[kind]} of ${name}`;
  if (until !== null) return `${what} from ${formatInstant(at, zone)} to ${formatInstant(until, zone)}`;
  return `${what} ${stops(kind) ? 'from' : 'on'} ${formatInstant(at, zone)}`;
}

/**
 * Why an event can’t be recorded, and what to do.
 * @param name of the unit or soft sensor
 * @param zone IANA zone of the site
 */
export function sayEventProblem({ code, field, figures }: EventProblem, name: string, zone: string): string {
  const time = (key: string) => formatInstant(figures[key]!, zone);
  switch (code) {
    case 'ahead':
      return `${time('at')} is still to come. Record it once it has happened, or check the date.`;
    case 'before-1970':
      return `${time('at')} lies before 1970. Check the year.`;
    case 'until-without-stop':
      return 'Only a stop or a turnaround lasts until a time. Leave the end out.';
    case 'until-not-after':
      return `It must end after it began, ${time('at')}.`;
    case 'stopped-already':
      return figures.next === undefined
        ? `${name} is recorded as stopped since ${time('since')} already. Record its start first, or withdraw that stop if it is wrong.`
        : `${name} is recorded as stopped from ${time('since')} to ${time('next')} already. Give a time outside it, or withdraw that stop if it is wrong.`;
    case 'stops-later':
      return field === 'until'
        ? `${name} is recorded as stopped from ${time('at')} on. Let this stop end before then, or withdraw that one if it is wrong.`
        : `${name} is recorded as stopped from ${time('at')} on. Say until when this stop lasted, or withdraw that one if it is wrong.`;
    case 'started-already':
      return startedAlready(name, time('since'), figures.next === undefined ? null : time('next'));
    case 'starts-later':
      return `${name} is recorded as started only at ${time('at')}. Withdraw that start first if it is wrong.`;
    case 'start-before-stop':
      return `${name} was not stopped then: nothing is recorded of it before ${time('next')}. A start comes after its stop; record the stop first.`;
  }
}

function startedAlready(name: string, since: string, next: string | null): string {
  const until = next === null ? '' : ` and stopped next at ${next}`;
  return `${name} was not stopped then: it is recorded as started at ${since}${until}. A start comes after its stop; record the stop first.`;
}

/** "25 Oct 2026 02:30+02:00": stands for itself, whatever the clocks do. */
function withOffset(instant: string, zone: string): string {
  const minutes = zoneOffsetMinutes(instant, zone);
  const two = (part: number) => String(part).padStart(2, '0');
  const size = Math.abs(minutes);
  return `${formatInstant(instant, zone)}${minutes < 0 ? '-' : '+'}${two(Math.floor(size / 60))}:${two(size % 60)}`;
}

/**
 * Why a typed or written time gives no instant, and what to do.
 * @param zone IANA zone of the site
 */
export function sayEventTime({ code, figures }: TimeProblem, zone: string): string {
  switch (code) {
    case 'no-time-of-day':
      return 'The time of day is missing. Write it after the date, such as 2026-11-29 14:00.';
    case 'missing-hour':
      return `The clocks were put forward over this time, so it did not occur. It may be meant as ${formatClock(String(figures.earlier), zone)} or ${formatClock(String(figures.later), zone)}.`;
    case 'double-hour':
      return `The clocks showed this time twice. Write it with its offset: ${withOffset(String(figures.earlier), zone)} or ${withOffset(String(figures.later), zone)}.`;
    case 'impossible-date':
      return 'There is no such day. Is the order of day and month the other way round?';
    case 'impossible-time':
      return 'There is no such time of day.';
    case 'unreadable-time':
      return 'It can’t be read as a time. One looks like 2026-11-29 14:00.';
  }
}

const kindList = Object.values(eventWords)
  .map((word) => word.toLowerCase())
  .join(', ')
  .replace(/, ([^,]+)$/, ' or $1');

/** Why a row of a file of events is refused, and how to mend it. */
export function sayEventReason(reason: EventReason, siteName: string, zone: string): string {
  switch (reason.code) {
    case 'no-subject':
      return 'No unit and no soft sensor is named. Write the name of one.';
    case 'unknown-unit':
      return `There is no unit or soft sensor “${reason.written}” at ${siteName}. Correct the name; a file never adds a unit.`;
    case 'unknown-sensor':
      return `There is no soft sensor “${reason.written}” at ${siteName}. Correct the tag, or leave it out for the whole unit.`;
    case 'several-units':
      return `${siteName} has several units “${reason.written}”. Write the area before it, such as “${reason.such}”.`;
    case 'other-unit':
      return `${reason.written} belongs to ${reason.such}, not to the unit named. Correct one of the two.`;
    case 'no-event':
      return `What happened is missing. Write ${kindList}.`;
    case 'unknown-event':
      return `“${reason.written}” is no event known here. Write ${kindList}.`;
    case 'no-time':
      return 'The time is missing. Write one such as 2026-11-29 14:00.';
    case 'time':
      return `${reason.column === 'until' ? 'The end' : 'The time'}, “${reason.written}”: ${sayEventTime(reason.problem, zone)}`;
    case 'long-note':
      return `The note has ${formatCount(reason.length)} characters; 1,000 are the most. Shorten it.`;
    case 'ragged':
      return `${plural(reason.found, 'cell')} where the first line names ${formatCount(reason.expected)} columns. Put quotation marks around a text that holds the delimiter.`;
  }
}

/** Why a file can’t be taken as a file of events, and what to do. */
export function sayEventFileProblem(problem: EventFileProblem): string {
  switch (problem.code) {
    case 'missing-columns':
      return `The first line must name the columns: unit (or soft sensor), event, time, and where wanted until and note. None for ${problem.missing.join(' and ')} is found in “${problem.found}”.`;
    case 'too-many-rows':
      return `This file has more than ${formatCount(problem.most)} rows. Split it and add the parts.`;
    case 'too-many-columns':
      return 'This file has more than 1,000 columns; events come one to a row.';
    case 'document':
      return 'This is a PDF, not a CSV. Save the list as CSV and send that file.';
    default:
      return sayFileProblem(problem);
  }
}

/**
 * The finding of a file: "12 rows: 10 will be added, 1 skipped (recorded already), 1 refused.", and once added
 * "0 added, 12 skipped: recorded already."
 */
export function sayEventCounts(counts: EventCounts, committed: boolean): string {
  const { added, skipped, refused } = counts;
  const refusals = refused > 0 ? [`${formatCount(refused)} refused`] : [];
  if (added === 0 && refused === 0) return `0 added, ${formatCount(skipped)} skipped: recorded already.`;
  const skips = skipped > 0 ? [`${formatCount(skipped)} skipped (recorded already)`] : [];
  const as = counts.events === added ? '' : ` as ${plural(counts.events, 'event')}`;
  const adds = `${added === 0 ? 'none' : formatCount(added)} ${committed ? 'added' : 'will be added'}${as}`;
  return `${plural(counts.rows, 'row')}: ${[adds, ...skips, ...refusals].join(', ')}.`;
}

/** What withdrawing an event does, for the question before it. */
export function sayWithdrawal(kind: EventKind, name: string): string {
  const kept = 'The record stays, marked as withdrawn with your reason.';
  if (stops(kind))
    return `Samples taken while ${name} was stopped count again; a start recorded after it stays. ${kept}`;
  if (kind === 'start') return `${name} then reads as stopped until another start is recorded. ${kept}`;
  return `Errors from before it count again. ${kept}`;
}
