import type { FileEvidence } from '../contracts/sample-evidence.ts';
import type { ProposedMapping } from '../contracts/sample-import.ts';
import { type ColumnsFound, findColumns, spreadOver } from './sample-columns.ts';
import { type FileRead, type Sheet, tableOf } from './sample-file.ts';
import { findDateOrder, findDecimal, findMissingWords, findZone, timeCells } from './sample-finder.ts';
import { findHeader, type HeaderFound } from './sample-header.ts';
import { unitInRows } from './sample-junk.ts';
import { defaultMissingWords } from './sample-mapping.ts';
import type { SampleRegistry } from './sample-registry.ts';
import { detectDelimiter, headOf, type TableRow } from './sample-table.ts';
import type { FileProblem } from './sample-text.ts';

type Columns = ProposedMapping['columns'];
export type Proposal =
  { ok: true; proposed: ProposedMapping; because: FileEvidence[] } | { ok: false; problem: FileProblem };

/** A table with the line that names its columns. */
interface Found {
  sheet: Sheet | null;
  delimiter: ProposedMapping['delimiter'];
  header: HeaderFound;
  cells: string[];
  line: number;
  rows: TableRow[];
}
type Search = { ok: true; found: Found } | { ok: false; problem: FileProblem };

const refuse = (problem: FileProblem): Search => ({ ok: false, problem });

function findTable(
  file: FileRead,
  sheet: Sheet | null,
  delimiter: ProposedMapping['delimiter'],
  first: string,
): Search {
  const table = tableOf(file, { sheet: sheet?.name ?? null, delimiter });
  if (!table.ok) return table;
  const header = findHeader(table.rows);
  if (header === null) return refuse({ code: 'no-header', found: first.slice(0, 60) });
  const rows = table.rows.slice(header.index + 1);
  if (rows.length === 0) return refuse({ code: 'no-rows' });
  const { cells, line } = table.rows[header.index]!;
  return { ok: true, found: { sheet, delimiter, header, cells, line, rows } };
}

/** How much a sheet looks like a table of samples: what its header names first, then how long it is. */
const likeness = (search: Search): number =>
  search.ok ? search.found.header.names.length * 1e7 + search.found.rows.length : -1;

function search(file: FileRead): Search {
  if (file.kind === 'text') {
    const first = headOf(file.text, 1).trim();
    const delimiter = detectDelimiter(file.text);
    if (!delimiter) return refuse({ code: 'one-column', found: first.slice(0, 60) });
    return findTable(file, null, delimiter, first);
  }
  const found = file.sheets.map((sheet) =>
    findTable(file, sheet, '\t', sheet.rows[0]?.cells.join(' ').trim() ?? ''),
  );
  const best = found.reduce((a, b) => (likeness(b) > likeness(a) ? b : a), refuse({ code: 'empty' }));
  return best.ok ? best : (found[0] ?? best);
}

/** The unit in a header such as "NOx [mg/m³]", "Value (°C)" or "Reading, °C". */
function unitInHeader(header: string | undefined): string | null {
  const match = /[[(]([^\])]{1,20})[\])]\s*$|,\s*([^,\s]{1,20})\s*$/.exec(header ?? '');
  return (match?.[1] ?? match?.[2])?.trim() ?? null;
}

function findUnit(
  { cells, rows }: Found,
  columns: Columns,
): { unit: string | null; because: FileEvidence[] } {
  if (columns.unit !== null) return { unit: '', because: [] };
  const below = unitInRows(rows, columns);
  if (below) {
    const figures = { unit: below.unit, line: below.line };
    return { unit: below.unit.slice(0, 20), because: [{ of: 'unit', code: 'unit-in-row', figures }] };
  }
  const unit = unitInHeader(cells[columns.value ?? -1]);
  if (unit === null) return { unit, because: [{ of: 'unit', code: 'unit-open', figures: {} }] };
  return { unit, because: [{ of: 'unit', code: 'unit-in-header', figures: { unit } }] };
}

