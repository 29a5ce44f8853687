import type { z } from 'zod';
import type { dateOrder } from '../contracts/history.ts';
import { clearMajority } from './majority.ts';

export type DateOrder = z.infer<typeof dateOrder>;

const clockPattern = String.raw`(?:[\sT,]+(\d{1,2}):(\d{2})(?::(\d{2})(?:[.,](\d{1,9}))?)?(?:\s?([ap])\.?m\.?)?\s?(z|utc|[+-]\d{2}(?::?\d{2})?)?)?`;
/** A date with the year first, and perhaps a time of day; groups 5 to 10 are those of the clock. */
export const yearFirst = new RegExp(String.raw`^(\d{4})([-/.])(\d{1,2})\2(\d{1,2})${clockPattern}$`, 'i');
/** One with the year last; groups as above. */
export const yearLast = new RegExp(
  String.raw`^(\d{1,2})([-/.])(\d{1,2})\2(\d{4}|\d{2})${clockPattern}$`,
  'i',
);
/** One with the month in words; groups as above. */
export const monthNamed = new RegExp(
  String.raw`^(\d{1,2})([-/. ])([a-z]{3})[a-z]*\.?\2(\d{4}|\d{2})${clockPattern}$`,
  'i',
);

/** Is the text written like a date, with or without a time of day? For finding the column of times. */
export function looksLikeTime(text: string): boolean {
  const trimmed = text.trim();
  return yearFirst.test(trimmed) || yearLast.test(trimmed) || monthNamed.test(trimmed);
}

/** How a date is written: `last` stands for a year in last place, with the two numbers before it. */
export interface DateShape {
  kind: 'year-first' | 'month-named' | 'milliseconds' | 'last';
  first: number;
  second: number;
  /** Is there a time of day, and does it say its offset? */
  clock: boolean;
  offset: boolean;
}

/** The shape of a date in a cell; null for what is no date. */
export function dateShape(text: string): DateShape | null {
  const trimmed = text.trim();
  const none = { first: 0, second: 0 };
  if (/^\d{12,13}$/.test(trimmed)) return { kind: 'milliseconds', ...none, clock: true, offset: true };
  const last = yearLast.exec(trimmed);
  const match = last ?? yearFirst.exec(trimmed) ?? monthNamed.exec(trimmed);
  if (!match) return null;
  const clock = match[5] !== undefined;
  const offset = match[10] !== undefined;
  if (last) return { kind: 'last', first: Number(last[1]), second: Number(last[3]), clock, offset };
  return { kind: /^\d{4}/.test(trimmed) ? 'year-first' : 'month-named', ...none, clock, offset };
}

/**
 * What the times of one column say of their order. Never decided by one cell: a day above 12 must be seen, and nine in
 * ten of such days must agree.
 * @param texts cells of the column; blanks are passed over
 * @returns the order, or null while it is open (every day is 12 or less) or the cells contradict each other
 */
export function detectDateOrder(texts: Iterable<string>): DateOrder | null {
  return dateOrderOf(Array.from(texts, dateShape));
}

/** {@link detectDateOrder} of cells whose shape is known; null for what is no date. */
export function dateOrderOf(shapes: Iterable<DateShape | null>): DateOrder | null {
  const seen = new Map<DateOrder, number>();
  const see = (order: DateOrder) => seen.set(order, (seen.get(order) ?? 0) + 1);
  // Read alike under every order, so they decide only where nothing else is seen.
  let plain: DateOrder | null = null;
  let open = false;
  for (const shape of shapes) {
    if (shape?.kind === 'year-first') plain = 'iso';
    else if (shape?.kind === 'month-named') plain ??= 'day-month-year';
    else if (shape?.kind === 'milliseconds') see('epoch-ms');
    else if (shape && shape.first > 12) see('day-month-year');
    else if (shape && shape.second > 12) see('month-day-year');
    else if (shape) open = true;
  }
  if (seen.size === 0) return open ? null : plain;
  return clearMajority(seen);
}
