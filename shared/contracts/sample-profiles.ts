import { z } from 'zod';
import { idNumber, isoInstant, shortText, version } from './endpoint.ts';
import { sampleMapping } from './sample-import.ts';

const { columns, headerLine: _ofOneFile, ...ofEveryFile } = sampleMapping.shape;

/** A mapping as a profile keeps it: columns by their names, since exports move them about. */
export const profileMapping = z.object({
  ...ofEveryFile,
  columns: z.record(columns.keyof(), z.string().nullable()),
});
export type ProfileMapping = z.infer<typeof profileMapping>;

/** How files of a kind are read at a site, accepted by a person when such a file was first added. */
export const importProfile = z.object({
  id: idNumber,
  siteId: idNumber,
  name: z.string(),
  /** Names of the columns by which such a file is known. */
  columns: z.array(z.string()),
  uses: z.number().int(),
  usedAt: isoInstant,
  createdBy: z.string(),
  archivedAt: isoInstant.nullable(),
  version,
});
export type ImportProfile = z.infer<typeof importProfile>;

export const profileBody = z.object({ name: shortText('a name', 80), archived: z.boolean(), version });

export const exampleProfile: ImportProfile = {
  id: 1,
  siteId: 1,
  name: 'furnace-pyrometry',
  columns: ['probe no', 'taken', 'reading', 'unit', 'point'],
  uses: 12,
  usedAt: '2026-11-30T05:44:00.000Z',
  createdBy: 'Tove Halbrook',
  archivedAt: null,
  version: 1,
};

export type { Mendable, SampleMends } from './sample-mends.ts';
