import { eventNoteLength, type DayOrder, type EventKind, type EventRow } from '../contracts/events.ts';
import {
  createTimeReader,
  type DateOrder,
  detectDateOrder,
  looksLikeTime,
  type TimeProblem,
  type TimeRead,
} from './local-time.ts';
import { readEventKind } from './event-words.ts';
import { detectDelimiter, headOf, readTable, type TableRow } from './sample-table.ts';
import type { FileProblem } from './sample-text.ts';

/** What a site knows that bears on a file of events: units in use and soft sensors. */
export interface EventRegistry {
  zone: string;
  units: readonly { id: number; name: string; areaName: string }[];
  sensors: readonly { id: number; tagName: string; unitId: number }[];
}

/** A unit, or one soft sensor. */
export interface EventSubject {
  unitId: number | null;
  softSensorId: number | null;
  name: string;
}

/** Why a row is refused. `written`: the cell at fault. */
export type EventReason =
  | { code: 'no-subject' | 'no-event' | 'no-time' }
  | { code: 'unknown-unit' | 'unknown-sensor' | 'unknown-event'; written: string }
  | { code: 'several-units' | 'other-unit'; written: string; such: string }
  | { code: 'time'; column: 'at' | 'until'; written: string; problem: TimeProblem }
  | { code: 'long-note'; length: number }
  | { code: 'ragged'; expected: number; found: number };

export interface ReadEvent {
  line: number;
  written: EventRow['written'];
  reasons: EventReason[];
  /** Null where a reason refuses the row. */
  event: { subject: EventSubject; kind: EventKind; at: number; until: number | null; note: string } | null;
}

/** Why a file is no file of events at all. */
export type EventFileProblem =
  | FileProblem
  | { code: 'missing-columns'; missing: string[]; found: string }
  | { code: 'too-many-rows'; most: number };
export type EventTable =
  { ok: true; rows: ReadEvent[]; undecided: string | null } | { ok: false; problem: EventFileProblem };

type Role = 'until' | 'sensor' | 'unit' | 'note' | 'at' | 'event';

/** Words of headers; a column that fits an earlier role is not asked for a later one. */
const roleWords: [Role, RegExp][] = [
  ['until', /\b(until|till|to|end|ends|ended|finish|finished|through)\b/],
  ['note', /\b(notes?|comments?|remarks?|reasons?|description|details?)\b/],
  ['sensor', /\b(soft ?sensors?|tags?|estimates?)\b/],
  ['unit', /\b(units?|equipment|line|plant|machine|asset|furnace|kiln|column|reactor)\b/],
  ['at', /\b(time|times|date|datetime|timestamp|when|from|begin|began|begins|at|since)\b/],
  ['event', /\b(events?|kind|type|what|happened|state|status)\b/],
];
const mostRows = 5000;

/**
 * Reads a file of events (RFC 4180 text whose first line names the columns, in any order) row by row. What only the
 * registry or other rows can show is for `settleEvents`. Times without an offset are on the clock of the site.
 * @param dayOrder said by a person where the file does not show whether day or month comes first
 * @returns the rows; `undecided` is a date that may be read both ways, and then there are no rows yet; or why the text
 * is no such table: `one-column`, `no-rows`, `open-quote`, `stray-quote`, `too-many-columns`, `too-many-rows`,
 * `missing-columns`
 */
export function readEvents(text: string, registry: EventRegistry, dayOrder: DayOrder | null): EventTable {
  const delimiter = detectDelimiter(text);
  const found = headOf(text, 1).trim().slice(0, 60);
  if (!delimiter) return { ok: false, problem: { code: 'one-column', found } };
  const table = readTable(text, delimiter);
  if (!table.ok) return table;
  const [header, ...rows] = table.rows;
  const columns = columnsOf(header!.cells);
  const missing = missingOf(columns);
  if (missing.length > 0) return { ok: false, problem: { code: 'missing-columns', missing, found } };
  if (rows.length === 0) return { ok: false, problem: { code: 'no-rows' } };
  if (rows.length > mostRows) return { ok: false, problem: { code: 'too-many-rows', most: mostRows } };
  const times = rows.flatMap(({ cells }) => [cellOf(cells, columns.at), cellOf(cells, columns.until)]);
  const order = detectDateOrder(times) ?? dayOrder;
  const either = order
    ? undefined
    : times.find((cell) => looksLikeTime(cell) && /^\d{1,2}[-/.]\d/.test(cell));
  if (either !== undefined) return { ok: true, rows: [], undecided: either };
  const read = createEventReader(header!.cells.length, columns, registry, order ?? 'iso');
  return { ok: true, rows: rows.map(read), undecided: null };
}

type Columns = Partial<Record<Role, number>>;

