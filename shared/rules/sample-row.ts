import type { SampleMapping, SampleReason, SampleReasonCode } from '../contracts/sample-import.ts';
import { wallClock } from './format.ts';
import { createTimeReader, endOfDay, type TimeRead } from './local-time.ts';
import { createValueReader } from './sample-number.ts';
import { expectedUnits, type SampleRegistry, unitKey } from './sample-registry.ts';
import type { TableRow } from './sample-table.ts';

/** A sample as a row states it, ready to be stored. Instants are UTC milliseconds. */
export interface SampleDraft {
  samplePointId: number;
  sampleNumber: string;
  /** One of the two is null: a date without a time of day is kept as a date. */
  takenAt: number | null;
  takenOn: string | null;
  reportedAt: number;
  value: number;
  qualifier: '<' | '>' | null;
  unit: string;
  asWritten: string;
}

/** When a sample was taken: an instant, or a day where no time of day is known. */
export type Taken = { at: number; on: null } | { at: null; on: string };

/** A row of the file with all that was found in it. `sample` is null where a reason refuses the row. */
export interface ReadRow {
  row: TableRow;
  samplePointId: number | null;
  taken: Taken | null;
  reasons: SampleReason[];
  sample: SampleDraft | null;
}

export interface RowRules {
  mapping: SampleMapping;
  registry: SampleRegistry;
  /** Unit of the chosen method; null without a method. */
  methodUnit: string | null;
  header: readonly string[];
  /** The present instant, UTC milliseconds. */
  now: number;
}

const aheadMs = 10 * 60_000;
const longestNumber = 80;
type Note = (code: SampleReasonCode, figures?: SampleReason['figures']) => void;

/** The text of a cell that a role is mapped to; empty where the role has no column. */
export const cellAt = (cells: readonly string[], column: number | null): string =>
  column === null ? '' : (cells[column] ?? '').trim();

/**
 * Makes a reader that turns a row into a sample, or says everything that speaks against it. Rows are judged one by one
 * here; what only others can show (repeats, results stored before) is for `decideRows`.
 * @returns a function from row to its sample and reasons: `censored` and `date-only` are flags, any other refuses
 */
export function createRowReader(rules: RowRules): (row: TableRow) => ReadRow {
  const { mapping, registry, header } = rules;
  const { columns } = mapping;
  const readTime = createTimeReader({ order: mapping.dateOrder, zone: mapping.zone });
  const readValue = createValueReader(mapping.decimal);
  const width = header.findLastIndex((name) => name.trim() !== '') + 1;
  const today = dayOn(rules.now, registry.zone);
  const unitsAt = rememberUnits(rules);

  return (row) => {
    const { cells } = row;
    const reasons: SampleReason[] = [];
    const note: Note = (code, figures = {}) => reasons.push({ code, figures });
    const samplePointId = pointOf(rules, cells, note);
    if (cells.length < width || cells.slice(header.length).some((cell) => cell.trim() !== '')) {
      const ragged: SampleReason = { code: 'ragged', figures: { expected: width, found: cells.length } };
      return { row, samplePointId, taken: null, reasons: [ragged], sample: null };
    }
    const taken = takenOf(readTime, cellAt(cells, columns.takenAt), today, rules.now, note);
    const reportedAt = reportedOf(readTime, cellAt(cells, columns.reportedAt), taken, rules, note);
    const asWritten = cells[columns.value] ?? '';
    const value = valueOf(readValue(asWritten), asWritten, note);
    const stated = cellAt(cells, columns.unit) || mapping.unit;
    const unit = samplePointId === null ? stated : unitOf(stated, unitsAt(samplePointId), note);
    const written = cellAt(cells, columns.sampleNumber);
    if (written.length > longestNumber) note('long-number', { length: written.length, most: longestNumber });
    if (
      samplePointId === null ||
      !taken ||
      reportedAt === null ||
      !value ||
      reasons.some(({ code }) => !isFlag(code))
    ) {
      return { row, samplePointId, taken, reasons, sample: null };
    }
    const sampleNumber = written || (taken.on ?? new Date(taken.at!).toISOString().replace('.000Z', 'Z'));
    const when = { takenAt: taken.at, takenOn: taken.on, reportedAt };
    const sample = { samplePointId, sampleNumber, ...when, ...value, unit, asWritten };
    return { row, samplePointId, taken, reasons, sample };
  };
}

