import { z } from 'zod';
import { idNumber, isoInstant, version } from './endpoint.ts';
import { dateOrder, decimalSign, delimiter } from './history.ts';
import { importExtras, mendable } from './sample-mends.ts';
import { fileNotice, fileEvidence } from './sample-evidence.ts';
import { zone } from './sites.ts';

const column = z.number().int().min(0).max(999);
const columns = z.object({
  sampleNumber: column.nullable(),
  takenAt: column,
  /** Time of day, where it stands apart from the day. */
  takenTime: column.nullable(),
  /** When gathering began, of composites; they end at `takenAt`. */
  takenFrom: column.nullable(),
  reportedAt: column.nullable(),
  value: column,
  unit: column.nullable(),
  samplePoint: column.nullable(),
  analyst: column.nullable(),
});

/** How dates are written; `serial-days` are days since 30 December 1899, as spreadsheets count them. */
export const sampleDateOrder = z.enum([...dateOrder.options, 'serial-days']);
export type SampleDateOrder = z.infer<typeof sampleDateOrder>;

/**
 * How a file of samples is read; columns count from 0. What no column says, the person says for the whole file. Without
 * a sample number a sample is numbered by the time it was taken; without a reporting time it counts as reported then.
 */
export const sampleMapping = z.object({
  /** Name of the sheet of a workbook; null for a text file. */
  sheet: z.string().min(1, 'Choose a sheet.').max(100).nullable(),
  /** What parts the columns of a text file; of no account in a workbook. */
  delimiter,
  decimal: decimalSign,
  headerLine: z.number().int().min(1).max(100),
  dateOrder: sampleDateOrder,
  zone,
  columns,
  samplePointId: idNumber.nullable(),
  methodId: idNumber.nullable(),
  /** Unit of values that no column states; empty for pure numbers. */
  unit: z.string().trim().max(20, 'Keep the unit under 20 characters.'),
  /** Words that stand where there is no result (yet), in any case. */
  missingWords: z
    .array(z.string().trim().min(1, 'Leave out empty words.').max(40, 'Keep each word under 40 characters.'))
    .max(50, 'Fifty words are the most.'),
});
export type SampleMapping = z.infer<typeof sampleMapping>;

/** What the file itself shows of its mapping. Null where it leaves open what a person must then say. */
export const proposedMapping = sampleMapping.extend({
  decimal: decimalSign.nullable(),
  dateOrder: sampleDateOrder.nullable(),
  zone: zone.nullable(),
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

/** A sample goes in with these, and carries them as flags. */
export const flagCodes = [
  'censored',
  'date-only',
  'composite',
  'converted',
  'averaged',
  'like-report-time',
] as const;
/** A sample goes in with these, but is held: not counted until somebody decides. */
export const holdCodes = ['far-from-last', 'beyond-repeatability', 'repeatability-unknown'] as const;
/** Nothing is lost by passing over a row with these. */
export const skipCodes = [
  'same-row',
  'unchanged',
  'averaged-into',
  'units-row',
  'repeated-header',
  'summary-row',
  'note-row',
  'left-out',
] as const;
export const refusalCodes = [
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
  'ends-before-start',
  'long-composite',
  'no-point',
  'unknown-point',
  'no-unit',
  'other-unit',
  'long-number',
  'damaged-number',
  'other-value-in-file',
  'stored-differs',
] as const;
export const sampleReasonCodes = [...refusalCodes, ...holdCodes, ...flagCodes, ...skipCodes] as const;
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
  /** It was added before, by this very file. */
  stored: z.boolean(),
  /** What the file has in the parts that a person wrote anew. */
  inFile: z.partialRecord(mendable, z.string()),
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
    /** Null for a workbook. */
    encoding: z.enum(encodings).nullable(),
    /**
     * The first lines of the file, to try another way of reading them; of a workbook those of the sheet that is read, with
     * tabs between the cells.
     */
    head: z.string(),
    /** The sheets of a workbook, each with its first lines; empty for a text file. */
    sheets: z.array(z.object({ name: z.string(), head: z.string() })),
    proposed: proposedMapping,
    /** What in the file speaks for reading it so. */
    because: z.array(fileEvidence),
  }),
  /** Refused first, then held, flagged, skipped, added; the first 200 of each. */
  rows: z.array(sampleRow),
  /** Changes when the outcome of any row does; a commit says which was seen. Null while the mapping is open. */
  outcome: z.string().nullable(),
  /** What strikes in the file as a whole, where its rows may yet be right. */
  notices: z.array(fileNotice),
  sameAs: z.object({ importId: idNumber, at: isoInstant }).nullable(),
  ...importExtras,
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
    sheets: [],
    because: [{ of: 'decimal', code: 'decimal', figures: { sign: ',', count: 1, other: 0, all: 1 } }],
    proposed: {
      sheet: null,
      delimiter: ';',
      decimal: ',',
      headerLine: 1,
      dateOrder: 'day-month-year',
      zone: 'Europe/Copenhagen',
      columns: {
        sampleNumber: 0,
        takenAt: 1,
        takenTime: null,
        takenFrom: null,
        reportedAt: null,
        value: 2,
        unit: 3,
        samplePoint: 4,
        analyst: null,
      },
      samplePointId: null,
      methodId: 1,
      unit: '',
      missingWords: ['n/a', 'pend'],
    },
  },
  rows: [],
  outcome: null,
  notices: [],
  sameAs: null,
  mends: {},
  recognised: null,
  moreToAdd: 0,
  receipt: null,
};