const cellOf = (cells: readonly string[], column: number | undefined): string =>
  column === undefined ? '' : (cells[column] ?? '').trim();

function columnsOf(header: readonly string[]): Columns {
  const columns: Columns = {};
  const taken = new Set<number>();
  for (const [role, pattern] of roleWords) {
    const column = header.findIndex(
      (name, index) => !taken.has(index) && pattern.test(name.toLowerCase().replace(/[^\p{L}\d]+/gu, ' ')),
    );
    if (column === -1) continue;
    columns[role] = column;
    taken.add(column);
  }
  return columns;
}

function missingOf(columns: Columns): string[] {
  const wanted: [string, boolean][] = [
    ['the unit', columns.unit !== undefined || columns.sensor !== undefined],
    ['the event', columns.event !== undefined],
    ['the time', columns.at !== undefined],
  ];
  return wanted.filter(([, there]) => !there).map(([name]) => name);
}

function createEventReader(
  width: number,
  columns: Columns,
  registry: EventRegistry,
  order: DateOrder,
): (row: TableRow) => ReadEvent {
  const readTime = createTimeReader({ order, zone: registry.zone });
  return ({ line, cells }) => {
    const cell = (role: Role) => cellOf(cells, columns[role]);
    const written = {
      subject: cell('sensor') || cell('unit'),
      event: cell('event'),
      at: cell('at'),
      until: cell('until'),
      note: cell('note'),
    };
    const reasons: EventReason[] = [];
    if (cells.slice(width).some((extra) => extra.trim() !== '')) {
      reasons.push({ code: 'ragged', expected: width, found: cells.length });
      return { line, written, reasons, event: null };
    }
    const note = (reason: EventReason): null => {
      reasons.push(reason);
      return null;
    };
    const subject = subjectOf(registry, cell('unit'), cell('sensor'), note);
    const kind = kindOf(written.event, note);
    const at =
      written.at === '' ? note({ code: 'no-time' }) : timeOf(readTime(written.at), 'at', written.at, note);
    const until = written.until === '' ? null : timeOf(readTime(written.until), 'until', written.until, note);
    const { length } = written.note;
    if (length > eventNoteLength) note({ code: 'long-note', length });
    const whole = reasons.length === 0 && subject && kind && at !== null;
    return { line, written, reasons, event: whole ? { subject, kind, at, until, note: written.note } : null };
  };
}

type Refuse = (reason: EventReason) => null;

function kindOf(written: string, refuse: Refuse): EventKind | null {
  if (written === '') return refuse({ code: 'no-event' });
  return readEventKind(written) ?? refuse({ code: 'unknown-event', written });
}

function timeOf(read: TimeRead, column: 'at' | 'until', written: string, refuse: Refuse): number | null {
  return read.ok ? read.at : refuse({ code: 'time', column, written, problem: read });
}

/** A tag names its soft sensor; a name in the column of units may be a tag too, where no unit has it. */
function subjectOf(registry: EventRegistry, unit: string, tag: string, refuse: Refuse): EventSubject | null {
  if (unit === '' && tag === '') return refuse({ code: 'no-subject' });
  const units = unitsNamed(registry, unit || tag);
  const sensor = sensorNamed(registry, tag || unit);
  if (tag !== '' && sensor) {
    const owner = registry.units.find(({ id }) => id === sensor.unitId);
    if (unit !== '' && !units.some(({ id }) => id === sensor.unitId))
      return refuse({ code: 'other-unit', written: sensor.tagName, such: owner?.name ?? 'another unit' });
    return { unitId: null, softSensorId: sensor.id, name: sensor.tagName };
  }
  if (tag !== '' && unit !== '') return refuse({ code: 'unknown-sensor', written: tag });
  const [first, second] = units;
  if (first && second)
    return refuse({ code: 'several-units', written: unit || tag, such: `${first.areaName} / ${first.name}` });
  if (first) return { unitId: first.id, softSensorId: null, name: first.name };
  if (sensor) return { unitId: null, softSensorId: sensor.id, name: sensor.tagName };
  return refuse({ code: tag === '' ? 'unknown-unit' : 'unknown-sensor', written: unit || tag });
}

const sensorNamed = ({ sensors }: EventRegistry, name: string) =>
  sensors.find(({ tagName }) => tagName.toLowerCase() === name.toLowerCase());

/** By name alone, or by area and name: "Hot end / Kiln 1". */
function unitsNamed({ units }: EventRegistry, written: string) {
  const plain = (name: string) => name.toLowerCase().replace(/\s*\/\s*/g, '/');
  const name = plain(written);
  return units.filter((unit) => name === plain(unit.name) || name === plain(`${unit.areaName}/${unit.name}`));
}
