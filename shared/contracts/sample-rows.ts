import { z } from 'zod';
import { idNumber, isoInstant, version } from './endpoint.ts';

/** A soft sensor that the samples of a point go to. */
const goesTo = z.object({ softSensorId: idNumber, tagName: z.string() });

export const samplePoint = z.object({
  id: idNumber,
  siteId: idNumber,
  unitId: idNumber.nullable(),
  unitName: z.string().nullable(),
  name: z.string(),
  /** Other names under which laboratories send this point. */
  aliases: z.array(z.string()),
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
  /** What the laboratory wrote where the unit of the method differs from it. */
  statedUnit: z.string().nullable(),
  statedValue: z.number().nullable(),
  flags: z.array(z.string()),
  /** Held, and so not counted, since then. */
  heldSince: isoInstant.nullable(),
  /** Single results of which the value is the mean. */
  replicates: z.array(z.number()).nullable(),
  /** Gathered over this long, ending when it was taken. */
  compositeMs: z.number().int().nullable(),
  /** It took the place of an earlier version. */
  changed: z.boolean(),
  importId: idNumber.nullable(),
  goesTo: z.array(goesTo),
});
export type Sample = z.infer<typeof sample>;

export const exampleSample: Sample = {
  id: 918,
  siteId: 1,
  samplePointId: 1,
  samplePoint: 'KX-09',
  method: 'Immersion pyrometry',
  sampleNumber: 'KX-0918-1',
  version: 1,
  takenAt: '2026-11-29T13:00:00.000Z',
  takenOn: null,
  reportedAt: '2026-11-29T14:10:00.000Z',
  value: 1504,
  asWritten: '1504',
  qualifier: null,
  unit: '°C',
  statedUnit: null,
  statedValue: null,
  flags: [],
  heldSince: null,
  replicates: null,
  compositeMs: null,
  changed: false,
  importId: 12,
  goesTo: [{ softSensorId: 1, tagName: 'TY-1402' }],
};

export const examplePoint: SamplePoint = {
  id: 1,
  siteId: 1,
  unitId: 1,
  unitName: 'Melting furnace 1',
  name: 'KX-09',
  aliases: ['Crown 9'],
  archivedAt: null,
  version: 1,
  goesTo: [{ softSensorId: 1, tagName: 'TY-1402', unit: '°C', methodId: 1 }],
};
export const exampleMethod: LabMethod = {
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
