import {
  type SampleCounts,
  type SampleOutcome,
  type SampleReason,
  skipCodes,
} from '../contracts/sample-import.ts';
import { findFar } from './sample-far.ts';
import { areReplicates, type Averaged, averageOf } from './sample-replicates.ts';
import { isFlag, isHold, type ReadRow, type SampleDraft } from './sample-row.ts';
import { unitKey } from './sample-registry.ts';

export { rowsToShow, showRow } from './sample-shown.ts';

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
  /** Added before, by the very file. */
  stored?: boolean;
}

/** Does the sample of a row go in when its file is added? */
export const isToAdd = ({ outcome, sample, stored }: DecidedRow): boolean =>
  sample !== null && !stored && outcome !== 'refused' && outcome !== 'skipped';

/** What makes a sample one and the same: the point and the sample number. */
export const sampleKey = (sample: Pick<SampleDraft, 'samplePointId' | 'sampleNumber'>): string =>
  `${sample.samplePointId} ${sample.sampleNumber}`;

/** What is known of the method and of the results before a file; all in the unit of the method. */
export interface Beside {
  repeatability: number | null;
  reproducibility: number | null;
  /** Last accepted results by sample point, in the order they were taken. */
  lastValues: ReadonlyMap<number, readonly number[]>;
}
const nothingKnown: Beside = { repeatability: null, reproducibility: null, lastValues: new Map() };
const skips = new Set<string>(skipCodes);

/**
 * Decides what becomes of each row, knowing the others and what is stored: the same sample twice in a file counts once;
 * several results of one sample become their mean, held where they differ by more than the repeatability allows; a
 * result far from the last ones is held; a result stored before is skipped when identical and never overwritten.
 * @param rows as read one by one, in file order
 * @param stored by {@link sampleKey}
 * @returns the rows in file order, each with its outcome and all its reasons
 */
export function decideRows(
  rows: readonly ReadRow[],
  stored: ReadonlyMap<string, StoredSample>,
  beside: Beside = nothingKnown,
): DecidedRow[] {
  const repeats = resolveRepeats(rows, beside.repeatability);
  const known = rows.map((read) => {
    const repeat = repeats.get(read);
    if (!repeat) return read;
    return { ...read, reasons: [...read.reasons, ...repeat.reasons], sample: repeat.sample ?? read.sample };
  });
  const open = (read: ReadRow) =>
    read.sample !== null &&
    read.reasons.every(({ code }) => isFlag(code) || isHold(code)) &&
    !stored.has(sampleKey(read.sample));
  const far = findFar(known.filter(open), beside);
  return known.map((read) => {
    const reasons = reasonsOf(read, far.get(read), stored);
    return { ...read, reasons, outcome: outcomeOf(reasons) };
  });
}

function reasonsOf(
  { sample, reasons }: ReadRow,
  far: SampleReason | undefined,
  stored: ReadonlyMap<string, StoredSample>,
): SampleReason[] {
  if (far) return [...reasons, far];
  const before = sample && stored.get(sampleKey(sample));
  if (!before || reasons.some(({ code }) => skips.has(code))) return reasons;
  return [...reasons.filter(({ code }) => !isHold(code)), besideStored(sample, before)];
}

function outcomeOf(reasons: readonly SampleReason[]): SampleOutcome {
  if (reasons.some(({ code }) => !isFlag(code) && !isHold(code) && !skips.has(code))) return 'refused';
  if (reasons.some(({ code }) => skips.has(code))) return 'skipped';
  if (reasons.some(({ code }) => isHold(code))) return 'held';
  return reasons.length > 0 ? 'added-with-flag' : 'added';
}

type Stated = Pick<SampleDraft, 'takenAt' | 'takenOn' | 'value' | 'qualifier' | 'unit'>;

function difference(a: Stated, b: Stated): 'value' | 'unit' | 'time' | null {
  if (a.value !== b.value || a.qualifier !== b.qualifier) return 'value';
  if (a.unit !== b.unit && unitKey(a.unit) !== unitKey(b.unit)) return 'unit';
  return a.takenAt === b.takenAt && a.takenOn === b.takenOn ? null : 'time';
}

function resolveRepeats(rows: readonly ReadRow[], repeatability: number | null): Map<ReadRow, Averaged> {
  const firsts = new Map<string, ReadRow>();
  const groups = new Map<string, ReadRow[]>();
  for (const read of rows) {
    if (!read.sample) continue;
    const key = sampleKey(read.sample);
    const first = firsts.get(key);
    if (!first) firsts.set(key, read);
    else groups.set(key, [...(groups.get(key) ?? [first]), read]);
  }
  const found = new Map<ReadRow, Averaged>();
  for (const group of groups.values()) resolveGroup(group, repeatability, found);
  return found;
}

/** Several rows of one sample: the same once more, single results to be averaged, or results that contradict each other. */
function resolveGroup(
  group: readonly ReadRow[],
  repeatability: number | null,
  found: Map<ReadRow, Averaged>,
): void {
  const first = group[0]!;
  const same = (line: number): Averaged => ({ reasons: [{ code: 'same-row', figures: { line } }] });
  const differs = group.some(({ sample }) => difference(first.sample!, sample!) === 'value');
  const single: ReadRow[] = [];
  const met = new Map<string, number>();
  for (const read of group) {
    const text = read.row.cells.join('\u0000');
    const line = met.get(text);
    if (line === undefined) {
      met.set(text, read.row.line);
      single.push(read);
    } else found.set(read, same(line));
  }
  if (differs && areReplicates(single)) {
    for (const [index, averaged] of averageOf(single, repeatability).entries())
      found.set(single[index]!, averaged);
    return;
  }
  for (const read of single.slice(1)) {
    if (difference(first.sample!, read.sample!) === null) found.set(read, same(first.row.line));
    else {
      found.set(read, { reasons: [otherValue(first)] });
      if (!found.has(first)) found.set(first, { reasons: [otherValue(read)] });
    }
  }
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
