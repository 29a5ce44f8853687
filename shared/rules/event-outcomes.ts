import type { EventCounts, EventRow } from '../contracts/events.ts';
import { type Occurrence, settleEvents, type StandingEvent } from './event-order.ts';
import type { EventSubject, ReadEvent } from './event-row.ts';
import { sayEventProblem, sayEventReason, sayOccurrence } from './event-sentences.ts';

/** A row with what becomes of it; `fresh` are the events it adds. */
export interface DecidedEvent {
  read: ReadEvent;
  outcome: EventRow['outcome'];
  says: string;
  fresh: StandingEvent[];
}

/** What tells subjects apart. */
export const subjectKey = ({ unitId, softSensorId }: Omit<EventSubject, 'name'>): string =>
  unitId === null ? `sensor ${softSensorId}` : `unit ${unitId}`;

/**
 * Decides what becomes of each row of a file of events, knowing the others and what stands.
 * @param read rows in file order
 * @param standing events that stand, by {@link subjectKey}
 * @param site its name and IANA zone, for the sentences
 * @param now UTC, milliseconds since 1970
 */
export function decideEvents(
  read: readonly ReadEvent[],
  standing: ReadonlyMap<string, readonly StandingEvent[]>,
  site: { name: string; zone: string },
  now: number,
): DecidedEvent[] {
  const bySubject = new Map<string, Occurrence[]>();
  const occurrences = new Map<ReadEvent, Occurrence>();
  for (const row of read) {
    if (!row.event) continue;
    const { subject, kind, at, until } = row.event;
    const occurrence = { line: row.line, kind, at, until };
    occurrences.set(row, occurrence);
    const key = subjectKey(subject);
    bySubject.set(key, [...(bySubject.get(key) ?? []), occurrence]);
  }
  const settled = new Map(
    [...bySubject].flatMap(([key, list]) => [...settleEvents(list, standing.get(key) ?? [], now)]),
  );
  return read.map((row): DecidedEvent => {
    const nothing = { read: row, fresh: [] };
    if (!row.event) {
      const says = row.reasons.map((reason) => sayEventReason(reason, site.name, site.zone)).join(' ');
      return { ...nothing, outcome: 'refused', says };
    }
    const { subject } = row.event;
    const { fresh, problem, as } = settled.get(occurrences.get(row)!)!;
    if (problem)
      return { ...nothing, outcome: 'refused', says: sayEventProblem(problem, subject.name, site.zone) };
    if (fresh.length === 0) {
      const says = as === null ? 'Recorded already.' : `The same as line ${as}.`;
      return { ...nothing, outcome: 'skipped', says };
    }
    const says = `${sayOccurrence(row.event, subject.name, site.zone)}.`;
    return { read: row, fresh, outcome: 'added', says };
  });
}

/** Rows by outcome, and the events that they add. */
export function countEvents(rows: readonly DecidedEvent[]): EventCounts {
  const of = (outcome: EventRow['outcome']) => rows.filter((row) => row.outcome === outcome).length;
  return {
    rows: rows.length,
    added: of('added'),
    events: rows.reduce((sum, { fresh }) => sum + fresh.length, 0),
    skipped: of('skipped'),
    refused: of('refused'),
  };
}
