import type { SampleMapping } from '../contracts/sample-import.ts';
import { headOf, readTable, type Table, type TableRow } from './sample-table.ts';
import type { Encoding } from './sample-text.ts';

/** A row of a sheet; numbers are kept apart from text, since a text may be written under either decimal sign. */
export interface SheetRow {
  line: number;
  cells: (string | number)[];
}
export interface Sheet {
  name: string;
  rows: SheetRow[];
}

/** A file as it was taken in: text, or the sheets of a workbook that hold anything. */
export type FileRead =
  { kind: 'text'; text: string; encoding: Encoding } | { kind: 'workbook'; sheets: Sheet[] };

type Cut = Pick<SampleMapping, 'sheet' | 'delimiter'> & { decimal?: SampleMapping['decimal'] | null };

const tables = new WeakMap<FileRead, Map<string, Table>>();
const headLines = 40;

const cellText = (cell: string | number, decimal: string): string =>
  typeof cell === 'number' ? String(cell).replace('.', decimal) : cell;

function cut(file: FileRead, { sheet, delimiter, decimal }: Cut): Table {
  if (file.kind === 'text') return readTable(file.text, delimiter);
  const found = file.sheets.find(({ name }) => name === sheet);
  if (!found) return { ok: false, problem: { code: 'no-sheet', sheet: sheet ?? '' } };
  const rows = found.rows.map(({ line, cells }) => ({
    line,
    cells: cells.map((cell) => cellText(cell, decimal ?? '.')),
  }));
  return { ok: true, rows };
}

/**
 * The rows of a file under one way of cutting it, remembered for as long as the file is held.
 * @param how delimiter of a text; sheet of a workbook, and the decimal sign with which its numbers are written
 * @returns what `readTable` gives, or `no-sheet`
 */
export function tableOf(file: FileRead, how: Cut): Table {
  const key = file.kind === 'text' ? how.delimiter : `${how.sheet} ${how.decimal ?? '.'}`;
  const known = tables.get(file) ?? new Map<string, Table>();
  tables.set(file, known);
  const table = known.get(key) ?? cut(file, how);
  known.set(key, table);
  return table;
}

const quoted = (text: string): string => (/["\t\n\r]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text);

/** The first lines of a sheet as tab-delimited text, lines without cells included. */
export function headOfSheet({ rows }: Sheet, lines = headLines): string {
  const head: string[] = [];
  for (const { line, cells } of rows) {
    if (line > lines) break;
    while (head.length < line - 1) head.push('');
    head.push(cells.map((cell) => quoted(cellText(cell, '.'))).join('\t'));
  }
  return `${head.join('\n')}\n`;
}

const signs = [';', '\t', '|', ','] as const;

/** The beginning of a file under each way of cutting it into columns. */
export function cutsOf(
  file: FileRead,
): { delimiter: SampleMapping['delimiter']; sheet: string | null; rows: readonly TableRow[] }[] {
  if (file.kind === 'workbook') {
    return file.sheets.map(({ name }) => {
      const table = tableOf(file, { sheet: name, delimiter: '\t' });
      return { delimiter: '\t', sheet: name, rows: table.ok ? table.rows : [] };
    });
  }
  const head = headOf(file.text);
  return signs.map((delimiter) => {
    const first = readTable(head, delimiter);
    // A text in quotation marks may run on beyond the head.
    const table = first.ok ? first : tableOf(file, { sheet: null, delimiter });
    return { delimiter, sheet: null, rows: table.ok ? table.rows : [] };
  });
}
