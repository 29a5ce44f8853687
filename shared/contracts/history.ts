import { z } from 'zod';
import { endpoint, idNumber, ids, isoInstant, nothing } from './endpoint.ts';
import { zone } from './sites.ts';

export const dateOrder = z.enum(['iso', 'day-month-year', 'month-day-year', 'epoch-ms']);
/** History also comes with seconds since 1970, as data loggers write it. */
export const historyDateOrder = z.enum([...dateOrder.options, 'epoch-s']);
export type HistoryDateOrder = z.infer<typeof historyDateOrder>;
export const delimiter = z.enum([',', ';', '\t', '|']);
export type Delimiter = z.infer<typeof delimiter>;
export const decimalSign = z.enum(['.', ',']);
export type DecimalSign = z.infer<typeof decimalSign>;

/** Columns count from 0. */
const column = z.number().int().min(0);
/** 1-based line of the header in the file. */
const headerLine = z.number().int().min(1).max(100);
const shared = {
  delimiter,
  decimal: decimalSign,
  headerLine,
  dateOrder: historyDateOrder,
  /** Zone of times that carry no offset. */
  zone,
};
const tagColumns = z.array(z.object({ column, tagId: idNumber })).max(2000);

/** How a file of tag history is read. */
export const historyLayout = z.discriminatedUnion('shape', [
  z.object({
    shape: z.literal('wide'),
    ...shared,
    timeColumn: column,
    columns: tagColumns.min(1, 'Choose a tag for at least one column.'),
  }),
  z.object({
    shape: z.literal('long'),
    ...shared,
    timeColumn: column,
    tagColumn: column,
    valueColumn: column,
    qualityColumn: column.nullable(),
  }),
]);
export type HistoryLayout = z.infer<typeof historyLayout>;

/** A layout as far as the file itself gives it away; what is null a person must say. */
export const historyProposal = z.object({
  shape: z.enum(['wide', 'long']),
  ...shared,
  timeColumn: column.nullable(),
  columns: tagColumns,
  tagColumn: column.nullable(),
  valueColumn: column.nullable(),
  qualityColumn: column.nullable(),
});
export type HistoryProposal = z.infer<typeof historyProposal>;

export const historyImport = z.object({
  id: idNumber,
  siteId: idNumber,
  fileName: z.string(),
  fileSize: z.number().int(),
  state: z.enum(['uploaded', 'waiting', 'running', 'done', 'failed', 'cancelled']),
  layout: historyLayout.nullable(),
  replaceExisting: z.boolean(),
  added: z.number().int(),
  unchanged: z.number().int(),
  replaced: z.number().int(),
  keptDifferent: z.number().int(),
  refused: z.number().int(),
  firstAt: isoInstant.nullable(),
  lastAt: isoInstant.nullable(),
  runId: idNumber.nullable(),
  createdBy: z.string(),
  createdAt: isoInstant,
  finishedAt: isoInstant.nullable(),
});
export type HistoryImport = z.infer<typeof historyImport>;

export const textEncoding = z.enum(['utf-8', 'utf-16le', 'utf-16be', 'windows-1252']);
export type TextEncoding = z.infer<typeof textEncoding>;

/** What the file leaves open: both readings of the dates fit, or commas that may be decimal signs or thousands. */
export const historyDoubt = z.enum(['date-order', 'decimal']);
export type HistoryDoubt = z.infer<typeof historyDoubt>;

/** A name in the file that is no tag of the site. `column` is its column; null where names stand in rows. */
export const unknownTag = z.object({
  column: z.number().int().nullable(),
  name: z.string(),
  unit: z.string(),
});
export type UnknownTag = z.infer<typeof unknownTag>;

/** The head of an uploaded file and how it would be read. */
export const historyPreview = z.object({
  encoding: textEncoding,
  header: z.array(z.string()),
  rows: z.array(z.object({ line: z.number().int(), cells: z.array(z.string()) })),
  proposed: historyProposal,
  /** They can be made into tags on the spot, or left out. */
  unknownTags: z.array(unknownTag),
  /** Tags named in the file whose readings Cupel computes itself; they are not taken from a file. */
  computedTags: z.array(z.string()),
  doubts: z.array(historyDoubt),
  /** The same file, imported to its end before. */
  sameAs: z.object({ importId: idNumber, at: isoInstant }).nullable(),
});
export type HistoryPreview = z.infer<typeof historyPreview>;

