import { flagCodes, holdCodes, type SampleReason } from '../contracts/sample-import.ts';
import type { Mendable, SampleMends } from '../contracts/sample-mends.ts';
import { damageOf } from './sample-damage.ts';
import { createJunkFinder } from './sample-junk.ts';
import { prepareReading, type Reading, type RowRules } from './sample-reading.ts';
import type { TableRow } from './sample-table.ts';
import { type Clock, compositeOf, type Note, reportedOf, type Taken, takenOf } from './sample-taken.ts';
import { inUnitOf } from './sample-unit.ts';
import { readTypedResult } from './typed-result.ts';

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
  /** What the laboratory wrote, where `value` and `unit` were converted from it. */
  statedUnit: string | null;
  statedValue: number | null;
  /** Single results of which `value` is the mean. */
  replicates: number[] | null;
  /** Of a composite: how long it was gathered, ending at `takenAt`. */
  compositeMs: number | null;
  /** Empty where no column names one. */
  analyst: string;
}

/** A row of the file with all that was found in it. `sample` is null where a reason refuses the row. */
export interface ReadRow {
  row: TableRow;
  samplePointId: number | null;
  taken: Taken | null;
  reasons: SampleReason[];
  sample: SampleDraft | null;
  /** What a person wrote in place of cells. */
  mend?: SampleMends[string] | undefined;
}

const longestNumber = 80;
const sameMinuteMs = 60_000;
const flags = new Set<string>(flagCodes);
const holds = new Set<string>(holdCodes);

/** A sample goes in with such a reason, and carries it as a flag. */
export const isFlag = (code: string): boolean => flags.has(code);

/** A sample goes in with such a reason, but is held. */
export const isHold = (code: string): boolean => holds.has(code);

/** The text of a cell that a role is mapped to; empty where the role has no column. */
export const cellAt = (cells: readonly string[], column: number | null): string =>
  column === null ? '' : (cells[column] ?? '').trim();

type TextOf = (part: Mendable) => string;

/**
 * Makes a reader that turns a row into a sample, or says everything that speaks against it. Rows are judged one by one
 * here; what only others can show (repeats, results stored before) is for `decideRows`.
 * @returns a function from a row, and its place below the header, to its sample and reasons: a row that is no sample or
 * is left out is skipped, flags let it in, any other reason refuses
 */
export function createRowReader(rules: RowRules): (row: TableRow, place: number) => ReadRow {
  const { mapping, header, mends = {} } = rules;
  const reading = prepareReading(rules);
  const junkIn = createJunkFinder(header, mapping.columns);
  return (row, place) => {
    const { cells } = row;
    const mend = mends[row.line];
    if (mend?.leaveOut) return withoutSample(row, mend, { code: 'left-out', figures: {} });
    const junk = mend ? null : junkIn(row, place);
    if (junk) return withoutSample(row, mend, junk);
    if (cells.length < reading.width || cells.slice(header.length).some((cell) => cell.trim() !== '')) {
      const figures = { expected: reading.width, found: cells.length };
      return withoutSample(row, mend, { code: 'ragged', figures });
    }
    return readSample(reading, row, mend);
  };
}

const withoutSample = (
  row: TableRow,
  mend: SampleMends[string] | undefined,
  reason: SampleReason,
): ReadRow => ({
  row,
  samplePointId: null,
  taken: null,
  reasons: [reason],
  sample: null,
  mend,
});

