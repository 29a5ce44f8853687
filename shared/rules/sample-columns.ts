import type { ProposedMapping } from '../contracts/sample-import.ts';
import { dateShape, looksLikeTime } from './local-time.ts';
import { columnsByWords } from './sample-header.ts';
import { defaultMissingWords } from './sample-mapping.ts';
import { looksNumeric } from './sample-number.ts';
import type { SampleRegistry } from './sample-registry.ts';
import { isClock, isSerialDay } from './sample-times.ts';
import type { TableRow } from './sample-table.ts';
import { isKnownUnit } from './unit-convert.ts';

type Columns = ProposedMapping['columns'];
type Role = keyof Columns;

const examined = 2000;
const most = 0.8;
const fewest = 0.2;

export interface ColumnsFound {
  columns: Columns;
  /** Roles whose column was found by its cells, not by its name. */
  byCells: Role[];
}

/** Rows from all over a file, first and last ones included. */
export function spreadOver(rows: readonly TableRow[], count = examined): readonly TableRow[] {
  if (rows.length <= count) return rows;
  const step = (rows.length - 1) / (count - 1);
  return Array.from({ length: count }, (_, index) => rows[Math.round(index * step)]!);
}

const missing = new Set(defaultMissingWords);

type Test = (cell: string) => boolean;
const isTime: Test = (cell) => looksLikeTime(cell) || isSerialDay(cell) || /^\d{12,13}$/.test(cell);

/** Which share of the filled cells of a column are of a kind; 0 for an empty column. */
function shareOf(rows: readonly TableRow[], column: number, test: Test): number {
  let filled = 0;
  let fitting = 0;
  for (const { cells } of rows) {
    const cell = (cells[column] ?? '').trim();
    if (cell === '') continue;
    filled += 1;
    if (test(cell)) fitting += 1;
  }
  return filled === 0 ? 0 : fitting / filled;
}

/** Names deceive: a column called "Result" may hold verdicts, and one called "Date" a day of the week. */
function withoutDeceiving(columns: Columns, rows: readonly TableRow[]): Columns {
  const kept = { ...columns };
  const filled = (column: number) => rows.some(({ cells }) => (cells[column] ?? '').trim() !== '');
  const check = (role: Role, test: Test) => {
    const column = kept[role];
    if (column !== null && filled(column) && shareOf(rows, column, test) < fewest) kept[role] = null;
  };
  if (rows.length < 3) return kept;
  check('value', (cell) => looksNumeric(cell) || missing.has(cell.toLowerCase()));
  check('takenAt', (cell) => isTime(cell) || isClock(cell));
  return kept;
}

/**
 * Finds what each column holds, by the words of its header first and by its cells where these say nothing or deceive.
 * @param header cells of the line that names the columns
 * @param rows below it; looked at all over the file
 */
export function findColumns(
  header: readonly string[],
  rows: readonly TableRow[],
  registry: Pick<SampleRegistry, 'pointsByName'>,
): ColumnsFound {
  const some = spreadOver(rows);
  const columns = withoutDeceiving(columnsByWords(header), some);
  const byCells: Role[] = [];
  const free = () =>
    header.map((_, column) => column).filter((column) => !Object.values(columns).includes(column));
  const fill = (role: Role, test: Test) => {
    if (columns[role] !== null) return;
    const fitting = free().filter((column) => shareOf(some, column, test) >= most);
    if (fitting.length !== 1) return;
    columns[role] = fitting[0]!;
    byCells.push(role);
  };
  fill('takenAt', isTime);
  setTimeApart(columns, byCells, some, free());
  fill('samplePoint', (cell) => registry.pointsByName.has(cell.toLowerCase()));
  fill('value', (cell) => looksNumeric(cell) && !isSerialDay(cell));
  fill('value', looksNumeric);
  fill('unit', isKnownUnit);
  return { columns, byCells };
}

/** Day and time of day in two columns: whichever was found as the time, the day is the one and the clock the other. */
function setTimeApart(
  columns: Columns,
  byCells: Role[],
  rows: readonly TableRow[],
  free: readonly number[],
): void {
  const found = columns.takenAt;
  if (found === null) return;
  const only = (test: Test) => {
    const fitting = free.filter((column) => shareOf(rows, column, test) >= most);
    return fitting.length === 1 ? fitting[0]! : null;
  };
  if (shareOf(rows, found, isClock) >= most) {
    const day = only(isTime);
    if (day === null) return;
    columns.takenAt = day;
    columns.takenTime = found;
    byCells.push('takenAt');
    return;
  }
  const bare = shareOf(rows, found, (cell) => dateShape(cell)?.clock === false || /^\d{5}$/.test(cell));
  if (bare < most) return;
  const clock = only(isClock);
  if (clock === null) return;
  columns.takenTime = clock;
  byCells.push('takenTime');
}