export const historyRefusalCode = z.enum([
  'not-a-number',
  'decimal-sign',
  'not-finite',
  'unknown-quality',
  'unknown-tag',
  'computed-tag',
  'cell-count',
  'time-missing',
  'time-unreadable',
  'time-without-clock',
  'no-such-time',
  'hour-skipped',
  'hour-twice',
  'before-1970',
  'in-the-future',
]);
export type HistoryRefusalCode = z.infer<typeof historyRefusalCode>;

/** One place in the file where something was refused: its line from 1, its column from 0, the text found there. */
export const historyRefusal = z.object({
  line: z.number().int(),
  column: z.number().int(),
  code: historyRefusalCode,
  found: z.string(),
});
export type HistoryRefusal = z.infer<typeof historyRefusal>;

const exampleImport: HistoryImport = {
  id: 1,
  siteId: 1,
  fileName: 'furnace-1-november.csv',
  fileSize: 3_058_235,
  state: 'uploaded',
  layout: null,
  replaceExisting: false,
  added: 0,
  unchanged: 0,
  replaced: 0,
  keptDifferent: 0,
  refused: 0,
  firstAt: null,
  lastAt: null,
  runId: null,
  createdBy: 'Marco Castellane',
  createdAt: '2026-11-30T07:00:00.000Z',
  finishedAt: null,
};
const examplePreview: HistoryPreview = {
  encoding: 'utf-8',
  header: ['time', 'TI-1401', 'FI-1410 [t/h]'],
  rows: [{ line: 2, cells: ['2026-11-29T14:00:00Z', '301.4', '8.2'] }],
  proposed: {
    shape: 'wide',
    delimiter: ',',
    decimal: '.',
    headerLine: 1,
    dateOrder: 'iso',
    zone: 'Europe/Copenhagen',
    timeColumn: 0,
    columns: [{ column: 1, tagId: 1 }],
    tagColumn: null,
    valueColumn: null,
    qualityColumn: null,
  },
  unknownTags: [{ column: 2, name: 'FI-1410', unit: 't/h' }],
  computedTags: [],
  doubts: [],
  sameAs: null,
};
const withPreview = z.object({ import: historyImport, preview: historyPreview });

export const history = {
  'history.list': endpoint({
    method: 'GET',
    path: '/sites/:siteId/history-imports',
    kind: 'json',
    summary: 'Imports of tag history, newest first',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    reply: z.object({ rows: z.array(historyImport) }),
    example: { rows: [exampleImport] },
  }),
  'history.upload': endpoint({
    method: 'POST',
    path: '/sites/:siteId/history-imports',
    kind: 'upload',
    summary:
      'Upload a CSV of tag history (wide: a column per tag; long: a row per reading); nothing is imported yet',
    access: { may: 'history.import', on: 'site' },
    params: ids('siteId'),
    maxBytes: 4 * 1024 ** 3,
    reply: withPreview,
    example: { import: exampleImport, preview: examplePreview },
  }),
  'history.get': endpoint({
    method: 'GET',
    path: '/history-imports/:historyImportId',
    kind: 'json',
    summary: 'An import of tag history with its counts and first refused values, and how its file reads',
    access: { may: 'site.view', on: 'historyImport' },
    params: ids('historyImportId'),
    query: z.object({
      /** Read the head of the file this way instead of the proposed one. */
      delimiter: delimiter.optional(),
      headerLine: z.coerce.number().pipe(headerLine).optional(),
    }),
    reply: z.object({
      import: historyImport,
      preview: historyPreview.nullable(),
      /** The first thousand places, in the order of the file. */
      refusals: z.array(historyRefusal),
    }),
    example: { import: exampleImport, preview: examplePreview, refusals: [] },
  }),
  'history.start': endpoint({
    method: 'POST',
    path: '/history-imports/:historyImportId/start',
    kind: 'json',
    summary: 'Read the file as laid out; the run tells how far it is',
    access: { may: 'history.import', on: 'historyImport' },
    params: ids('historyImportId'),
    body: z.object({ layout: historyLayout, replaceExisting: z.boolean() }),
    reply: historyImport,
    example: exampleImport,
  }),
  'history.resume': endpoint({
    method: 'POST',
    path: '/history-imports/:historyImportId/resume',
    kind: 'json',
    summary: 'Go on with an import that failed or was cancelled, from the last finished chunk',
    access: { may: 'history.import', on: 'historyImport' },
    params: ids('historyImportId'),
    body: nothing,
    reply: historyImport,
    example: exampleImport,
  }),
};
