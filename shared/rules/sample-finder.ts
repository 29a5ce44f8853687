import type { EvidenceCode, FileEvidence } from '../contracts/sample-evidence.ts';
import type { ProposedMapping, SampleDateOrder } from '../contracts/sample-import.ts';
import { type DateShape, dateOrderOf, dateShape } from './local-time.ts';
import { countDecimals, decimalOf } from './sample-number.ts';
import type { TableRow } from './sample-table.ts';
import { createSampleTimes, isSerialDay } from './sample-times.ts';

type Columns = ProposedMapping['columns'];
type Found<T> = { value: T; because: FileEvidence[] };

const evidence = (
  of: FileEvidence['of'],
  code: EvidenceCode,
  figures: FileEvidence['figures'] = {},
): FileEvidence[] => [{ of, code, figures }];

/** The cells of some columns, with the lines they stand on. */
function* cellsOf(
  rows: readonly TableRow[],
  columns: readonly (number | null)[],
): Generator<{ line: number; text: string }> {
  for (const { line, cells } of rows) {
    for (const column of columns) {
      const text = column === null ? '' : (cells[column] ?? '').trim();
      if (text !== '') yield { line, text };
    }
  }
}
function* textsOf(rows: readonly TableRow[], columns: readonly (number | null)[]): Generator<string> {
  for (const { text } of cellsOf(rows, columns)) yield text;
}

/**
 * The decimal sign of a file, from all its values.
 * @param isNumber of a workbook: whether the cell of a row holds a number, which then shows no sign
 */
export function findDecimal(
  rows: readonly TableRow[],
  column: number | null,
  isNumber: ((row: TableRow, column: number) => boolean) | null,
): Found<ProposedMapping['decimal']> {
  if (column === null) return { value: null, because: [] };
  const written = isNumber ? rows.filter((row) => !isNumber(row, column)) : rows;
  const counts = countDecimals(textsOf(written, [column]));
  if (isNumber && counts.numbers === 0)
    return { value: '.', because: evidence('decimal', 'numbers-as-numbers') };
  const value = decimalOf(counts);
  const { numbers: all, open } = counts;
  if (value === null) {
    const mixed = counts['.'] > 0 || counts[','] > 0;
    const figures = { points: counts['.'], commas: counts[','], open, all };
    return { value, because: evidence('decimal', mixed ? 'decimal-mixed' : 'decimal-open', figures) };
  }
  if (counts[value] === 0) return { value, because: evidence('decimal', 'no-decimal', { all }) };
  const other = counts[value === '.' ? ',' : '.'];
  return {
    value,
    because: evidence('decimal', 'decimal', { sign: value, count: counts[value], other, all }),
  };
}

const serialShare = 0.9;

/** A time of a file, with the line it stands on and how it is written. */
export interface TimeCell {
  line: number;
  text: string;
  shape: DateShape | null;
  /** It says when a sample was taken. */
  taken: boolean;
}

/** Every time of a file; with the time of day from its own column, where there is one. */
export function timeCells(rows: readonly TableRow[], columns: Columns): TimeCell[] {
  const { takenAt, takenTime } = columns;
  const cells: TimeCell[] = [];
  const add = (line: number, text: string, taken: boolean) => {
    if (text !== '') cells.push({ line, text, shape: dateShape(text), taken });
  };
  for (const { line, cells: row } of rows) {
    const clock = takenTime === null ? '' : (row[takenTime] ?? '').trim();
    const day = takenAt === null ? '' : (row[takenAt] ?? '').trim();
    add(line, clock === '' || day === '' ? day : `${day} ${clock}`, true);
    for (const column of [columns.takenFrom, columns.reportedAt])
      if (column !== null) add(line, (row[column] ?? '').trim(), false);
  }
  return cells;
}

