import type { DecimalSign, HistoryRefusalCode } from '../contracts/history.ts';

/** Words that historians and spreadsheets write where there is no reading; an empty cell means the same. */
export const absentWords = [
  '-',
  '--',
  '#N/A',
  'N/A',
  'NA',
  'NaN',
  'null',
  'None',
  'Bad',
  'Bad Input',
  'No Data',
  'I/O Timeout',
] as const;

const absent = new Set<string>(absentWords.map((word) => word.toLowerCase()));

/**
 * Does this cell say that there is no reading? Empty, blank, or one of {@link absentWords} in any case.
 * @param text the cell as it stands in the file
 */
export function isAbsent(text: string): boolean {
  const word = text.trim();
  return word === '' || absent.has(word.toLowerCase());
}

/** Digits in groups of three, parted by what people part them with, besides the other decimal sign. */
const groupedByPoint = /^[+-]?\d{1,3}(?:([,'’ \u00a0\u202f])\d{3})(?:\1\d{3})*(?:\.\d+)?$/;
const groupedByComma = /^[+-]?\d{1,3}(?:([.'’ \u00a0\u202f])\d{3})(?:\1\d{3})*(?:,\d+)?$/;
const plain = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:e[+-]?\d+)?$/i;
const infinite = /^[+-]?(?:inf|infinity|∞)$/i;
const bareDigits = /^-?\d+(?:\.\d+)?$/;

/**
 * The number in a cell, read with the file's decimal sign; thousands may be parted in threes.
 * @param text the cell as it stands in the file
 * @param decimal the decimal sign of the whole file
 * @returns the number; an infinity for a word such as "inf" or a number beyond doubles; NaN where there is no number
 */
export function readNumber(text: string, decimal: DecimalSign): number {
  // Most cells of most files are this; `Number` alone would also take '' and '0x10'.
  if (decimal === '.' && bareDigits.test(text)) return Number(text);
  const trimmed = text.trim().replace('−', '-');
  if (infinite.test(trimmed)) return trimmed.startsWith('-') ? -Infinity : Infinity;
  const grouped = decimal === '.' ? groupedByPoint : groupedByComma;
  const parted = grouped.exec(trimmed);
  const bare = parted ? trimmed.replaceAll(parted[1]!, '') : trimmed;
  // A full stop in a file of decimal commas may part thousands and nothing else.
  if (decimal === ',' && bare.includes('.')) return NaN;
  const pointed = decimal === ',' ? bare.replace(',', '.') : bare;
  return plain.test(pointed) ? Number(pointed) : NaN;
}

/**
 * Why a cell that is neither absent nor a finite number was refused.
 * @param text the cell as it stands in the file
 * @param decimal the decimal sign of the whole file
 */
export function whyNoNumber(text: string, decimal: DecimalSign): HistoryRefusalCode {
  const value = readNumber(text, decimal);
  if (!Number.isNaN(value)) return 'not-finite';
  return Number.isFinite(readNumber(text, decimal === '.' ? ',' : '.')) ? 'decimal-sign' : 'not-a-number';
}

/** Quality of a reading: 0 Good, 1 Uncertain, 2 Bad (OPC UA Part 8). */
export type Quality = 0 | 1 | 2;

const qualityWords: Record<string, Quality> = { good: 0, uncertain: 1, questionable: 1, bad: 2 };

/**
 * The quality in a cell: the words Good, Uncertain, Bad (also with a detail after a blank or colon), or the OPC number
 * 0 to 255 whose two upper bits say 11 Good (192), 01 Uncertain (64), 00 Bad (0) (OPC Data Access 3.00, section 6.8).
 * An empty cell makes no complaint: Good.
 * @returns null where the cell says none of these
 */
export function readQuality(text: string): Quality | null {
  const word = text.trim().toLowerCase();
  if (word === '') return 0;
  if (/^\d{1,3}$/.test(word)) {
    const number = Number(word);
    if (number > 255) return null;
    return ([2, 1, null, 0] as const)[number >> 6] ?? null;
  }
  return qualityWords[word.split(/[\s:,(]/)[0]!] ?? null;
}
