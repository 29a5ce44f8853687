import { z } from 'zod';
import { idNumber, isoInstant, version } from './endpoint.ts';

/** A figure with the ends of its 95 % interval. */
const withInterval = { low: z.number(), high: z.number() };

/** Why a precision can't be said yet: what there is and what it takes. */
const tooLittle = z.object({
  ok: z.literal(false),
  reason: z.enum(['too-few-repeats', 'too-few-series', 'no-spread']),
  got: z.number().int(),
  needed: z.number().int(),
});

/**
 * An SD with its degrees of freedom (not whole where two sources of scatter are put together), its 95 % interval, and
 * the 95 % limit of the difference of two results: 1.96 √2 SD.
 */
const spread = z.object({
  ok: z.literal(true),
  sd: z.number(),
  ...withInterval,
  degreesOfFreedom: z.number(),
  limit: z.number(),
  limitLow: z.number(),
  limitHigh: z.number(),
});

export const precisionFigure = z.discriminatedUnion('ok', [spread, tooLittle]);
export type PrecisionFigure = z.infer<typeof precisionFigure>;

/** Mean of the series less the accepted value, as the laboratory finds it; with its 95 % interval. */
export const laboratoryBias = z.discriminatedUnion('ok', [
  z.object({
    ok: z.literal(true),
    mean: z.number(),
    bias: z.number(),
    ...withInterval,
    series: z.number().int(),
  }),
  tooLittle,
]);
export type LaboratoryBias = z.infer<typeof laboratoryBias>;

export const standardPrecision = z.object({
  standardId: idNumber,
  name: z.string(),
  acceptedValue: z.number(),
  series: z.number().int(),
  results: z.number().int(),
  /** Within series: one person, one run. */
  repeatability: precisionFigure,
  /** Within and between series of this laboratory; R′. */
  sitePrecision: precisionFigure,
  bias: laboratoryBias,
  /** The newest mean beyond ± 3 SD of the series before, where there are enough of them. */
  outOfControl: z
    .object({ measuredAt: isoInstant, mean: z.number(), low: z.number(), high: z.number() })
    .nullable(),
});
export type StandardPrecision = z.infer<typeof standardPrecision>;

export const methodPrecision = z.object({
  methodId: idNumber,
  name: z.string(),
  unit: z.string(),
  version,
  repeatability: z.number().nullable(),
  reproducibility: z.number().nullable(),
  /** Pooled over samples that were found more than once, and their number. */
  replicates: z.object({ samples: z.number().int(), figure: precisionFigure }),
  standards: z.array(standardPrecision),
  /** What could be taken over as r and R, rounded to two figures. */
  offers: z.object({ r: z.number().nullable(), R: z.number().nullable() }),
});
export type MethodPrecision = z.infer<typeof methodPrecision>;

export const checkResult = z.object({
  id: idNumber,
  standardId: idNumber,
  measuredAt: isoInstant,
  analyst: z.string(),
  values: z.array(z.number()),
  recordedBy: z.string(),
  recordedAt: isoInstant,
  withdrawnAt: isoInstant.nullable(),
  withdrawnReason: z.string().nullable(),
});
export type CheckResult = z.infer<typeof checkResult>;

export const checkStandard = z.object({
  id: idNumber,
  siteId: idNumber,
  methodId: idNumber,
  name: z.string(),
  acceptedValue: z.number(),
  unit: z.string(),
  archivedAt: isoInstant.nullable(),
  version,
  results: z.array(checkResult),
});
export type CheckStandard = z.infer<typeof checkStandard>;

export const exampleCheckStandard: CheckStandard = {
  id: 2,
  siteId: 1,
  methodId: 1,
  name: 'Gold point cell',
  acceptedValue: 1064.2,
  unit: '°C',
  archivedAt: null,
  version: 1,
  results: [
    {
      id: 31,
      standardId: 2,
      measuredAt: '2026-11-27T07:00:00.000Z',
      analyst: 'TH',
      values: [1065.1, 1063.4],
      recordedBy: 'Tove Halbrook',
      recordedAt: '2026-11-27T07:20:00.000Z',
      withdrawnAt: null,
      withdrawnReason: null,
    },
  ],
};

const few = { ok: false, reason: 'too-few-repeats', got: 1, needed: 6 } as const;
export const examplePrecision: MethodPrecision = {
  methodId: 1,
  name: 'Immersion pyrometry',
  unit: '°C',
  version: 1,
  repeatability: 4,
  reproducibility: 9,
  replicates: { samples: 1, figure: few },
  standards: [
    {
      standardId: 2,
      name: 'Gold point cell',
      acceptedValue: 1064.2,
      series: 1,
      results: 2,
      repeatability: few,
      sitePrecision: { ...few, reason: 'too-few-series', needed: 8 },
      bias: { ...few, reason: 'too-few-series', needed: 8 },
      outOfControl: null,
    },
  ],
  offers: { r: null, R: null },
};
