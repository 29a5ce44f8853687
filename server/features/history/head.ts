import type { Delimiter, HistoryPreview, TextEncoding } from '../../../shared/contracts/history.ts';
import { findTimes, shareOfNumbers } from '../../../shared/rules/history-evidence.ts';
import { type KnownTag, proposeHistory } from '../../../shared/rules/history-proposal.ts';
import { detectDelimiter } from '../../../shared/rules/sample-table.ts';
import { decodeHead, noCsv, recogniseText } from './decode.ts';
import { RecordReader } from './records.ts';

/** What a person has said of the file already; the rest is proposed. */
export interface HeadWishes {
  delimiter?: Delimiter | undefined;
  headerLine?: number | undefined;
}

export interface HeadContext {
  tags: readonly KnownTag[];
  zone: string;
  latestMs: number;
}

interface Row {
  line: number;
  cells: string[];
}

const shownRows = 20;
const judgedRows = 400;

/**
 * How the head of a file reads, and how the whole would be read.
 * @throws AppError 'unreadable' for a file that is no CSV of tag history, with a sentence that says what it is
 */
export async function readHistoryHead(
  bytes: Buffer,
  whole: boolean,
  wishes: HeadWishes,
  context: HeadContext,
): Promise<Omit<HistoryPreview, 'sameAs'>> {
  const encoding = recogniseText(bytes);
  const text = headText(bytes, encoding, whole);
  const delimiter = wishes.delimiter ?? detectDelimiter(text);
  if (!delimiter) throw noColumns();
  const rows = await rowsOf(text, delimiter, whole);
  const headerRow = wishes.headerLine ? rowAt(rows, wishes.headerLine) : findHeader(rows, context);
  const data = rows.filter(({ line }) => line > headerRow.line);
  if (data.length === 0) throw noCsv('There are no lines below the header, so there is nothing to add.');
  const head = {
    delimiter,
    headerLine: headerRow.line,
    header: headerRow.cells,
    rows: spread(data).map(({ cells }) => cells),
    every: data.map(({ cells }) => cells),
  };
  return {
    encoding,
    header: headerRow.cells,
    rows: data.slice(0, shownRows),
    ...proposeHistory(head, context.tags, context.zone, context.latestMs),
  };
}

/** The last line of the first megabyte is cut off somewhere, unless the file ends there. */
function headText(bytes: Buffer, encoding: TextEncoding, whole: boolean): string {
  const text = decodeHead(bytes, encoding);
  return whole ? text : text.slice(0, text.lastIndexOf('\n') + 1);
}

/** `whole` false: the text is cut off somewhere, perhaps inside quotation marks; that is no fault of the file. */
async function rowsOf(text: string, delimiter: Delimiter, whole: boolean): Promise<Row[]> {
  const rows: Row[] = [];
  const reader = new RecordReader(delimiter, (cells, line) => rows.push({ line, cells }));
  await reader.push(text);
  await reader.end().catch((error: unknown) => {
    if (whole) throw error;
  });
  return rows;
}

function usualWidth(rows: readonly Row[]): number {
  const counts = new Map<number, number>();
  for (const { cells } of rows) counts.set(cells.length, (counts.get(cells.length) ?? 0) + 1);
  return [...counts].sort((a, b) => b[1] - a[1] || b[0] - a[0])[0]?.[0] ?? 0;
}

function rowAt(rows: readonly Row[], line: number): Row {
  const row = rows.find((candidate) => candidate.line === line);
  if (row) return row;
  throw noCsv(
    `Line ${line} is empty or lies beyond the end of the file. Choose the line that names the columns.`,
  );
}

/** The line of names: the first that fills at least half of the usual columns, above the first line with a time. */
function findHeader(rows: readonly Row[], context: HeadContext): Row {
  const width = usualWidth(rows.slice(0, judgedRows));
  const first = rows.slice(0, 100);
  const timesOf = (some: readonly Row[]) =>
    findTimes(
      some.map(({ cells }) => cells),
      context.zone,
      context.latestMs,
    );
  const times = timesOf(first.filter(({ cells }) => cells.length === width));
  const firstTime = times ? first.findIndex((row) => timesOf([row])?.column === times.column) : first.length;
  const fills = ({ cells }: Row) =>
    cells.filter((cell) => cell.trim() !== '').length >= Math.max(2, width / 2);
  const found = first
    .slice(0, firstTime)
    .find((row) => fills(row) && (times || shareOfNumbers(row.cells, '.') < 0.5));
  if (!found) throw noHeader();
  return found;
}

const noColumns = () =>
  noCsv(
    'No columns were found: the lines hold no commas, semicolons, tabs or bars between a time and its values. Export the readings as CSV.',
  );

const noHeader = () =>
  noCsv(
    'There is no line that names the columns. Put one above the first reading, with the names of the tags.',
  );

/** Rows from the whole head, evenly, so that the days of a month come in. */
function spread(rows: readonly Row[]): Row[] {
  const step = Math.max(1, Math.floor(rows.length / judgedRows));
  return rows.filter((_row, index) => index % step === 0);
}
