import type {
  SampleCounts,
  SampleMapping,
  SampleOutcome,
  SampleReason,
  SampleRow,
} from '../contracts/sample-import.ts';
import { cellAt, isFlag, type ReadRow, type SampleDraft } from './sample-row.ts';
import { type SampleRegistry, unitKey } from './sample-registry.ts';

/** A result that stands in the registry under the number of a row. Instants are UTC milliseconds. */
export interface StoredSample {
  samplePointId: number;
  sampleNumber: string;
  /** False: stored with a method where the file has none, or the other way round. */
  sameMethod: boolean;
  takenAt: number | null;
  takenOn: string | null;
  value: number;
  qualifier: '<' | '>' | null;
  unit: string;
}

export interface DecidedRow extends ReadRow {
  outcome: SampleOutcome;
}

/** What makes a sample one and the same: the point and the sample number. */
export const sampleKey = (sample: Pick<SampleDraft, 'samplePointId' | 'sampleNumber'>): string =>
  `${sample.samplePointId} ${sample.sampleNumber}`;

/**
 * Decides what becomes of each row, knowing the others and what is stored: the same sample twice in a file counts once;
 * two results for one sample are refused, both; a result stored before is skipped when identical and never overwritten.
 * @param rows as read one by one, in file order
 * @param stored by {@link sampleKey}
 * @returns the rows in file order, each with its outcome and all its reasons
 */
export function decideRows(
  rows: readonly ReadRow[],
  stored: ReadonlyMap<string, StoredSample>,
): DecidedRow[] {
  const repeats = findRepeats(rows);
  return rows.map((read) => {
    const reasons = [...read.reasons, ...(repeats.get(read) ?? [])];
    const before = read.sample ? stored.get(sampleKey(read.sample)) : undefined;
    if (read.sample && before) reasons.push(besideStored(read.sample, before));
    return { ...read, reasons, outcome: outcomeOf(reasons) };
  });
}

function outcomeOf(reasons: readonly SampleReason[]): SampleOutcome {
  const skips = reasons.some(({ code }) => code === 'same-row' || code === 'unchanged');
  const refuses = reasons.some(({ code }) => !isFlag(code) && code !== 'same-row' && code !== 'unchanged');
  if (refuses) return 'refused';
  if (skips) return 'skipped';
  return reasons.length > 0 ? 'added-with-flag' : 'added';
}

type Stated = Pick<SampleDraft, 'takenAt' | 'takenOn' | 'value' | 'qualifier' | 'unit'>;

function difference(a: Stated, b: Stated): 'value' | 'unit' | 'time' | null {
  if (a.value !== b.value || a.qualifier !== b.qualifier) return 'value';
  if (a.unit !== b.unit && unitKey(a.unit) !== unitKey(b.unit)) return 'unit';
  return a.takenAt === b.takenAt && a.takenOn === b.takenOn ? null : 'time';
}

function findRepeats(rows: readonly ReadRow[]): Map<ReadRow, SampleReason[]> {
  const firsts = new Map<string, ReadRow>();
  const found = new Map<ReadRow, SampleReason[]>();
  for (const read of rows) {
    if (!read.sample) continue;
    const key = sampleKey(read.sample);
    const first = firsts.get(key);
    if (!first) firsts.set(key, read);
    else if (difference(first.sample!, read.sample) === null) {
      found.set(read, [{ code: 'same-row', figures: { line: first.row.line } }]);
    } else {
      found.set(read, [otherValue(first)]);
      if (!found.has(first)) found.set(first, [otherValue(read)]);
    }
  }
  return found;
}

const otherValue = ({ row, sample }: ReadRow): SampleReason => ({
  code: 'other-value-in-file',
  figures: { line: row.line, value: sample!.asWritten.trim(), unit: sample!.unit },
});

function besideStored(sample: SampleDraft, before: StoredSample): SampleReason {
  const differs = before.sameMethod ? difference(sample, before) : 'method';
  if (differs === null) return { code: 'unchanged', figures: {} };
  const taken = before.takenAt === null ? before.takenOn! : new Date(before.takenAt).toISOString();
  const { value, unit, qualifier } = before;
  return { code: 'stored-differs', figures: { differs, value, unit, qualifier: qualifier ?? '', taken } };
}

/** Rows by outcome; `added` holds the flagged ones too. */
export function countOutcomes(rows: readonly Pick<DecidedRow, 'outcome'>[]): SampleCounts {
  const by: Record<SampleOutcome, number> = {
    added: 0,
    'added-with-flag': 0,
    held: 0,
    skipped: 0,
    refused: 0,
  };
  for (const { outcome } of rows) by[outcome] += 1;
  const flagged = by['added-with-flag'];
  return {
    rows: rows.length,
    added: by.added + flagged,
    flagged,
    held: by.held,
    skipped: by.skipped,
    refused: by.refused,
  };
}

const shownOrder: SampleOutcome[] = ['refused', 'held', 'added-with-flag', 'skipped', 'added'];

/** The rows to look at: refused first, then held, flagged, skipped, added; at most `most` of each, in file order. */
export function rowsToShow(rows: readonly DecidedRow[], most: number): DecidedRow[] {
  const by = new Map<SampleOutcome, DecidedRow[]>(shownOrder.map((outcome) => [outcome, []]));
  for (const row of rows) {
    const list = by.get(row.outcome)!;
    if (list.length < most) list.push(row);
  }
  return shownOrder.flatMap((outcome) => by.get(outcome)!);
}

/** A decided row as it is shown: what was written beside how it is read. */
export function showRow(decided: DecidedRow, mapping: SampleMapping, registry: SampleRegistry): SampleRow {
  const { row, sample, taken, outcome, reasons, samplePointId } = decided;
  const { columns } = mapping;
  const point = cellAt(row.cells, columns.samplePoint);
  const named = [...registry.pointsByName.values()].find(({ id }) => id === samplePointId);
  return {
    line: row.line,
    outcome,
    sampleNumber: sample?.sampleNumber ?? cellAt(row.cells, columns.sampleNumber),
    taken: cellAt(row.cells, columns.takenAt),
    takenAt: taken?.at == null ? null : new Date(taken.at).toISOString(),
    takenOn: taken?.on ?? null,
    value: cellAt(row.cells, columns.value),
    unit: sample?.unit ?? (cellAt(row.cells, columns.unit) || mapping.unit),
    samplePoint: named?.name ?? point,
    goesTo:
      samplePointId === null
        ? []
        : (registry.sensorsAt.get(samplePointId) ?? []).map(({ tagName }) => tagName),
    reasons,
  };
}
