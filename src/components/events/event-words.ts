import type { PlantEvent, Standstill } from '../../../shared/contracts/events.ts';
import { formatInstant, plural } from '../../../shared/rules/format.ts';
import { eventWords } from '../../../shared/rules/event-words.ts';

type Subject = Pick<PlantEvent, 'unitName' | 'tagName'>;

/** The soft sensor an event happened to, or the unit. */
export const subjectName = ({ unitName, tagName }: Subject): string => tagName ?? unitName;

/** "Stop of Melting furnace 1". */
export const eventName = (event: PlantEvent): string => `${eventWords[event.kind]} of ${subjectName(event)}`;

/** What is stopped at a site, as the headline of its events. */
export function sayStandstills(stopped: readonly Standstill[], siteName: string, zone: string): string {
  const [first] = stopped;
  if (!first) return `Nothing is recorded as stopped at ${siteName}.`;
  const since = formatInstant(first.since, zone);
  if (stopped.length === 1) return `${subjectName(first)} at ${siteName} has been stopped since ${since}.`;
  const units = stopped.filter(({ tagName }) => tagName === null).length;
  const sensors = stopped.length - units;
  const counts = [
    ...(units > 0 ? [plural(units, 'unit')] : []),
    ...(sensors > 0 ? [plural(sensors, 'soft sensor')] : []),
  ];
  return `${counts.join(' and ')} are stopped at ${siteName}.`;
}
