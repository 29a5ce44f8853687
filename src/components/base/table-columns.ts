import type { CsvCell } from '../../composables/use-csv-download.ts';
import { NO_VALUE } from '../../../shared/rules/format.ts';

/** One column of a DataTable. */
export interface DataColumn<Row = unknown> {
  /** Unique; also the name of the slot `cell-<name>` and of the sort. */
  name: string;
  label: string;
  /** The value that is sorted, filtered and written to CSV: a key of the row, or a function; `name` when left out. */
  field?: keyof Row | ((row: Row) => unknown);
  /** The words on screen; the value itself when left out. */
  format?: (value: unknown, row: Row) => string;
  /** What CSV gets, when not the value: numbers stay numbers. */
  csv?: (row: Row) => CsvCell;
  /** Figures: right-aligned. */
  numeric?: boolean;
  /** Default true. */
  sortable?: boolean;
  sort?: (a: unknown, b: unknown, rowA: Row, rowB: Row) => number;
  /** Out of sight until chosen. */
  optional?: boolean;
  /** Cannot be put out of sight. */
  always?: boolean;
  /** CSS width of the column. */
  width?: string;
  /** Keeps the cell's words on one line. */
  nowrap?: boolean;
}

export interface TablePaging {
  sortBy: string | null;
  descending: boolean;
  page: number;
  rowsPerPage: number;
  rowsNumber?: number;
}

const collator = new Intl.Collator('en', { numeric: true, sensitivity: 'base' });

export function valueOf<Row>(column: DataColumn<Row>, row: Row): unknown {
  if (typeof column.field === 'function') return column.field(row);
  return row[column.field ?? (column.name as keyof Row)];
}

export function textOf<Row>(column: DataColumn<Row>, row: Row): string {
  const value = valueOf(column, row);
  if (column.format !== undefined) return column.format(value, row);
  return value === null || value === undefined || value === '' ? NO_VALUE : String(value);
}

export function csvCellOf<Row>(column: DataColumn<Row>, row: Row): CsvCell {
  if (column.csv !== undefined) return column.csv(row);
  const value = valueOf(column, row);
  return typeof value === 'number' || typeof value === 'boolean' || value === null || value === undefined
    ? value
    : String(value);
}

/** Rows in which every word of `filter` occurs somewhere in the columns' words. */
export function filterRows<Row>(
  rows: readonly Row[],
  columns: readonly DataColumn<Row>[],
  filter: string,
): Row[] {
  const words = filter.toLocaleLowerCase('en').split(/\s+/).filter(Boolean);
  if (words.length === 0) return [...rows];
  return rows.filter((row) => {
    const text = columns
      .map((column) => textOf(column, row))
      .join('\n')
      .toLocaleLowerCase('en');
    return words.every((word) => text.includes(word));
  });
}

function compareValues(a: unknown, b: unknown): number {
  if (typeof a === 'number' && typeof b === 'number') return a - b;
  return collator.compare(String(a), String(b));
}

function isMissing(value: unknown): boolean {
  return (
    value === null ||
    value === undefined ||
    value === '' ||
    (typeof value === 'number' && Number.isNaN(value))
  );
}

/** A stable sort; what has no value stands last either way. */
export function sortRows<Row>(
  rows: readonly Row[],
  column: DataColumn<Row> | undefined,
  descending: boolean,
): Row[] {
  if (column === undefined) return [...rows];
  const turn = descending ? -1 : 1;
  return [...rows].sort((rowA, rowB) => {
    const [a, b] = [valueOf(column, rowA), valueOf(column, rowB)];
    if (isMissing(a) || isMissing(b)) return Number(isMissing(a)) - Number(isMissing(b));
    return turn * (column.sort?.(a, b, rowA, rowB) ?? compareValues(a, b));
  });
}

/** Keeps rows of a group together, groups in the order in which they first appear in `rows`. */
export function gatherGroups<Row>(rows: readonly Row[], groupOf: (row: Row) => string): Row[] {
  const groups = new Map<string, Row[]>();
  for (const row of rows) {
    const group = groups.get(groupOf(row));
    if (group === undefined) groups.set(groupOf(row), [row]);
    else group.push(row);
  }
  return [...groups.values()].flat();
}
