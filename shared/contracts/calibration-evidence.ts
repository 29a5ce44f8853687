import { z } from 'zod';
import { isoInstant } from './endpoint.ts';
import { biasFigures, pairedError } from './judging.ts';

/** Leaving the estimate as it is, then corrections from simple to rich. */
export const calibrationKinds = ['as-found', 'bias', 'proportional', 'linear', 'deming'] as const;
export type CalibrationKind = (typeof calibrationKinds)[number];

/** What is added to the raw estimate: corrected = slope · raw + offset. */
export const correction = z.object({ slope: z.number(), offset: z.number() });
export type Correction = z.infer<typeof correction>;

/** Where the errors of the evidence begin. */
export const baseline = z.object({
  code: z.enum(['beginning', 'training', 'revision', 'calibration', 'event']),
  at: isoInstant.nullable(),
  eventKind: z.string().nullable(),
});
export type Baseline = z.infer<typeof baseline>;

/** One candidate as it was judged. Its errors are estimate − reference, with the candidate's correction. */
export const calibrationCandidate = z.object({
  kind: z.enum(calibrationKinds),
  verdict: z.string(),
  slope: z.number().nullable(),
  offset: z.number().nullable(),
  /** Of its rolling-origin errors: each from a fit to earlier samples only; null where there were too few. */
  laterRmse: z.number().nullable(),
  laterBias: z.number().nullable(),
  gain: z.number().nullable(),
  gainStandardError: z.number().nullable(),
  over: z.string().nullable(),
});
export type CalibrationCandidate = z.infer<typeof calibrationCandidate>;

export const calibrationEvidence = z.object({
  from: isoInstant,
  to: isoInstant,
  baseline,
  allowed: z.number(),
  /** Bias and spread as found, over all counted samples since the baseline, at most the last 30. */
  asFound: biasFigures,
  /** A CUSUM signal within the evidence; the samples up to it neither fit nor choose. */
  signal: z
    .object({
      at: isoInstant,
      direction: z.enum(['high', 'low']),
      onsetAt: isoInstant,
      confirmed: z.boolean(),
    })
    .nullable(),
  excluded: z.number().int(),
  used: z.number().int(),
  /** Samples that judged the procedure, each by a fit to earlier ones; null where there were too few for that. */
  origins: z.number().int().nullable(),
  candidates: z.array(calibrationCandidate),
  /** null: a change was signalled and too few samples came since to recommend anything. */
  recommended: z.enum(calibrationKinds).nullable(),
  residualSd: z.number().nullable(),
  notCounted: z.array(z.object({ code: z.string(), count: z.number().int() })),
});
export type CalibrationEvidence = z.infer<typeof calibrationEvidence>;

export const evidenceReply = z.discriminatedUnion('ok', [
  z.object({ ok: z.literal(true), evidence: calibrationEvidence, errors: z.array(pairedError) }),
  z.object({
    ok: z.literal(false),
    reason: z.enum(['no-model', 'no-sample-point', 'too-few-samples', 'only-censored', 'only-held']),
    counted: z.number().int(),
    needed: z.number().int(),
    baseline,
    notCounted: z.array(z.object({ code: z.string(), count: z.number().int() })),
  }),
]);
export type EvidenceReply = z.infer<typeof evidenceReply>;

export const exampleEvidence: CalibrationEvidence = {
  from: '2026-11-10T06:00:00.000Z',
  to: '2026-11-30T06:00:00.000Z',
  baseline: { code: 'revision', at: '2026-06-02T08:00:00.000Z', eventKind: null },
  allowed: 10,
  asFound: {
    ok: true,
    n: 30,
    bias: 15.3,
    low: 12.2,
    high: 18.3,
    sd: 4.8,
    rmse: 16,
    phi: 0.2,
    effectiveN: 20,
  },
  signal: null,
  excluded: 0,
  used: 30,
  origins: 22,
  candidates: [],
  recommended: 'bias',
  residualSd: 4.1,
  notCounted: [],
};
