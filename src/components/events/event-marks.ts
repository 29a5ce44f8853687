import type { PlantEvent } from '../../../shared/contracts/events.ts';
import { eventWords, stops } from '../../../shared/rules/event-words.ts';
import type { EventMark } from '../charts/chart-types.ts';

const sameSubject = (a: PlantEvent, b: PlantEvent): boolean =>
  a.unitId === b.unitId && a.softSensorId === b.softSensorId;

/**
 * What events look like in a chart over time: a stop is a span until its start, all else a line with its words.
 * @param rows events that stand, newest first
 */
export function eventMarks(rows: readonly PlantEvent[]): EventMark[] {
  const oldest = rows.filter(({ withdrawnAt }) => withdrawnAt === null).reverse();
  const ends = new Set<PlantEvent>();
  const spans = oldest
    .filter(({ kind }) => stops(kind))
    .map((stop) => {
      const start = oldest.find(
        (other) =>
          other.kind === 'start' && sameSubject(other, stop) && Date.parse(other.at) > Date.parse(stop.at),
      );
      if (start) ends.add(start);
      return { stop, until: start?.at ?? null };
    });
  const moments = oldest.filter((event) => !stops(event.kind) && !ends.has(event));
  return [
    {
      kind: 'event' as const,
      label: 'Stopped',
      at: spans.map(({ stop }) => stop.at),
      until: spans.map(({ until }) => until),
      words: spans.map(({ stop }) => eventWords[stop.kind]),
    },
    {
      kind: 'event' as const,
      label: 'Event',
      at: moments.map(({ at }) => at),
      words: moments.map(({ kind }) => eventWords[kind]),
    },
  ].filter(({ at }) => at.length > 0);
}
