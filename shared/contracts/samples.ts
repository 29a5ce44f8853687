import { z } from 'zod';
import { endpoint, idNumber, ids, idText, isoInstant, nothing, shortText, version } from './endpoint.ts';
import { pageQuery, paged } from './paging.ts';
import {
  exampleImport,
  exampleView,
  sampleImport,
  sampleImportView,
  sampleMapping,
} from './sample-import.ts';

export type { SampleCounts, SampleImport, SampleImportView, SampleMapping } from './sample-import.ts';

/** A soft sensor that the samples of a point go to. */
const goesTo = z.object({ softSensorId: idNumber, tagName: z.string() });

export const samplePoint = z.object({
  id: idNumber,
  siteId: idNumber,
  unitId: idNumber.nullable(),
  unitName: z.string().nullable(),
  name: z.string(),
  archivedAt: isoInstant.nullable(),
  version,
  goesTo: z.array(goesTo.extend({ unit: z.string(), methodId: idNumber.nullable() })),
});
export type SamplePoint = z.infer<typeof samplePoint>;

export const method = z.object({
  id: idNumber,
  siteId: idNumber,
  name: z.string(),
  quantity: z.string(),
  unit: z.string(),
  repeatability: z.number().nullable(),
  reproducibility: z.number().nullable(),
  archivedAt: isoInstant.nullable(),
  version,
});
export type LabMethod = z.infer<typeof method>;

export const sample = z.object({
  id: idNumber,
  siteId: idNumber,
  samplePointId: idNumber,
  samplePoint: z.string(),
  method: z.string().nullable(),
  sampleNumber: z.string(),
  version,
  takenAt: isoInstant.nullable(),
  takenOn: z.string().nullable(),
  reportedAt: isoInstant,
  value: z.number(),
  asWritten: z.string(),
  qualifier: z.enum(['<', '>']).nullable(),
  unit: z.string(),
  flags: z.array(z.string()),
  importId: idNumber.nullable(),
  goesTo: z.array(goesTo),
});
export type Sample = z.infer<typeof sample>;

const examplePoint: SamplePoint = {
  id: 1,
  siteId: 1,
  unitId: 1,
  unitName: 'Melting furnace 1',
  name: 'KX-09',
  archivedAt: null,
  version: 1,
  goesTo: [{ softSensorId: 1, tagName: 'TY-1402', unit: '°C', methodId: 1 }],
};
const exampleMethod: LabMethod = {
  id: 1,
  siteId: 1,
  name: 'Immersion pyrometry',
  quantity: 'temperature',
  unit: '°C',
  repeatability: 4,
  reproducibility: 9,
  archivedAt: null,
  version: 1,
};
const pointBody = z.object({ name: shortText('a name', 60), unitId: idNumber.nullable() });
const precision = z.number().min(0, 'A precision limit can’t be negative.').nullable();
const methodBody = z.object({
  name: shortText('a name', 80),
  quantity: z.string().trim().max(80),
  unit: z.string().trim().max(20),
  repeatability: precision,
  reproducibility: precision,
});

