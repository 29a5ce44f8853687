import { z } from 'zod';
import { endpoint, idNumber, ids, isoInstant, nothing } from './endpoint.ts';
import { zone } from './sites.ts';

export const dateOrder = z.enum(['iso', 'day-month-year', 'month-day-year', 'epoch-ms']);
export const delimiter = z.enum([',', ';', '\t', '|']);
export const decimalSign = z.enum(['.', ',']);

const shared = {
  delimiter,
  decimal: decimalSign,
  /** 1-based line of the header. */
  headerLine: z.number().int().min(1).max(100),
  timeColumn: z.number().int().min(0),
  dateOrder,
  /** Zone of times that carry no offset. */
  zone,
};

/** How a file of tag history is read. Columns count from 0. */
export const historyLayout = z.discriminatedUnion('shape', [
  z.object({
    shape: z.literal('wide'),
    ...shared,
    columns: z
      .array(z.object({ column: z.number().int().min(0), tagId: idNumber }))
      .min(1, 'Choose a tag for at least one column.')
      .max(2000),
  }),
  z.object({
    shape: z.literal('long'),
    ...shared,
    tagColumn: z.number().int().min(0),
    valueColumn: z.number().int().min(0),
    qualityColumn: z.number().int().min(0).nullable(),
  }),
]);
export type HistoryLayout = z.infer<typeof historyLayout>;

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

/** The head of an uploaded file and how it would be read. */
export const historyPreview = z.object({
  header: z.array(z.string()),
  rows: z.array(z.array(z.string())),
  proposed: historyLayout.nullable(),
  /** Header names that match no tag of the site: they can be made into tags on the spot, or left out. */
  unknownTags: z.array(z.string()),
  /** The same file, committed before. */
  sameAs: z.object({ importId: idNumber, at: isoInstant }).nullable(),
});
export type HistoryPreview = z.infer<typeof historyPreview>;

export const historyRefusal = z.object({
  line: z.number().int(),
  column: z.number().int(),
  code: z.string(),
  found: z.string(),
});

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
  header: ['time', 'TI-1401'],
  rows: [['2026-11-29T14:00:00Z', '301.4']],
  proposed: null,
  unknownTags: [],
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
    summary: 'Upload a CSV of tag history (wide: a column per tag; long: a row per reading); nothing is imported yet',
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
    summary: 'An import of tag history with its counts and first refused values',
    access: { may: 'site.view', on: 'historyImport' },
    params: ids('historyImportId'),
    reply: z.object({
      import: historyImport,
      preview: historyPreview.nullable(),
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
