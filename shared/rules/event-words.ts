import type { EventKind } from '../contracts/events.ts';

/** What happened, in words. */
export const eventWords: Record<EventKind, string> = {
  stop: 'Stop',
  start: 'Start',
  'grade-change': 'Grade change',
  turnaround: 'Turnaround',
  'instrument-replaced': 'Instrument replaced',
  'method-change': 'Method change',
};

/** As people write them in lists, lower case and without punctuation; the first pattern that fits decides. */
const written: [EventKind, RegExp][] = [
  ['turnaround', /^(planned )?(turnaround|turn around|overhaul|major shutdown)s?$/],
  [
    'grade-change',
    /\b(grade|product|campaign|feed) (change|changed|changeover|switch)\b|^(grade|changeover)$/,
  ],
  [
    'instrument-replaced',
    /\b(instrument|sensor|thermocouple|analy[sz]er|probe|transmitter)s? (replaced|replacement|changed|change|exchange|exchanged)\b|^(replaced|replacement)$/,
  ],
  ['method-change', /\b(method|laboratory|lab)( method)? (change|changed)\b|^(new )?method$/],
  [
    'start',
    /^(re ?)?start(s|ed|up| up)?$|^(unit )?(start|restart)(ed| up|up)?$|^(back )?(up|on|running|in operation)$/,
  ],
  [
    'stop',
    /^(unit |emergency )?(stop|stops|stopped|shut ?down|shutdown|trip|tripped|down|off|outage|standstill)$/,
  ],
];

/**
 * The kind that a cell of a file names: "Stopped", "shut-down", "START UP", "grade change", "thermocouple replaced".
 * @returns null where no kind is named
 */
export function readEventKind(text: string): EventKind | null {
  const plain = text
    .toLowerCase()
    .replace(/[^\p{L}\d]+/gu, ' ')
    .trim();
  return written.find(([, pattern]) => pattern.test(plain))?.[0] ?? null;
}

/** Does the unit (or the soft sensor) stand from this event on? */
export const stops = (kind: EventKind): boolean => kind === 'stop' || kind === 'turnaround';
