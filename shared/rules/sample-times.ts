import type { SampleDateOrder } from '../contracts/sample-import.ts';
import { createTimeReader, type TimeRead } from './local-time.ts';

const dayMs = 86_400_000;
const secondMs = 1000;
/** 30 December 1899, from which spreadsheets count days (after 28 February 1900). */
const serialStart = Date.UTC(1899, 11, 30);
const serial = /^\d{1,6}(?:[.,]\d+)?$/;

/** Is the text a day as spreadsheets count them, between 1954 and 2064? */
export const isSerialDay = (text: string): boolean => /^[2-5]\d{4}(?:[.,]\d+)?$/.test(text.trim());

/** Is the text a time of day alone? */
export const isClock = (text: string): boolean =>
  /^\d{1,2}:\d{2}(?::\d{2}(?:[.,]\d{1,9})?)?(?:\s?[ap]\.?m\.?)?$/i.test(text.trim());

/**
 * A spreadsheet's count of days as a local time in ISO form, to the second; a whole count is a day alone, unless
 * `wholeIsMidnight`.
 * @returns null for what is no such count
 */
export function serialToLocal(text: string, wholeIsMidnight: boolean): string | null {
  if (!serial.test(text)) return null;
  const days = Number(text.replace(',', '.'));
  const iso = new Date(serialStart + Math.round((days * dayMs) / secondMs) * secondMs).toISOString();
  return Number.isInteger(days) && !wholeIsMidnight ? iso.slice(0, 10) : iso.slice(0, 19);
}

export interface TimeRules {
  order: SampleDateOrder;
  zone: string;
  /** Under `serial-days`: a whole count means midnight, as others of its column have a time of day. */
  wholeIsMidnight?: boolean;
}

/**
 * Makes a reader of times of samples: what {@link createTimeReader} reads, and days as spreadsheets count them.
 * @returns a function from the text, and that of a column with the time of day apart, to an instant or a problem
 */
export function createSampleTimes(rules: TimeRules): (text: string, clock?: string) => TimeRead {
  const { order, zone, wholeIsMidnight = false } = rules;
  if (order !== 'serial-days') {
    const read = createTimeReader({ order, zone });
    return (text, clock = '') => read(clock === '' ? text : withClock(text, clock));
  }
  const read = createTimeReader({ order: 'iso', zone });
  return (text, clock = '') => {
    const whole = text.trim();
    if (clock !== '' && serial.test(clock) && serial.test(whole)) {
      const sum = Number(whole.replace(',', '.')) + Number(clock.replace(',', '.'));
      return read(serialToLocal(String(sum), true)!);
    }
    const local = serialToLocal(whole, wholeIsMidnight && clock === '') ?? whole;
    return read(clock === '' ? local : withClock(local, clock));
  };
}

/** A day with its time of day from another column; a midnight that a spreadsheet put beside the day gives way to it. */
const withClock = (day: string, clock: string): string =>
  `${day.trim().replace(/[ T]0?0:00(?::00)?$/, '')} ${clock}`;
