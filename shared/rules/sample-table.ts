import Papa from 'papaparse';
import type { Delimiter, FileProblem } from './sample-text.ts';

/** A row of a file and the line, counted from 1, on which it begins. */
export interface TableRow {
  line: number;
  cells: string[];
}
export type Table = { ok: true; rows: TableRow[] } | { ok: false; problem: FileProblem };

const delimiters: Delimiter[] = [';', '\t', '|', ','];
const headLines = 100;
const mostColumns = 1000;

/**
 * Reads delimited text (RFC 4180) into rows. Blank lines are passed over but counted; a quotation mark that is never
 * closed or stands loose makes the rest of a file meaningless, so it refuses the whole.
 * @param text the decoded file; line ends of every kind
 * @returns rows with true line numbers, also after line breaks inside quotes; or `open-quote`, `stray-quote` { line },
 * `too-many-columns`
 */
export function readTable(text: string, delimiter: Delimiter): Table {
  const parsed = Papa.parse<string[]>(text.replace(/\r\n?/g, '\n'), { delimiter, newline: '\n' });
  const rows: TableRow[] = [];
  const starts: number[] = [];
  let line = 1;
  for (const cells of parsed.data) {
    starts.push(line);
    if (cells.some((cell) => cell.trim() !== '')) rows.push({ line, cells });
    line += 1;
    for (const cell of cells) if (cell.includes('\n')) line += cell.split('\n').length - 1;
  }
  const quote = parsed.errors.find((error) => error.type === 'Quotes');
  if (quote) {
    const code = quote.code === 'MissingQuotes' ? 'open-quote' : 'stray-quote';
    return { ok: false, problem: { code, line: starts[quote.row ?? 0] ?? line } };
  }
  if (rows.some(({ cells }) => cells.length > mostColumns))
    return { ok: false, problem: { code: 'too-many-columns' } };
  return { ok: true, rows };
}

/** The first lines of a text: enough to see how it is built. */
export function headOf(text: string, lines = headLines): string {
  let end = -1;
  for (let line = 0; line < lines; line++) {
    const next = text.indexOf('\n', end + 1);
    if (next === -1) return text;
    end = next;
  }
  return text.slice(0, end + 1);
}

/**
 * Finds what parts the columns: the sign that cuts most of the first lines into the same number of columns, two at
 * least; of equals the one that gives more columns.
 * @returns the delimiter, or null where no sign makes a table
 */
export function detectDelimiter(text: string): Delimiter | null {
  const head = headOf(text);
  let best: { delimiter: Delimiter; share: number; columns: number } | null = null;
  for (const delimiter of delimiters) {
    const rows = Papa.parse<string[]>(head.replace(/\r\n?/g, '\n'), { delimiter, newline: '\n' }).data.filter(
      (cells) => cells.some((cell) => cell.trim() !== ''),
    );
    const widths = new Map<number, number>();
    for (const { length } of rows) widths.set(length, (widths.get(length) ?? 0) + 1);
    for (const [columns, count] of widths) {
      const share = count / rows.length;
      const better =
        !best || share > best.share + 1e-9 || (share > best.share - 1e-9 && columns > best.columns);
      if (columns > 1 && better) best = { delimiter, share, columns };
    }
  }
  return best?.delimiter ?? null;
}