function readSample(reading: Reading, row: TableRow, mend: SampleMends[string] | undefined): ReadRow {
  const { rules, missing } = reading;
  const { columns } = rules.mapping;
  const reasons: SampleReason[] = [];
  const note: Note = (code, figures = {}) => reasons.push({ code, figures });
  const filled = (text: string) => (text !== '' && missing.has(text.toLowerCase()) ? '' : text);
  const textOf: TextOf = (part) => filled(mend?.[part]?.trim() ?? cellAt(row.cells, columns[part]));
  const samplePointId = pointOf(reading, textOf('samplePoint'), note);
  const times = timesOf(reading, row, mend, textOf, note);
  const asWritten = mend?.value ?? row.cells[columns.value] ?? '';
  const read = valueOf(reading, asWritten, mend?.value !== undefined, note);
  const stated = textOf('unit') || rules.mapping.unit;
  const expected = samplePointId === null ? [] : reading.unitsAt(samplePointId);
  const unit = inUnitOf(read?.value ?? null, stated, expected, note);
  const written = mend?.sampleNumber?.trim() ?? cellAt(row.cells, columns.sampleNumber);
  checkNumber(written, rules.mapping.sheet !== null, note);
  const { taken, reportedAt, compositeMs } = times;
  const refused = reasons.some(({ code }) => !isFlag(code));
  if (samplePointId === null || !taken || reportedAt === null || !read || !unit || refused) {
    return { row, samplePointId, taken, reasons, sample: null, mend };
  }
  const sample: SampleDraft = {
    samplePointId,
    sampleNumber: written || (taken.on ?? new Date(taken.at!).toISOString().replace('.000Z', 'Z')),
    takenAt: taken.at,
    takenOn: taken.on,
    reportedAt,
    qualifier: read.qualifier,
    asWritten,
    ...unit,
    replicates: null,
    compositeMs,
    analyst: cellAt(row.cells, columns.analyst),
  };
  return { row, samplePointId, taken, reasons, sample, mend };
}

function pointOf({ rules }: Reading, name: string, note: Note): number | null {
  const { mapping, registry } = rules;
  if (name === '') {
    if (mapping.samplePointId === null) note('no-point');
    return mapping.samplePointId;
  }
  const point = registry.pointsByName.get(name.replace(/\s+/g, ' ').toLowerCase());
  if (!point) note('unknown-point', { point: name });
  return point?.id ?? null;
}

interface Times {
  taken: Taken | null;
  reportedAt: number | null;
  compositeMs: number | null;
}

function timesOf(
  reading: Reading,
  { cells }: TableRow,
  mend: SampleMends[string] | undefined,
  textOf: TextOf,
  note: Note,
): Times {
  const { rules, others } = reading;
  const { columns } = rules.mapping;
  // What a person wrote is a whole time; a column with the time of day is then of no account.
  const ofDay = mend?.takenAt === undefined ? cellAt(cells, columns.takenTime) : '';
  const point = takenOf(clockFor(reading, mend?.takenAt), textOf('takenAt'), ofDay, note);
  const words = point?.at ? others.map((column) => cellAt(cells, column)) : [];
  const from = cellAt(cells, columns.takenFrom);
  const { taken, compositeMs } = compositeOf(reading.clock, from, words, point, note);
  const reported = textOf('reportedAt');
  const reportedAt = reportedOf(clockFor(reading, mend?.reportedAt), reported, taken, note);
  if (taken?.at != null) {
    const { uploadedAt } = rules;
    if (reported !== '' && reportedAt === taken.at) note('like-report-time', { like: 'report' });
    else if (uploadedAt !== undefined && Math.abs(taken.at - uploadedAt) < sameMinuteMs)
      note('like-report-time', { like: 'upload' });
  }
  return { taken, reportedAt, compositeMs };
}

/** Whatever the order of a file, a person may write an ISO time. */
const clockFor = ({ clock, isoClock }: Reading, mended: string | undefined): Clock =>
  mended !== undefined && /^\s*\d{4}-/.test(mended) ? isoClock : clock;

type Result = { value: number; qualifier: '<' | '>' | null };

function valueOf({ readValue }: Reading, written: string, typed: boolean, note: Note): Result | null {
  const read = readValue(written);
  if (read.kind === 'value') return { value: read.value, qualifier: null };
  if (read.kind === 'censored') {
    note('censored', { qualifier: read.qualifier });
    return { value: read.value, qualifier: read.qualifier };
  }
  const byHand = typed && read.kind === 'text' ? readTypedResult(written) : null;
  if (byHand?.ok) {
    if (byHand.qualifier) note('censored', { qualifier: byHand.qualifier });
    return { value: byHand.value, qualifier: byHand.qualifier };
  }
  if (read.kind === 'missing') note('no-value', { written: written.trim() });
  else note('text-value', { written: written.trim().slice(0, 60) });
  return null;
}

function checkNumber(written: string, inWorkbook: boolean, note: Note): void {
  if (written.length > longestNumber) note('long-number', { length: written.length, most: longestNumber });
  const damage = damageOf(written, inWorkbook);
  if (damage) note('damaged-number', { written: written.slice(0, 40), damage });
}
