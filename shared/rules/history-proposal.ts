import type { Delimiter, HistoryDoubt, HistoryProposal, UnknownTag } from '../contracts/history.ts';
import { findDecimal, findTimes, shareOfNumbers } from './history-evidence.ts';
import { readQuality } from './history-values.ts';

/** A tag of the site; `computed` where Cupel works its readings out itself. */
export interface KnownTag {
  id: number;
  name: string;
  computed: boolean;
}

export interface HistoryHead {
  delimiter: Delimiter;
  headerLine: number;
  header: readonly string[];
  /** Data rows below the header, as many as are needed to judge times and numbers. */
  rows: readonly string[][];
  /** Every data row that has been read: a name may stand in any of them. */
  every: readonly string[][];
}

export interface Proposal {
  proposed: HistoryProposal;
  unknownTags: UnknownTag[];
  computedTags: string[];
  doubts: HistoryDoubt[];
}

const longTagHeader =
  /^(tag|tag ?name|tag ?id|name|point|signal|variable|sensor|sensor ?id|item|parameter)$/i;
const valueHeader = /^(value|val|reading|measurement|average|avg|mean|result)\b/i;
const qualityHeader = /^(quality|qual|status|opc ?quality|validity)$/i;

/**
 * How a file of tag history would be read, from its header and first rows alone. Nothing is certain: a person sees it
 * before anything is imported.
 * @param head header and data rows, cells as in the file
 * @param tags every tag of the site
 * @param zone IANA zone of the site, for times without offset
 * @param latestMs instants after it are yet to come
 */
export function proposeHistory(
  head: HistoryHead,
  tags: readonly KnownTag[],
  zone: string,
  latestMs: number,
): Proposal {
  const times = findTimes(head.rows, zone, latestMs);
  const timeColumn = times?.column ?? null;
  const others = head.header.map((_name, column) => column).filter((column) => column !== timeColumn);
  const cellsOf = (column: number) => head.rows.map((row) => row[column] ?? '');
  const shown = findDecimal(others.flatMap(cellsOf));
  const decimal = shown ?? (head.delimiter === ';' ? ',' : '.');
  const base = {
    delimiter: head.delimiter,
    decimal,
    headerLine: head.headerLine,
    dateOrder: times?.dateOrder ?? ('iso' as const),
    zone,
    timeColumn,
  };
  const doubts: HistoryDoubt[] = [
    ...(times?.doubtful ? (['date-order'] as const) : []),
    ...(shown === null ? (['decimal'] as const) : []),
  ];
  const byName = new Map(tags.map((tag) => [tag.name.toLowerCase(), tag]));
  const numeric = new Set(others.filter((column) => shareOfNumbers(cellsOf(column), decimal) >= 0.5));
  const columns: ColumnView[] = others.map((column) => ({
    column,
    name: head.header[column]!.trim(),
    cells: cellsOf(column),
    numeric: numeric.has(column),
    every: () => head.every.map((row) => (row[column] ?? '').trim()),
  }));
  const tagColumn = findTagColumn(columns, byName);
  return tagColumn === null
    ? { doubts, ...wide(base, columns, byName) }
    : { doubts, ...long(base, columns, tagColumn, byName) };
}

interface ColumnView {
  column: number;
  name: string;
  cells: string[];
  numeric: boolean;
  every: () => string[];
}
type ByName = ReadonlyMap<string, KnownTag>;
type Base = Omit<HistoryProposal, 'shape' | 'columns' | 'tagColumn' | 'valueColumn' | 'qualityColumn'>;
type Shaped = Omit<Proposal, 'doubts'>;

/** A file with a row for each reading has a column of names; a file with a column for each tag has none. */
function findTagColumn(columns: readonly ColumnView[], byName: ByName): number | null {
  if (!columns.some(({ numeric }) => numeric)) return null;
  const texts = columns.filter(({ numeric }) => !numeric);
  const named = texts.find(({ every }) => every().some((cell) => byName.has(cell.toLowerCase())));
  return (named ?? texts.find(({ name }) => longTagHeader.test(name)))?.column ?? null;
}

function long(base: Base, columns: readonly ColumnView[], tagColumn: number, byName: ByName): Shaped {
  const rest = columns.filter(({ column }) => column !== tagColumn);
  const quality = rest.find(
    ({ name, cells }) =>
      qualityHeader.test(name) || cells.every((cell) => /[a-z]/i.test(cell) && readQuality(cell) !== null),
  );
  const values = rest.filter(({ column, numeric }) => numeric && column !== quality?.column);
  const value = values.find(({ name }) => valueHeader.test(name)) ?? values[0];
  const names = new Map<string, string>();
  for (const cell of columns.find(({ column }) => column === tagColumn)!.every()) {
    if (cell !== '') names.set(cell.toLowerCase(), cell);
  }
  const unknown = [...names].filter(([key]) => !byName.has(key));
  return {
    proposed: {
      ...base,
      shape: 'long',
      columns: [],
      tagColumn,
      valueColumn: value?.column ?? null,
      qualityColumn: quality?.column ?? null,
    },
    unknownTags: unknown.map(([, name]) => ({ column: null, ...splitUnit(name) })),
    computedTags: [...names.keys()].flatMap((key) =>
      byName.get(key)?.computed ? [byName.get(key)!.name] : [],
    ),
  };
}

function wide(base: Base, columns: readonly ColumnView[], byName: ByName): Shaped {
  const found = columns.map((view) => {
    const parted = splitUnit(view.name);
    const tag = byName.get(view.name.toLowerCase()) ?? byName.get(parted.name.toLowerCase()) ?? null;
    return { ...view, ...parted, tag };
  });
  const taken = new Set<number>();
  const assigned = found.flatMap(({ column, tag }) => {
    if (!tag || tag.computed || taken.has(tag.id)) return [];
    taken.add(tag.id);
    return [{ column, tagId: tag.id }];
  });
  return {
    proposed: {
      ...base,
      shape: 'wide',
      columns: assigned,
      tagColumn: null,
      valueColumn: null,
      qualityColumn: null,
    },
    unknownTags: found
      .filter(({ tag, name, numeric }) => tag === null && numeric && name !== '')
      .map(({ column, name, unit }) => ({ column, name, unit })),
    computedTags: found.flatMap(({ tag }) => (tag?.computed ? [tag.name] : [])),
  };
}

/**
 * A header such as "TI-1401 [°C]" or "Feed (t/h)" as a name and an engineering unit; without a unit the unit is empty.
 */
export function splitUnit(header: string): { name: string; unit: string } {
  const found = /^(.+?)\s*(?:\[([^\]]{1,20})\]|\(([^)]{1,20})\))$/.exec(header.trim());
  if (!found) return { name: header.trim().slice(0, 60), unit: '' };
  return { name: found[1]!.slice(0, 60), unit: (found[2] ?? found[3] ?? '').trim() };
}
