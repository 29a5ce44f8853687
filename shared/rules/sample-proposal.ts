import type { ProposedMapping } from '../contracts/sample-import.ts';
import { detectDateOrder, looksLikeTime } from './local-time.ts';
import { detectDecimal, looksNumeric } from './sample-number.ts';
import type { SampleRegistry } from './sample-registry.ts';
import { detectDelimiter, headOf, readTable, type TableRow } from './sample-table.ts';
import type { FileProblem } from './sample-text.ts';

type Role = keyof ProposedMapping['columns'];
type Columns = ProposedMapping['columns'];
export type Proposal = { ok: true; proposed: ProposedMapping } | { ok: false; problem: FileProblem };

/** Words of headers, the telling ones first; a column that fits an earlier role is not asked for a later one. */
const roleWords: [Role, RegExp[]][] = [
  [
    'reportedAt',
    [/report/, /\b(result|approved|validated|released|completed) (time|date|at|on)\b/, /\banaly[sz]ed\b/],
  ],
  ['samplePoint', [/\bpoint\b/, /\b(location|position|stream)\b/]],
  [
    'sampleNumber',
    [/\b(sample|probe|lab|lims) ?(no|nr|num|number|id|code)\b/, /^(id|no|nr|number|sample|probe)\.?$/],
  ],
  [
    'takenAt',
    [/\b(taken|sampled|sampling|collected|drawn)\b/, /\bsample (time|date)\b/, /^(date|time|timestamp)/],
  ],
  ['unit', [/^units?\b/, /\buom\b/]],
  ['value', [/^(value|result|reading)\b/, /\b(value|result|reading|measured)\b/]],
];
const examined = 5000;

const simplified = (header: string): string =>
  header
    .toLowerCase()
    .replaceAll('_', ' ')
    .replace(/\s+/g, ' ')
    .replace(/\.(?=\s|$)/g, '')
    .trim();

function columnsByWords(header: readonly string[]): Columns {
  const columns: Columns = {
    sampleNumber: null,
    takenAt: null,
    reportedAt: null,
    value: null,
    unit: null,
    samplePoint: null,
  };
  const taken = new Set<number>();
  for (const [role, patterns] of roleWords) {
    const fitting = patterns.flatMap((pattern) =>
      header.flatMap((text, column) =>
        !taken.has(column) && pattern.test(simplified(text)) ? [column] : [],
      ),
    );
    if (fitting[0] === undefined) continue;
    columns[role] = fitting[0];
    taken.add(fitting[0]);
  }
  return columns;
}

/**
 * Finds the line that names the columns: the one of the first hundred lines that holds the most known words, else the
 * first line of words above a line with figures.
 * @returns the index of the row, or null where no line names anything
 */
export function findHeader(rows: readonly TableRow[]): number | null {
  let best: { index: number; known: number } | null = null;
  const head = rows.filter(({ line }) => line <= 100);
  for (const [index, { cells }] of head.entries()) {
    if (cells.some((cell) => looksNumeric(cell) || looksLikeTime(cell))) continue;
    const known = Object.values(columnsByWords(cells)).filter((column) => column !== null).length;
    if (known >= 2 && known > (best?.known ?? 0)) best = { index, known };
  }
  if (best) return best.index;
  const words = head.findIndex(
    ({ cells }, index) =>
      cells.filter((cell) => cell.trim() !== '').length >= 2 &&
      !cells.some((cell) => looksNumeric(cell) || looksLikeTime(cell)) &&
      head[index + 1]?.cells.some(looksNumeric) === true,
  );
  return words === -1 ? null : words;
}

/** The only column, among those that nothing else claims, whose cells are mostly of a kind. */
function onlyColumn(
  rows: readonly TableRow[],
  free: readonly number[],
  isOne: (cell: string) => boolean,
): number | null {
  const fitting = free.filter((column) => {
    const filled = rows.map(({ cells }) => cells[column] ?? '').filter((cell) => cell.trim() !== '');
    return filled.length > 0 && filled.filter(isOne).length >= 0.8 * filled.length;
  });
  return fitting.length === 1 ? fitting[0]! : null;
}

function proposeColumns(header: readonly string[], rows: readonly TableRow[]): Columns {
  const columns = columnsByWords(header);
  const some = rows.slice(0, 200);
  const free = () =>
    header.map((_, column) => column).filter((column) => !Object.values(columns).includes(column));
  columns.takenAt ??= onlyColumn(some, free(), looksLikeTime);
  columns.value ??= onlyColumn(some, free(), looksNumeric);
  return columns;
}

/** The unit in a header such as "NOx [mg/m³]", "Value (°C)" or "Reading, °C". */
function unitInHeader(header: string | undefined): string | null {
  const match = /[[(]([^\])]{1,20})[\])]\s*$|,\s*([^,\s]{1,20})\s*$/.exec(header ?? '');
  return (match?.[1] ?? match?.[2])?.trim() ?? null;
}

function* cellsOf(rows: readonly TableRow[], columns: readonly (number | null)[]): Generator<string> {
  for (const { cells } of rows) for (const column of columns) if (column !== null) yield cells[column] ?? '';
}

/** The method of all soft sensors at the points that the file names, where they share one. */
function proposeMethod(
  registry: SampleRegistry,
  names: Iterable<string>,
  pointId: number | null,
): number | null {
  const ids = new Set(pointId === null ? [] : [pointId]);
  for (const name of names) {
    const point = registry.pointsByName.get(name.trim().toLowerCase());
    if (point) ids.add(point.id);
  }
  const methods = new Set<number | null>();
  for (const id of ids) for (const sensor of registry.sensorsAt.get(id) ?? []) methods.add(sensor.methodId);
  return methods.size === 1 ? [...methods][0]! : null;
}

/**
 * Reads from a file how it may be read: what parts its columns, which line names them, what each column holds, the
 * decimal sign and the order of day and month. What the file leaves open stays null, for a person to say.
 * @param text the decoded file
 * @param registry sample points, soft sensors and zone of the site
 * @returns the mapping, or why the text holds no table: `one-column`, `no-header`, `no-rows`, `open-quote`, `stray-quote`
 */
export function proposeMapping(text: string, registry: SampleRegistry): Proposal {
  const first = headOf(text, 1).trim();
  const delimiter = detectDelimiter(text);
  if (!delimiter) return { ok: false, problem: { code: 'one-column', found: first.slice(0, 60) } };
  const table = readTable(text, delimiter);
  if (!table.ok) return table;
  const at = findHeader(table.rows);
  if (at === null) return { ok: false, problem: { code: 'no-header', found: first.slice(0, 60) } };
  const rows = table.rows.slice(at + 1);
  if (rows.length === 0) return { ok: false, problem: { code: 'no-rows' } };
  const header = table.rows[at]!.cells;
  const columns = proposeColumns(header, rows);
  const some = rows.slice(0, examined);
  const points = [...registry.pointsByName.values()];
  const samplePointId = columns.samplePoint === null && points.length === 1 ? points[0]!.id : null;
  return {
    ok: true,
    proposed: {
      delimiter,
      decimal: columns.value === null ? null : detectDecimal(cellsOf(some, [columns.value])),
      headerLine: table.rows[at]!.line,
      dateOrder: detectDateOrder(cellsOf(rows, [columns.takenAt, columns.reportedAt])),
      zone: registry.zone,
      columns,
      samplePointId,
      methodId: proposeMethod(registry, new Set(cellsOf(some, [columns.samplePoint])), samplePointId),
      unit: columns.unit === null ? unitInHeader(header[columns.value ?? -1]) : '',
    },
  };
}
