import Papa from 'papaparse';
import type { SampleMapping } from '../contracts/sample-import.ts';
import type { DecidedRow } from './sample-outcomes.ts';
import { sayReason } from './sample-sentences.ts';

// A spreadsheet would run such a cell as a formula; a number that happens to begin with a sign is left a number.
const runsAsFormula = /^(?![+-]?(?:\d+[.,]?\d*|[.,]\d+)(?:e[+-]?\d+)?$)[=+\-@\t\r]/i;

/** What stands before the columns of the file in a download of refused rows. */
export const refusedColumns = ['Row', 'Why refused'] as const;

/**
 * The refused rows as they were written, under the header of their file, after the line and the reason: to be mended
 * and taken up again. Cells that a spreadsheet would run as a formula get an apostrophe before them.
 * @param header names of the columns as the file writes them
 * @returns delimited text as the file has it, with a byte order mark, so that spreadsheets read "°C" right
 */
export function refusedCsv(
  header: readonly string[],
  rows: readonly DecidedRow[],
  mapping: SampleMapping,
): string {
  const refused = rows
    .filter(({ outcome }) => outcome === 'refused')
    .map(({ row, reasons }) => [
      String(row.line),
      reasons.map((reason) => sayReason(reason, mapping.zone)).join(' '),
      ...row.cells,
    ]);
  const table = [[...refusedColumns, ...header], ...refused];
  const { delimiter } = mapping;
  return `\ufeff${Papa.unparse(table, { delimiter, newline: '\r\n', escapeFormulae: runsAsFormula })}\r\n`;
}
