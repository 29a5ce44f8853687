import type {
  Ask,
  Asked,
  EnteredSample,
  NotTakenReason,
  SampleRequest,
} from '../../../shared/contracts/sampling.ts';
import {
  formatClock,
  formatCount,
  formatDate,
  formatDay,
  formatInstant,
  formatZoneInWords,
  plural,
} from '../../../shared/rules/format.ts';
import type { Entry } from '../../queries/sampling.ts';

export const notTakenWords: Record<NotTakenReason, string> = {
  'unit-stopped': 'Unit stopped',
  'no-safe-access': 'No safe access',
  'bottle-lost': 'Bottle lost',
  other: 'Other',
};

/** The finding of a shift: "4 samples are asked for this shift at Tarnby Works: 1 taken, 1 not taken." */
export function sayAsked(siteName: string, { asks }: Asked, which: 'previous' | 'current' | 'next'): string {
  const when = { previous: 'in the last shift', current: 'this shift', next: 'in the next shift' }[which];
  const was = which === 'previous' ? ['was', 'were'] : ['is', 'are'];
  if (asks.length === 0) return `Nothing ${was[0]} asked for ${when} at ${siteName}.`;
  const one = asks.length === 1;
  const asked = `${formatCount(asks.length)} ${one ? 'sample' : 'samples'} ${one ? was[0] : was[1]} asked for ${when} at ${siteName}`;
  const counted = (kind: Ask['state']['kind']) => asks.filter(({ state }) => state.kind === kind).length;
  const parts = [
    [counted('taken'), 'taken'],
    [counted('not-taken'), 'not taken'],
    [counted('unit-stopped'), 'where the unit is stopped'],
  ] as const;
  const told = parts.filter(([count]) => count > 0).map(([count, word]) => `${formatCount(count)} ${word}`);
  return told.length === 0 ? `${asked}.` : `${asked}: ${told.join(', ')}.`;
}

/** "Night, 22:00 to 06:00, Tarnby Works time (UTC+1)". */
export function sayShift({ shift }: Pick<Asked, 'shift'>, site: { name: string; zone: string }): string {
  const { name, fromAt, untilAt } = shift;
  const clock = (at: string) => formatClock(at, site.zone);
  return `${name}, ${clock(fromAt)} to ${clock(untilAt)}, ${formatZoneInWords(fromAt, site.zone, site.name)}`;
}

/** Why a sample is asked for and what stands of it. */
export function sayState({ state }: Ask, zone: string): string {
  switch (state.kind) {
    case 'open':
      return '';
    case 'taken':
      return `Taken ${formatClock(state.takenAt, zone)}: ${joinUnit(state.asWritten, state.unit)}, ${state.sampleNumber}`;
    case 'not-taken':
      return `Not taken: ${state.reason === 'other' ? state.note : notTakenWords[state.reason].toLowerCase()} (${state.by})`;
    case 'unit-stopped':
      return `Unit stopped since ${formatInstant(state.since, zone)}; nothing is to be taken.`;
  }
}

/** "for TY-1402, TY-1405; Immersion pyrometry; last 1482,5 °C, 28 Nov 14:00", and who asked, where it is not the plan. */
export function sayDetails(ask: Ask, zone: string, now: Date, withReason = true): string {
  const { softSensors, source, method, last } = ask;
  const asker = source.kind === 'request' ? `, asked by ${source.askedBy}` : '';
  const reason = source.kind === 'request' && withReason && source.reason ? `: “${source.reason}”` : '';
  const today = last && formatDate(last.takenAt, zone) === formatDate(now, zone);
  const day = last && !today ? `${formatDay(last.takenAt, zone, now)} ` : '';
  const before = last
    ? `last ${joinUnit(last.asWritten, last.unit)}, ${day}${formatClock(last.takenAt, zone)}`
    : '';
  const words = `for ${softSensors.map(({ tagName }) => tagName).join(', ')}${asker}${reason}`;
  return [words, method, before].filter(Boolean).join('; ');
}

/** "5 samples asked for by Marco until 4 Dec 2026 13:00, 2 taken: “The last eight read high.”" */
export function sayRequest({ count, taken, askedBy, untilAt, reason }: SampleRequest, zone: string): string {
  const why = reason ? `: “${reason}”` : '.';
  return `${plural(count, 'sample')} asked for by ${askedBy} until ${formatInstant(untilAt, zone)}, ${formatCount(taken)} taken${why}`;
}

const joinUnit = (value: string, unit: string): string => (unit ? `${value}\u00a0${unit}` : value);

/**
 * Keys of the open asks that entries kept on this device answer: what was not taken answers the time it names; a value
 * the one whose number its bottle bears, else the nearest one at its point that is left.
 */
export function answeredHere(asks: readonly Ask[], entries: readonly Entry[]): Set<string> {
  const keys = new Set<string>();
  const left = (entry: Entry) =>
    asks.filter(
      ({ state, samplePointId, key }) =>
        state.kind === 'open' && samplePointId === entry.body.samplePointId && !keys.has(key),
    );
  const values: EnteredSample[] = [];
  for (const entry of entries) {
    const own = left(entry).find((ask) =>
      entry.kind === 'value'
        ? ask.suggestedNumber === entry.body.sampleNumber
        : ask.askedFor === entry.body.askedFor,
    );
    if (own) keys.add(own.key);
    else if (entry.kind === 'value') values.push(entry.body);
  }
  for (const body of values) {
    const away = ({ askedFor }: Ask) => Math.abs(Date.parse(askedFor) - Date.parse(body.takenAt));
    const nearest = left({ kind: 'value', body }).sort((one, other) => away(one) - away(other))[0];
    if (nearest) keys.add(nearest.key);
  }
  return keys;
}

/** Keys of the asks that are the first of their request in a list. */
export function firstOfEach(asks: readonly Ask[]): Set<string> {
  const seen = new Map<number, string>();
  for (const { source, key } of asks) {
    if (source.kind === 'request' && !seen.has(source.requestId)) seen.set(source.requestId, key);
  }
  return new Set(seen.values());
}
