import Papa from 'papaparse';
import { saveBlob } from './save-blob.ts';

export type CsvCell = string | number | boolean | null | undefined;

const BYTE_ORDER_MARK = '\ufeff';
// A spreadsheet would run such a cell as a formula; a number that happens to begin with a sign is left a number.
const RUNS_AS_FORMULA = /^(?![+-]?(?:\d+\.?\d*|\.\d+)(?:e[+-]?\d+)?$)[=+\-@\t\r]/i;

/** One CSV text: commas, CRLF, quotes where needed, cells that a spreadsheet would run made harmless with an apostrophe. */
export function csvText(header: readonly string[], rows: readonly (readonly CsvCell[])[]): string {
  return Papa.unparse([[...header], ...rows.map((row) => [...row])], {
    escapeFormulae: RUNS_AS_FORMULA,
    newline: '\r\n',
  });
}

/** Hands tables to the person as CSV files; the byte order mark lets spreadsheets read "°C" right. */
export function useCsvDownload() {
  return (fileName: string, header: readonly string[], rows: readonly (readonly CsvCell[])[]) => {
    const name = fileName.endsWith('.csv') ? fileName : `${fileName}.csv`;
    saveBlob(new Blob([BYTE_ORDER_MARK, csvText(header, rows)], { type: 'text/csv;charset=utf-8' }), name);
  };
}
