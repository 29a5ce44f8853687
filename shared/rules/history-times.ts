import type { HistoryDateOrder, HistoryRefusalCode } from '../contracts/history.ts';
import { createTimeReader, type TimeProblem } from './local-time.ts';

/** How the times of a file are read. `latestMs`: instants after it are yet to come and refused. */
export interface TimeForm {
  dateOrder: HistoryDateOrder;
  zone: string;
  latestMs: number;
}

const codes: Record<TimeProblem['code'], HistoryRefusalCode> = {
  'unreadable-time': 'time-unreadable',
  'no-time-of-day': 'time-without-clock',
  'impossible-date': 'no-such-time',
  'impossible-time': 'no-such-time',
  'missing-hour': 'hour-skipped',
  'double-hour': 'hour-twice',
};
const seconds = /^-?\d{1,12}(\.\d+)?$/;

/**
 * Makes a reader of the times of one file of tag history, as {@link createTimeReader} reads them; with the order
 * "epoch-s" of seconds since 1970, fractions allowed.
 * @returns a function from a cell to its instant, UTC in milliseconds since 1970, or to the code that says why it has none
 * @throws RangeError from the returned function when the zone is not known
 */
export function historyTimeReader(form: TimeForm): (text: string) => number | HistoryRefusalCode {
  const read = form.dateOrder === 'epoch-s' ? readSeconds : instantReader(form.dateOrder, form.zone);
  // In a file with a row for each reading the same time stands in many rows, one after the other.
  let lastText = '';
  let last: number | HistoryRefusalCode = 'time-missing';
  return (text) => {
    if (text === lastText) return last;
    lastText = text;
    last = text.trim() === '' ? 'time-missing' : inSpan(read(text), form.latestMs);
    return last;
  };
}

function inSpan(at: number | HistoryRefusalCode, latestMs: number): number | HistoryRefusalCode {
  if (typeof at !== 'number') return at;
  if (at < 0) return 'before-1970';
  return at > latestMs ? 'in-the-future' : at;
}

function readSeconds(text: string): number | HistoryRefusalCode {
  const trimmed = text.trim();
  return seconds.test(trimmed) ? Math.trunc(Number(trimmed) * 1000) : 'time-unreadable';
}

function instantReader(order: Exclude<HistoryDateOrder, 'epoch-s'>, zone: string) {
  const read = createTimeReader({ order, zone });
  return (text: string): number | HistoryRefusalCode => {
    const found = read(text);
    return found.ok ? found.at : codes[found.code];
  };
}