/** The method of all soft sensors at the points that the file names, where they share one. */
function proposeMethod(
  registry: SampleRegistry,
  { rows }: Found,
  column: number | null,
  pointId: number | null,
): number | null {
  const ids = new Set(pointId === null ? [] : [pointId]);
  for (const { cells } of column === null ? [] : spreadOver(rows)) {
    const point = registry.pointsByName.get((cells[column!] ?? '').trim().toLowerCase());
    if (point) ids.add(point.id);
  }
  const methods = new Set<number | null>();
  for (const id of ids) for (const sensor of registry.sensorsAt.get(id) ?? []) methods.add(sensor.methodId);
  return methods.size === 1 ? [...methods][0]! : null;
}

function tableEvidence(file: FileRead, found: Found, { columns, byCells }: ColumnsFound): FileEvidence[] {
  const because: FileEvidence[] = [];
  if (file.kind === 'workbook' && file.sheets.length > 1) {
    const figures = { sheet: found.sheet!.name, rows: found.rows.length, sheets: file.sheets.length };
    because.push({ of: 'sheet', code: 'sheet-most-like', figures });
  }
  const { names } = found.header;
  because.push(
    names.length > 0
      ? { of: 'header', code: 'header-names', figures: { line: found.line, names: names.join(', ') } }
      : { of: 'header', code: 'header-above-figures', figures: { line: found.line } },
  );
  const named = byCells.map((role) => found.cells[columns[role]!]?.trim()).filter(Boolean);
  if (named.length > 0)
    because.push({ of: 'columns', code: 'columns-by-cells', figures: { names: named.join(', ') } });
  return because;
}

/** Whether a cell of a workbook holds a number, by line and column; null for a text, where every cell is text. */
function numberTest({ sheet }: Found): ((row: TableRow, column: number) => boolean) | null {
  if (!sheet) return null;
  const byLine = new Map(sheet.rows.map(({ line, cells }) => [line, cells]));
  return ({ line }, column) => typeof byLine.get(line)?.[column] === 'number';
}

/**
 * Reads from a file how it may be read: which sheet, what parts its columns, which line names them, what each column
 * holds, the decimal sign, the order of day and month, the zone, the unit and the words for no result; with what in the
 * file speaks for it. What the file leaves open stays null, for a person to say.
 * @param file as taken in
 * @param registry sample points, soft sensors and zone of the site
 * @returns the mapping, or why the file holds no table: `one-column`, `no-header`, `no-rows`, `open-quote`, `stray-quote`
 */
export function proposeMapping(file: FileRead, registry: SampleRegistry): Proposal {
  const searched = search(file);
  if (!searched.ok) return searched;
  const { found } = searched;
  const { rows, delimiter, line } = found;
  const named = findColumns(found.cells, rows, registry);
  const { columns } = named;
  const points = new Map([...registry.pointsByName.values()].map((point) => [point.id, point]));
  const samplePointId = columns.samplePoint === null && points.size === 1 ? [...points.keys()][0]! : null;
  const decimal = findDecimal(rows, columns.value, numberTest(found));
  const times = timeCells(rows, columns);
  const dateOrder = findDateOrder(times);
  const zone = findZone(times, dateOrder.value, registry.zone);
  const unit = findUnit(found, columns);
  const missing = findMissingWords(rows, columns.value, defaultMissingWords);
  return {
    ok: true,
    proposed: {
      sheet: found.sheet?.name ?? null,
      delimiter,
      decimal: decimal.value,
      headerLine: line,
      dateOrder: dateOrder.value,
      zone: zone.value,
      columns,
      samplePointId,
      methodId: proposeMethod(registry, found, columns.samplePoint, samplePointId),
      unit: unit.unit,
      missingWords: missing.value,
    },
    because: [
      ...tableEvidence(file, found, named),
      ...[decimal, dateOrder, zone, unit, missing].flatMap(({ because }) => because),
    ],
  };
}
