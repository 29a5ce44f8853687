import type { z } from 'zod';
import type { decimalSign } from '../contracts/history.ts';
import { clearMajority } from './majority.ts';

export type DecimalSign = z.infer<typeof decimalSign>;

/** What a value cell holds. */
export type ValueRead =
  | { kind: 'value'; value: number }
  | { kind: 'censored'; qualifier: '<' | '>'; value: number }
  | { kind: 'missing' }
  | { kind: 'text' };

/** Words that laboratories write where there is no result (yet). */
const missingWords = new Set([
  '',
  '-',
  '–',
  '—',
  '?',
  'n/a',
  '#n/a',
  'na',
  'n.a.',
  'nan',
  'null',
  'none',
  'pend',
  'pending',
]);
const spaces = "[\\u00a0\\u2009\\u202f'’]";

const plainNumber = (decimal: DecimalSign) => {
  const grouping = decimal === '.' ? `,|${spaces}` : `\\.|${spaces}`;
  const whole = `(?:\\d{1,3}(?:(?:${grouping})\\d{3})+|\\d+)`;
  return new RegExp(`^[+-]?(?:${whole}(?:\\${decimal}\\d*)?|\\${decimal}\\d+)(?:e[+-]?\\d{1,3})?$`, 'i');
};
const numbers = { '.': plainNumber('.'), ',': plainNumber(',') };

/**
 * Makes a reader of value cells under one decimal sign for the whole file. The other sign, no-break spaces and
 * apostrophes part thousands, in groups of three only; the Unicode minus counts as one; `<` and `>` before a number
 * make it a limit (ISO 11843 calls such a result censored).
 * @returns a function from cell to a finite value, a limit, `missing` for blanks and words such as "n/a" and "pend",
 * or `text` for anything else
 */
export function createValueReader(decimal: DecimalSign): (cell: string) => ValueRead {
  const pattern = numbers[decimal];
  const numberOf = (text: string): number | null => {
    const signed = text.replace(/^[−–]/, '-');
    if (!pattern.test(signed)) return null;
    const bare =
      decimal === '.'
        ? signed.replace(/[,\u00a0\u2009\u202f'’]/g, '')
        : signed.replace(/[.\u00a0\u2009\u202f'’]/g, '');
    const value = Number(bare.replace(',', '.'));
    return Number.isFinite(value) ? value : null;
  };
  return (cell) => {
    const text = cell.trim();
    if (missingWords.has(text.toLowerCase())) return { kind: 'missing' };
    const limit = /^([<>≤≥])\s*(.+)$/.exec(text);
    const value = numberOf(limit ? limit[2]! : text);
    if (value === null) return { kind: 'text' };
    if (!limit) return { kind: 'value', value };
    return { kind: 'censored', qualifier: limit[1] === '<' || limit[1] === '≤' ? '<' : '>', value };
  };
}

/**
 * What the cells of a column show of the decimal sign of a file. "1,234" alone shows nothing: it may be a thousand or
 * a little more than one; and nine in ten of the cells that show a sign must agree.
 * @param cells value cells; what is no number is passed over
 * @returns the sign; '.' where no cell holds either sign; null while it is open or the cells contradict each other
 */
export function detectDecimal(cells: Iterable<string>): DecimalSign | null {
  const shown = new Map<DecimalSign, number>();
  const show = (sign: DecimalSign) => shown.set(sign, (shown.get(sign) ?? 0) + 1);
  let open = false;
  for (const cell of cells) {
    const text = cell
      .trim()
      .replace(/^[<>≤≥]\s*/, '')
      .replace(/^[−–+-]/, '')
      .replace(/e[+-]?\d+$/i, '');
    if (!/^[\d.,]*\d[\d.,]*$/.test(text)) continue;
    const signs = text.replace(/\d/g, '');
    const last = signs.at(-1) as DecimalSign | undefined;
    if (last === undefined) continue;
    const other = last === '.' ? ',' : '.';
    if (signs.includes(other)) show(last);
    else if (signs.length > 1) show(other);
    else if (/^(?:[1-9]\d{0,2})[.,]\d{3}$/.test(text)) open = true;
    else show(last);
  }
  if (shown.size === 0) return open ? null : '.';
  return clearMajority(shown);
}

/**
 * Does the cell hold a number under either decimal sign? For finding the column of values.
 */
export function looksNumeric(cell: string): boolean {
  const text = cell
    .trim()
    .replace(/^[<>≤≥]\s*/, '')
    .replace(/^[−–]/, '-');
  return numbers['.'].test(text) || numbers[','].test(text);
}