/** The order of day, month and year, from every time of the file. */
export function findDateOrder(cells: readonly TimeCell[]): Found<SampleDateOrder | null> {
  const taken = cells.filter((cell) => cell.taken);
  const all = taken.length;
  if (all === 0) return { value: null, because: [] };
  const serials = taken.filter(({ shape, text }) => !shape && isSerialDay(text.split(' ')[0]!)).length;
  if (serials >= serialShare * all) {
    return { value: 'serial-days', because: evidence('dateOrder', 'serial-dates', { serials, all }) };
  }
  const value = dateOrderOf(cells.map(({ shape }) => shape));
  return { value, because: dateEvidence(value, cells) };
}

function dateEvidence(order: SampleDateOrder | null, cells: readonly TimeCell[]): FileEvidence[] {
  const dates = cells.filter(({ shape }) => shape?.kind === 'last');
  const days = dates.filter(({ shape }) => shape!.first > 12);
  const months = dates.filter(({ shape }) => shape!.first <= 12 && shape!.second > 12);
  if (order === 'day-month-year' && days.length > 0) {
    const { line, shape } = days[0]!;
    const figures = { order, line, shown: shape!.first, place: 'first', count: days.length };
    return evidence('dateOrder', 'date-order', figures);
  }
  if (order === 'month-day-year') {
    const { line, shape } = months[0]!;
    const figures = { order, line, shown: shape!.second, place: 'second', count: months.length };
    return evidence('dateOrder', 'date-order', figures);
  }
  if (order === 'day-month-year') return evidence('dateOrder', 'month-in-words');
  if (order === 'iso') return evidence('dateOrder', 'year-first');
  if (order === 'epoch-ms') return evidence('dateOrder', 'milliseconds');
  if (days.length + months.length === 0) return evidence('dateOrder', 'date-order-open');
  const lines = { dayLine: days[0]?.line ?? 0, monthLine: months[0]?.line ?? 0 };
  return evidence('dateOrder', 'date-order-mixed', {
    dayFirst: days.length,
    monthFirst: months.length,
    ...lines,
  });
}

/**
 * The zone of a file: of no account where every time has its offset; that of the site unless times of the file fall into
 * an hour which its clocks leave out, so that the file must be on another clock.
 */
export function findZone(
  cells: readonly TimeCell[],
  order: SampleDateOrder | null,
  siteZone: string,
): Found<string | null> {
  const taken = cells.filter((cell) => cell.taken);
  const all = taken.length;
  if (order === null || order === 'epoch-ms' || all === 0) return { value: siteZone, because: [] };
  const local = taken.filter(({ shape }) => !shape?.offset);
  if (local.length === 0) return { value: siteZone, because: evidence('zone', 'offsets-in-cells', { all }) };
  const read = createSampleTimes({ order, zone: siteZone });
  const skipped = local.filter(({ text }) => {
    const time = read(text);
    return !time.ok && time.code === 'missing-hour';
  });
  if (skipped.length === 0) {
    const figures = { zone: siteZone, offsets: all - local.length, all };
    return { value: siteZone, because: evidence('zone', 'zone-of-site', figures) };
  }
  const figures = { count: skipped.length, line: skipped[0]!.line, zone: siteZone };
  return { value: null, because: evidence('zone', 'zone-skips-hours', figures) };
}

const missingWords = ['tbd', 'ausstehend', 'folgt', 'k.a.', 'k. a.', 'n.b.', 'en cours', 's/d', 'pendiente'];

/** Words that a column of values holds besides numbers, and that are known to stand for no result. */
export function findMissingWords(
  rows: readonly TableRow[],
  column: number | null,
  usual: readonly string[],
): Found<string[]> {
  const known = new Set([...usual, ...missingWords].map((word) => word.toLowerCase()));
  const met = new Map<string, number>();
  for (const text of textsOf(rows, [column])) {
    const word = text.toLowerCase();
    if (known.has(word)) met.set(word, (met.get(word) ?? 0) + 1);
  }
  const added = [...met.keys()].filter((word) => !usual.includes(word));
  const words = [...met.keys()].slice(0, 6).join(', ');
  const count = [...met.values()].reduce((sum, one) => sum + one, 0);
  return {
    value: [...usual, ...added],
    because: count === 0 ? [] : evidence('missingWords', 'missing-words', { words, count }),
  };
}
