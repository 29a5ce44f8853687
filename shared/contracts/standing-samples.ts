import { z } from 'zod';
import { idNumber, isoInstant, version } from './endpoint.ts';
import { exampleSample, sample } from './sample-rows.ts';

/** One version of a sample, who entered it and what became of it. */
export const sampleVersion = sample.extend({
  methodId: idNumber.nullable(),
  analyst: z.string().nullable(),
  enteredBy: z.string(),
  enteredAt: isoInstant,
  changeReason: z.string().nullable(),
  supersededAt: isoInstant.nullable(),
  withdrawnAt: isoInstant.nullable(),
});
export type SampleVersion = z.infer<typeof sampleVersion>;

/** A recalibration whose frozen evidence holds a version of the sample; nothing of it is rewritten. */
export const decidedOnSample = z.object({
  calibrationId: idNumber,
  number: z.number().int(),
  softSensorId: idNumber,
  tagName: z.string(),
  kind: z.string(),
  decision: z.enum(['approved', 'confirmed', 'declined', 'withdrawn']).nullable(),
  proposedAt: isoInstant,
  decidedAt: isoInstant.nullable(),
  decidedBy: z.string().nullable(),
  /** The version of the sample that the evidence holds, and its value there. */
  sampleVersion: version,
  reference: z.number(),
});
export type DecidedOnSample = z.infer<typeof decidedOnSample>;

export const retestAnswers = ['result', 'no-bottle', 'not-needed'] as const;

/** A second analysis that was asked for, with the result it is about. */
export const retest = z.object({
  id: idNumber,
  sampleId: idNumber,
  sampleNumber: z.string(),
  samplePointId: idNumber,
  samplePoint: z.string(),
  method: z.string().nullable(),
  value: z.number(),
  qualifier: z.enum(['<', '>']).nullable(),
  unit: z.string(),
  takenAt: isoInstant.nullable(),
  takenOn: z.string().nullable(),
  askedBy: z.string(),
  askedAt: isoInstant,
  reason: z.string(),
  answer: z.enum(retestAnswers).nullable(),
  answeredBy: z.string().nullable(),
  answeredAt: isoInstant.nullable(),
  note: z.string(),
  /** The result that took the place of the one in question. */
  resultSampleId: idNumber.nullable(),
  resultValue: z.number().nullable(),
});
export type Retest = z.infer<typeof retest>;

/** What was done with a sample apart from new versions, and why. */
const sampleDeed = z.object({
  at: isoInstant,
  by: z.string(),
  what: z.enum(['released', 'withdrawn']),
  reason: z.string(),
});

export const sampleHistory = z.object({
  /** The id of the version that stands, or that stood last. */
  currentId: idNumber,
  siteName: z.string(),
  siteZone: z.string(),
  /** Newest first. */
  versions: z.array(sampleVersion),
  deeds: z.array(sampleDeed),
  decisions: z.array(decidedOnSample),
  retests: z.array(retest),
});
export type SampleHistory = z.infer<typeof sampleHistory>;

export const heldSample = sample.extend({
  heldSince: isoInstant,
  retest: z.object({ askedBy: z.string(), askedAt: isoInstant, reason: z.string() }).nullable(),
});
export type HeldSample = z.infer<typeof heldSample>;

/** A name that files bring and the site does not know, or did not when they were added. */
export const unknownPoint = z.object({
  name: z.string(),
  rows: z.number().int(),
  files: z.array(z.object({ importId: idNumber, fileName: z.string(), rows: z.number().int() })),
  /** The sample point that goes by this name since; its rows can be taken up from the files. */
  isNow: z.object({ id: idNumber, name: z.string() }).nullable(),
});
export type UnknownPoint = z.infer<typeof unknownPoint>;

export const exampleRetest: Retest = {
  id: 4,
  sampleId: 918,
  sampleNumber: 'KX-0918-1',
  samplePointId: 1,
  samplePoint: 'KX-09',
  method: 'Immersion pyrometry',
  value: 1534,
  qualifier: null,
  unit: '°C',
  takenAt: '2026-11-29T13:00:00.000Z',
  takenOn: null,
  askedBy: 'Marco Castellane',
  askedAt: '2026-11-29T15:10:00.000Z',
  reason: 'Far from the last results; do you still have the bottle?',
  answer: null,
  answeredBy: null,
  answeredAt: null,
  note: '',
  resultSampleId: null,
  resultValue: null,
};
export const exampleHistory: SampleHistory = {
  currentId: exampleSample.id,
  siteName: 'Tarnby Works',
  siteZone: 'Europe/Copenhagen',
  versions: [
    {
      ...exampleSample,
      methodId: 1,
      analyst: null,
      enteredBy: 'Tove Halbrook',
      enteredAt: '2026-11-29T14:20:00.000Z',
      changeReason: null,
      supersededAt: null,
      withdrawnAt: null,
    },
  ],
  deeds: [],
  decisions: [],
  retests: [exampleRetest],
};
