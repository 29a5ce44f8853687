import type { SampleReason } from '../contracts/sample-import.ts';
import type { ReadRow, SampleDraft } from './sample-row.ts';

/**
 * Factors of the critical range at 95 % for two to four results, times the repeatability standard deviation.
 * Source: ISO 5725-6, table of f(n); values from memory, checked by simulation in the tests.
 */
const rangeFactors: Readonly<Record<number, number>> = { 2: 2.8, 3: 3.3, 4: 3.6 };
const hair = 1 + 1e-9;

/** What becomes of one row of a set of results for the same sample. */
export interface Averaged {
  /** The sample with the mean, for the first row of the set. */
  sample?: SampleDraft;
  reasons: SampleReason[];
}

const mean = (values: readonly number[]): number =>
  Number((values.reduce((sum, value) => sum + value, 0) / values.length).toPrecision(12));

/** Single results of one sample, by one analyst, at one time, in one unit, none beyond the method's range. */
export function areReplicates(rows: readonly ReadRow[]): boolean {
  const [first, ...others] = rows.map(({ sample }) => sample!);
  return (
    first!.qualifier === null &&
    others.every(
      (sample) =>
        sample.qualifier === null &&
        sample.takenAt === first!.takenAt &&
        sample.takenOn === first!.takenOn &&
        sample.unit === first!.unit &&
        sample.compositeMs === first!.compositeMs &&
        sample.analyst.toLowerCase() === first!.analyst.toLowerCase(),
    )
  );
}

/**
 * The range that results of one sample may have under repeatability conditions: r for two, the critical range of
 * ISO 5725-6 for three and four.
 * @param repeatability r, the 95 % limit for the difference of two results
 * @returns null for more results than the table is kept for here
 */
export function criticalRange(count: number, repeatability: number): number | null {
  const factor = rangeFactors[count];
  return factor === undefined ? null : (repeatability * factor) / rangeFactors[2]!;
}

/** The mean as the laboratory stated it, where it stated all in one unit of its own. */
function statedBy(samples: readonly SampleDraft[]): Pick<SampleDraft, 'statedUnit' | 'statedValue'> {
  const { statedUnit } = samples[0]!;
  if (statedUnit === null || samples.some((sample) => sample.statedUnit !== statedUnit))
    return { statedUnit: null, statedValue: null };
  return { statedUnit, statedValue: mean(samples.map(({ statedValue }) => statedValue!)) };
}

/**
 * Results of one sample become one: their mean where they agree within the method's repeatability, else their mean held
 * until somebody decides. All single results are kept.
 * @param rows of one sample that differ in nothing but the value, two at least
 * @param repeatability r of the method, in its unit; null where it is not known
 * @returns for each row, in order: the first carries the sample
 */
export function averageOf(rows: readonly ReadRow[], repeatability: number | null): Averaged[] {
  const samples = rows.map(({ sample }) => sample!);
  const values = samples.map(({ value }) => value);
  const range = Number((Math.max(...values) - Math.min(...values)).toPrecision(12));
  const limit = repeatability === null ? null : criticalRange(values.length, repeatability);
  const written = samples.map(({ asWritten }) => asWritten.trim()).join('; ');
  const figures = {
    values: written,
    count: values.length,
    unit: samples[0]!.unit,
    rows: rows.map(({ row }) => row.line).join(', '),
  };
  const reason: SampleReason =
    limit === null
      ? { code: 'repeatability-unknown', figures: { ...figures, known: repeatability === null ? 0 : 1 } }
      : range <= limit * hair
        ? { code: 'averaged', figures: { ...figures, mean: mean(values) } }
        : { code: 'beyond-repeatability', figures: { ...figures, range, limit } };
  const first: SampleDraft = {
    ...samples[0]!,
    value: mean(values),
    reportedAt: Math.max(...samples.map(({ reportedAt }) => reportedAt)),
    asWritten: written,
    replicates: values,
    ...statedBy(samples),
  };
  const into: SampleReason = { code: 'averaged-into', figures: { line: rows[0]!.row.line } };
  return rows.map((_, index) => (index === 0 ? { sample: first, reasons: [reason] } : { reasons: [into] }));
}
