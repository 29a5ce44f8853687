import { z } from 'zod';
import { idNumber, isoInstant, version } from './endpoint.ts';
import { dateOrder, decimalSign, delimiter } from './history.ts';
import { zone } from './sites.ts';

const column = z.number().int().min(0).max(999);
const columns = z.object({
  sampleNumber: column.nullable(),
  takenAt: column,
  reportedAt: column.nullable(),
  value: column,
  unit: column.nullable(),
  samplePoint: column.nullable(),
});

/**
 * How a file of samples is read; columns count from 0. What no column says, the person says for the whole file. Without
 * a sample number a sample is numbered by the time it was taken; without a reporting time it counts as reported then.
 */
export const sampleMapping = z.object({
  delimiter,
  decimal: decimalSign,
  headerLine: z.number().int().min(1).max(100),
  dateOrder,
  zone,
  columns,
  samplePointId: idNumber.nullable(),
  methodId: idNumber.nullable(),
  /** Unit of values that no column states; empty for pure numbers. */
  unit: z.string().trim().max(20, 'Keep the unit under 20 characters.'),
});
export type SampleMapping = z.infer<typeof sampleMapping>;

/** What the file itself shows of its mapping. Null where it leaves open what a person must then say. */
export const proposedMapping = sampleMapping.extend({
  decimal: decimalSign.nullable(),
  dateOrder: dateOrder.nullable(),
  columns: columns.extend({ takenAt: column.nullable(), value: column.nullable() }),
  unit: z.string().nullable(),
});
export type ProposedMapping = z.infer<typeof proposedMapping>;

export const encodings = ['utf-8', 'utf-16le', 'utf-16be', 'windows-1252'] as const;

export const sampleOutcome = z.enum(['added', 'added-with-flag', 'held', 'skipped', 'refused']);
export type SampleOutcome = z.infer<typeof sampleOutcome>;

/** Rows by outcome. `added` holds the flagged ones too, so rows = added + held + skipped + refused. */
export const sampleCounts = z.object({
  rows: z.number().int(),
  added: z.number().int(),
  flagged: z.number().int(),
  held: z.number().int(),
  skipped: z.number().int(),
  refused: z.number().int(),
});
export type SampleCounts = z.infer<typeof sampleCounts>;

export const sampleReasonCodes = [
  'ragged',
  'no-value',
  'text-value',
  'no-time',
  'unreadable-time',
  'impossible-date',
  'impossible-time',
  'missing-hour',
  'double-hour',
  'ahead',
  'before-1970',
  'reported-before-taken',
  'no-point',
  'unknown-point',
  'no-unit',
  'other-unit',
  'long-number',
  'other-value-in-file',
  'stored-differs',
  'same-row',
  'unchanged',
  'censored',
  'date-only',
] as const;
export type SampleReasonCode = (typeof sampleReasonCodes)[number];

/** Why a row fares as it does, with figures; `shared/rules/sample-sentences.ts` says it in words. */
export const sampleReason = z.object({
  code: z.enum(sampleReasonCodes),
  figures: z.record(z.string(), z.union([z.string(), z.number()])),
});
export type SampleReason = z.infer<typeof sampleReason>;

/** One row of a dry run; `line` is the line of the file it begins on. `taken` and `value` are as written. */
export const sampleRow = z.object({
  line: z.number().int(),
  outcome: sampleOutcome,
  sampleNumber: z.string(),
  taken: z.string(),
  takenAt: isoInstant.nullable(),
  takenOn: z.string().nullable(),
  value: z.string(),
  unit: z.string(),
  samplePoint: z.string(),
  goesTo: z.array(z.string()),
  reasons: z.array(sampleReason),
});
export type SampleRow = z.infer<typeof sampleRow>;

export const sampleImport = z.object({
  id: idNumber,
  siteId: idNumber,
  fileName: z.string(),
  state: z.enum(['uploaded', 'committed', 'undone']),
  mapping: sampleMapping.nullable(),
  counts: sampleCounts.nullable(),
  version,
  createdBy: z.string(),
  createdAt: isoInstant,
  committedAt: isoInstant.nullable(),
  undoneAt: isoInstant.nullable(),
});
export type SampleImport = z.infer<typeof sampleImport>;

export const sampleImportView = z.object({
  import: sampleImport,
  preview: z.object({
    encoding: z.enum(encodings),
    /** The first lines of the file, to try another way of reading them. */
    head: z.string(),
    proposed: proposedMapping,
  }),
  /** Refused first, then held, flagged, skipped, added; the first 200 of each. */
  rows: z.array(sampleRow),
  /** Changes when the outcome of any row does; a commit says which was seen. Null while the mapping is open. */
  outcome: z.string().nullable(),
  sameAs: z.object({ importId: idNumber, at: isoInstant }).nullable(),
});
export type SampleImportView = z.infer<typeof sampleImportView>;

export const exampleImport: SampleImport = {
  id: 1,
  siteId: 1,
  fileName: 'furnace-pyrometry-wk48.csv',
  state: 'uploaded',
  mapping: null,
  counts: null,
  version: 1,
  createdBy: 'Tove Halbrook',
  createdAt: '2026-11-30T05:40:00.000Z',
  committedAt: null,
  undoneAt: null,
};
export const exampleView: SampleImportView = {
  import: exampleImport,
  preview: {
    encoding: 'utf-8',
    head: 'Probe no.;Taken;Reading;Unit;Point\nKX-0917-3;28.11.2026 06:00;1482,5;°C;KX-09\n',
    proposed: {
      delimiter: ';',
      decimal: ',',
      headerLine: 1,
      dateOrder: 'day-month-year',
      zone: 'Europe/Copenhagen',
      columns: { sampleNumber: 0, takenAt: 1, reportedAt: null, value: 2, unit: 3, samplePoint: 4 },
      samplePointId: null,
      methodId: 1,
      unit: '',
    },
  },
  rows: [],
  outcome: null,
  sameAs: null,
};