export const samples = {
  'samplePoints.list': endpoint({
    method: 'GET',
    path: '/sites/:siteId/sample-points',
    kind: 'json',
    summary: 'Sample points of a site',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    reply: z.object({ rows: z.array(samplePoint) }),
    example: { rows: [examplePoint] },
  }),
  'samplePoints.add': endpoint({
    method: 'POST',
    path: '/sites/:siteId/sample-points',
    kind: 'json',
    summary: 'Add a sample point',
    access: { may: 'samples.configure', on: 'site' },
    params: ids('siteId'),
    body: pointBody,
    reply: samplePoint,
    example: examplePoint,
  }),
  'samplePoints.change': endpoint({
    method: 'PUT',
    path: '/sample-points/:samplePointId',
    kind: 'json',
    summary: 'Rename a sample point, archive or take back',
    access: { may: 'samples.configure', on: 'samplePoint' },
    params: ids('samplePointId'),
    body: pointBody.extend({ archived: z.boolean(), version }),
    reply: samplePoint,
    example: examplePoint,
  }),
  'methods.list': endpoint({
    method: 'GET',
    path: '/sites/:siteId/methods',
    kind: 'json',
    summary: 'Laboratory methods of a site with their precision',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    reply: z.object({ rows: z.array(method) }),
    example: { rows: [exampleMethod] },
  }),
  'methods.add': endpoint({
    method: 'POST',
    path: '/sites/:siteId/methods',
    kind: 'json',
    summary: 'Add a laboratory method',
    access: { may: 'samples.configure', on: 'site' },
    params: ids('siteId'),
    body: methodBody,
    reply: method,
    example: exampleMethod,
  }),
  'methods.change': endpoint({
    method: 'PUT',
    path: '/methods/:methodId',
    kind: 'json',
    summary: 'Change a laboratory method, archive or take back',
    access: { may: 'samples.configure', on: 'method' },
    params: ids('methodId'),
    body: methodBody.extend({ archived: z.boolean(), version }),
    reply: method,
    example: exampleMethod,
  }),
  'samples.list': endpoint({
    method: 'GET',
    path: '/sites/:siteId/samples',
    kind: 'json',
    summary: 'Reference samples of a site, newest first',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    query: z.object({ ...pageQuery, samplePointId: idText.optional(), importId: idText.optional() }),
    reply: paged(sample),
    example: { rows: [], total: 0 },
  }),
  'sampleImports.list': endpoint({
    method: 'GET',
    path: '/sites/:siteId/sample-imports',
    kind: 'json',
    summary: 'Uploaded files of samples, newest first',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    reply: z.object({ rows: z.array(sampleImport) }),
    example: { rows: [exampleImport] },
  }),
  'sampleImports.upload': endpoint({
    method: 'POST',
    path: '/sites/:siteId/sample-imports',
    kind: 'upload',
    summary: 'Upload a CSV of reference samples; nothing is added yet',
    access: { may: 'samples.add', on: 'site' },
    params: ids('siteId'),
    maxBytes: 20 * 1024 ** 2,
    reply: sampleImportView,
    example: exampleView,
  }),
  'sampleImports.get': endpoint({
    method: 'GET',
    path: '/sample-imports/:sampleImportId',
    kind: 'json',
    summary: 'A file of samples: how it is read and what becomes of each row',
    access: { may: 'site.view', on: 'sampleImport' },
    params: ids('sampleImportId'),
    reply: sampleImportView,
    example: exampleView,
  }),
  'sampleImports.dryRun': endpoint({
    method: 'PUT',
    path: '/sample-imports/:sampleImportId/mapping',
    kind: 'json',
    summary: 'Say what each column holds and see what would become of each row',
    access: { may: 'samples.add', on: 'sampleImport' },
    params: ids('sampleImportId'),
    body: z.object({ mapping: sampleMapping, version }),
    reply: sampleImportView,
    example: exampleView,
  }),
  'sampleImports.commit': endpoint({
    method: 'POST',
    path: '/sample-imports/:sampleImportId/commit',
    kind: 'json',
    summary: 'Add the samples of the dry run that was seen, all in one transaction',
    access: { may: 'samples.add', on: 'sampleImport' },
    params: ids('sampleImportId'),
    body: z.object({ version, outcome: z.string().min(1) }),
    reply: sampleImportView,
    example: exampleView,
  }),
  'sampleImports.undo': endpoint({
    method: 'POST',
    path: '/sample-imports/:sampleImportId/undo',
    kind: 'json',
    summary: 'Take the samples of a file out again, while nothing rests on them',
    access: { may: 'samples.add', on: 'sampleImport' },
    params: ids('sampleImportId'),
    body: nothing,
    reply: sampleImportView,
    example: exampleView,
  }),
  'sampleImports.refused': endpoint({
    method: 'GET',
    path: '/sample-imports/:sampleImportId/refused.csv',
    kind: 'download',
    summary: 'Refused rows as CSV with their reasons, to be mended and taken up again',
    access: { may: 'site.view', on: 'sampleImport' },
    params: ids('sampleImportId'),
    reply: z.string(),
    example: 'line,reason\r\n',
  }),
};
