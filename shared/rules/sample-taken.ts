import type { SampleReason, SampleReasonCode } from '../contracts/sample-import.ts';
import { wallClock } from './format.ts';
import { endOfDay, type TimeRead } from './local-time.ts';

/** When a sample was taken: an instant, or a day where no time of day is known. */
export type Taken = { at: number; on: null } | { at: null; on: string };
export type Note = (code: SampleReasonCode, figures?: SampleReason['figures']) => void;

/** What bears on every time of a file. Instants are UTC milliseconds. */
export interface Clock {
  read: (text: string, clock?: string) => TimeRead;
  /** In which texts without an offset are read. */
  zone: string;
  /** The day at the site now. */
  today: string;
  now: number;
}

const aheadMs = 10 * 60_000;
const hourMs = 3_600_000;
const longestMs = 14 * 24 * hourMs;
const compositeWord =
  /composite|\b(?:misch|sammel)probe|\b(?:tages|wochen)?mischprobe|echantillon moyen|échantillon moyen|muestra compuesta|compuesta/i;
const hoursWord = /(\d{1,3})\s?-?\s?(?:h|hr|hrs|hours?|std|stunden|heures?|horas?)\b/i;
const onlyHours = /^(\d{1,3})\s?-?\s?(?:h|hr|hrs|hours?|std|stunden|heures?|horas?)$/i;
const dailyWord = /daily|day|tages|journalier|diari[oa]/i;

/** The day that a zone's calendar shows at an instant: "YYYY-MM-DD". */
export const dayOn = (at: number, zone: string): string => {
  const { year, month, day } = wallClock(at, zone);
  return `${year}-${String(month).padStart(2, '0')}-${String(day).padStart(2, '0')}`;
};

/** Reads the time of taking; a date alone is kept as a date, and a flag says so. */
export function takenOf(clock: Clock, text: string, ofDay: string, note: Note): Taken | null {
  if (text === '') {
    note('no-time');
    return null;
  }
  const written = ofDay === '' ? text : `${text} ${ofDay}`;
  const read = clock.read(text, ofDay);
  if (read.ok) return inRange(clock, read.at, 'taken', written, note) ? { at: read.at, on: null } : null;
  if (read.code !== 'no-time-of-day') {
    note(read.code, { ...read.figures, written, column: 'taken' });
    return null;
  }
  const on = String(read.figures.on);
  if (on > clock.today) note('ahead', { written, column: 'taken' });
  else if (on < '1970-01-01') note('before-1970', { written, column: 'taken' });
  else note('date-only', { on });
  return { at: null, on };
}

function inRange({ now }: Clock, at: number, column: string, written: string, note: Note): boolean {
  if (at > now + aheadMs) note('ahead', { written, column });
  else if (at < 0) note('before-1970', { written, column });
  else return true;
  return false;
}

/** A day of reporting without a time stands for its end; no reporting time at all for the moment of taking. */
export function reportedOf(clock: Clock, text: string, taken: Taken | null, note: Note): number | null {
  const { now, zone } = clock;
  if (text === '') {
    if (!taken) return null;
    return taken.at ?? Math.min(now, endOfDay(taken.on, zone));
  }
  const read = clock.read(text);
  let at: number;
  if (read.ok) at = read.at;
  else if (read.code === 'no-time-of-day') at = Math.min(endOfDay(String(read.figures.on), zone), now);
  else {
    note(read.code, { ...read.figures, written: text, column: 'reported' });
    return null;
  }
  if (!inRange(clock, at, 'reported', text, note)) return null;
  if (taken && (taken.at === null ? dayOn(at, zone) < taken.on : at < taken.at)) {
    note('reported-before-taken', { reported: text });
  }
  return at;
}

/** How long a composite was gathered by the words of a row: hours, 0 where it does not say, null for no composite. */
export function hoursInWords(cells: readonly string[]): number | null {
  for (const cell of cells) {
    const alone = onlyHours.exec(cell);
    if (alone) return Number(alone[1]);
    if (!compositeWord.test(cell)) continue;
    const hours = hoursWord.exec(cell)?.[1];
    if (hours) return Number(hours);
    return dailyWord.test(cell) ? 24 : 0;
  }
  return null;
}

/**
 * Reads how long a composite was gathered, from the time it began or from words such as "24-h composite". One of unknown
 * length is kept as of its day.
 * @param from the text of the beginning; empty without one
 * @param words cells that no role is mapped to
 */
export function compositeOf(
  clock: Clock,
  from: string,
  words: readonly string[],
  taken: Taken | null,
  note: Note,
): { taken: Taken | null; compositeMs: number | null } {
  const none = { taken, compositeMs: null };
  if (taken === null || taken.at === null) return none;
  let length: number;
  if (from !== '') {
    const read = clock.read(from);
    if (!read.ok) {
      if (read.code !== 'no-time-of-day') note(read.code, { ...read.figures, written: from, column: 'from' });
      return none;
    }
    length = taken.at - read.at;
    if (length === 0) return none;
    if (length < 0) note('ends-before-start', { from });
  } else {
    const hours = hoursInWords(words);
    if (hours === null) return none;
    length = hours * hourMs;
  }
  if (length > longestMs) note('long-composite', { days: Math.round(length / 24 / hourMs), most: 14 });
  note('composite', { hours: Math.round((length / hourMs) * 100) / 100 });
  if (length === 0) return { taken: { at: null, on: dayOn(taken.at, clock.zone) }, compositeMs: null };
  return { taken, compositeMs: length };
}