/** A sample goes in with such a reason, and carries it as a flag. */
export const isFlag = (code: SampleReasonCode): boolean => code === 'censored' || code === 'date-only';

function rememberUnits({ registry, methodUnit }: RowRules): (samplePointId: number) => string[] {
  const known = new Map<number, string[]>();
  return (samplePointId) => {
    const units = known.get(samplePointId) ?? expectedUnits(registry, samplePointId, methodUnit);
    known.set(samplePointId, units);
    return units;
  };
}

function pointOf({ mapping, registry }: RowRules, cells: readonly string[], note: Note): number | null {
  const name = cellAt(cells, mapping.columns.samplePoint);
  if (name === '') {
    if (mapping.samplePointId === null) note('no-point');
    return mapping.samplePointId;
  }
  const point = registry.pointsByName.get(name.toLowerCase());
  if (!point) note('unknown-point', { point: name });
  return point?.id ?? null;
}

const dayOn = (at: number, zone: string): string => {
  const { year, month, day } = wallClock(at, zone);
  return `${year}-${String(month).padStart(2, '0')}-${String(day).padStart(2, '0')}`;
};

type TimeReader = (text: string) => TimeRead;

function takenOf(readTime: TimeReader, text: string, today: string, now: number, note: Note): Taken | null {
  if (text === '') {
    note('no-time');
    return null;
  }
  const read = readTime(text);
  if (read.ok) return inRange(read.at, 'taken', text, now, note) ? { at: read.at, on: null } : null;
  if (read.code !== 'no-time-of-day') {
    note(read.code, { ...read.figures, written: text, column: 'taken' });
    return null;
  }
  const on = String(read.figures.on);
  if (on > today) note('ahead', { written: text, column: 'taken' });
  else if (on < '1970-01-01') note('before-1970', { written: text, column: 'taken' });
  else note('date-only', { on });
  return { at: null, on };
}

function inRange(at: number, column: string, written: string, now: number, note: Note): boolean {
  if (at > now + aheadMs) note('ahead', { written, column });
  else if (at < 0) note('before-1970', { written, column });
  else return true;
  return false;
}

/** A day of reporting without a time stands for its end; no reporting time at all for the moment of taking. */
function reportedOf(
  readTime: TimeReader,
  text: string,
  taken: Taken | null,
  rules: RowRules,
  note: Note,
): number | null {
  const { now, mapping } = rules;
  if (text === '') {
    if (!taken) return null;
    return taken.at ?? Math.min(now, endOfDay(taken.on, mapping.zone));
  }
  const read = readTime(text);
  let at: number;
  if (read.ok) at = read.at;
  else if (read.code === 'no-time-of-day')
    at = Math.min(endOfDay(String(read.figures.on), mapping.zone), now);
  else {
    note(read.code, { ...read.figures, written: text, column: 'reported' });
    return null;
  }
  if (!inRange(at, 'reported', text, now, note)) return null;
  if (taken && (taken.at === null ? dayOn(at, mapping.zone) < taken.on : at < taken.at)) {
    note('reported-before-taken', { reported: text });
  }
  return at;
}

function valueOf(
  read: ReturnType<ReturnType<typeof createValueReader>>,
  written: string,
  note: Note,
): Pick<SampleDraft, 'value' | 'qualifier'> | null {
  if (read.kind === 'missing') note('no-value', { written: written.trim() });
  else if (read.kind === 'text') note('text-value', { written: written.trim().slice(0, 60) });
  else if (read.kind === 'value') return { value: read.value, qualifier: null };
  else {
    note('censored', { qualifier: read.qualifier });
    return { value: read.value, qualifier: read.qualifier };
  }
  return null;
}

/** The unit in the spelling of the site; what differs from it is refused, never converted silently. */
function unitOf(stated: string, expected: readonly string[], note: Note): string {
  if (expected.length === 0) return stated;
  const known = expected.find((unit) => unitKey(unit) === unitKey(stated));
  if (known !== undefined) return known;
  const wanted = expected.join(' or ');
  if (stated === '') note('no-unit', { expected: wanted });
  else note('other-unit', { unit: stated.slice(0, 40), expected: wanted });
  return stated;
}
