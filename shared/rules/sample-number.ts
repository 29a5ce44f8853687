import type { z } from 'zod';
import type { decimalSign } from '../contracts/history.ts';
import { clearMajority } from './majority.ts';
import { defaultMissingWords } from './sample-mapping.ts';

export type DecimalSign = z.infer<typeof decimalSign>;

/** What a value cell holds. */
export type ValueRead =
  | { kind: 'value'; value: number }
  | { kind: 'censored'; qualifier: '<' | '>'; value: number }
  | { kind: 'missing' }
  | { kind: 'text' };

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
 * @param missingWords what stands where there is no result, in any case: "n/a", "pend"
 * @returns a function from cell to a finite value, a limit, `missing` for blanks and the words of the list, or `text` for
 * anything else
 */
export function createValueReader(
  decimal: DecimalSign,
  missingWords: readonly string[] = defaultMissingWords,
): (cell: string) => ValueRead {
  const pattern = numbers[decimal];
  const missing = new Set(missingWords.map((word) => word.trim().toLowerCase()).concat(''));
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
    if (missing.has(text.toLowerCase())) return { kind: 'missing' };
    const limit = /^([<>≤≥])\s*(.+)$/.exec(text);
    const value = numberOf(limit ? limit[2]! : text);
    if (value === null) return { kind: 'text' };
    if (!limit) return { kind: 'value', value };
    return { kind: 'censored', qualifier: limit[1] === '<' || limit[1] === '≤' ? '<' : '>', value };
  };
}

/** How many cells show each decimal sign, or might hold either. */
export interface DecimalCounts {
  '.': number;
  ',': number;
  /** "1,234": a thousand, or a little more than one. */
  open: number;
  /** Cells with a number, with or without a sign in it. */
  numbers: number;
}

/** What one number shows of the decimal sign: the sign itself, `open`, or nothing where it has none; null for no number. */
function shownBy(cell: string): DecimalSign | 'open' | 'nothing' | null {
  const bare = cell
    .trim()
    .replace(/^[<>≤≥]\s*/, '')
    .replace(/^[−–+-]/, '')
    .replace(/(?<=\d)[\u00a0\u2009\u202f'’](?=\d{3})/g, '');
  const text = bare.replace(/e[+-]?\d+$/i, '');
  if (!/^[\d.,]*\d[\d.,]*$/.test(text)) return null;
  const signs = text.replace(/\d/g, '');
  const last = signs.at(-1) as DecimalSign | undefined;
  if (last === undefined) return 'nothing';
  const other = last === '.' ? ',' : '.';
  if (signs.includes(other)) return last;
  if (signs.length > 1) return other;
  return bare === text && /^(?:[1-9]\d{0,2})[.,]\d{3}$/.test(text) ? 'open' : last;
}

/** Counts what the cells of a column show of the decimal sign; what is no number is passed over. */
export function countDecimals(cells: Iterable<string>): DecimalCounts {
  const counts: DecimalCounts = { '.': 0, ',': 0, open: 0, numbers: 0 };
  for (const cell of cells) {
    const shown = shownBy(cell);
    if (shown === null) continue;
    counts.numbers += 1;
    if (shown !== 'nothing') counts[shown] += 1;
  }
  return counts;
}

/** The sign that counts show; see {@link detectDecimal}. */
export function decimalOf(counts: DecimalCounts): DecimalSign | null {
  const shown = new Map<DecimalSign, number>([
    ['.', counts['.']],
    [',', counts[',']],
  ]);
  if (counts['.'] + counts[','] === 0) return counts.open > 0 ? null : '.';
  return clearMajority(shown);
}

/**
 * What the cells of a column show of the decimal sign of a file. "1,234" alone shows nothing: it may be a thousand or
 * a little more than one; and nine in ten of the cells that show a sign must agree.
 * @param cells value cells; what is no number is passed over
 * @returns the sign; '.' where no cell holds either sign; null while it is open or the cells contradict each other
 */
export const detectDecimal = (cells: Iterable<string>): DecimalSign | null => decimalOf(countDecimals(cells));

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
