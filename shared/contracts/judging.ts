import { z } from 'zod';
import { endpoint, idNumber, ids, isoInstant } from './endpoint.ts';

export const healths = ['fit', 'watch', 'unfit', 'unproven'] as const;
export const health = z.enum(healths);
export type Health = z.infer<typeof health>;

/** A reason as a code with figures; `shared/rules/sentences.ts` makes the sentence. */
export const healthReason = z.object({
  code: z.enum([
    'within-allowed',
    'bias-beyond-allowed',
    'bias-reaches-allowed',
    'spread-beyond-allowed',
    'worse-than-holding',
    'no-reference',
    'reference-overdue',
    'too-few-errors',
    'interval-wider-than-allowed',
    'no-inputs',
    'inputs-bad',
    'not-in-service',
    'too-many-uncounted',
  ]),
  health,
  figures: z.record(z.string(), z.union([z.number(), z.string(), z.null()])),
});
export type HealthReason = z.infer<typeof healthReason>;

/** One of the last errors; `allowed` is the allowed error at that value, so that the strip is drawn in its units. */
export const errorStripPoint = z.object({ at: isoInstant, error: z.number(), allowed: z.number() });
export type ErrorStripPoint = z.infer<typeof errorStripPoint>;

/** Bias with its interval, or why there is none. */
export const biasFigures = z.discriminatedUnion('ok', [
  z.object({
    ok: z.literal(true),
    n: z.number().int(),
    bias: z.number(),
    low: z.number(),
    high: z.number(),
    sd: z.number(),
    rmse: z.number(),
    phi: z.number(),
    effectiveN: z.number(),
  }),
  z.object({ ok: z.literal(false), reason: z.string(), n: z.number().int() }),
]);
const scored = z.object({ n: z.number().int(), rmse: z.number(), bias: z.number() });

/** How wrong an estimate was over a set of samples. All errors are estimate − reference. */
export const judgement = z.object({
  bias: biasFigures,
  /** The same samples, had each estimate been the last result reported by then. */
  holdLast: scored.nullable(),
  /** Had a correction been updated after each sample by `factor`: zero at the start, scored before each update. */
  exponential: scored.extend({ factor: z.number() }).nullable(),
  ewma: z
    .object({
      lambda: z.number(),
      width: z.number(),
      sd: z.number(),
      points: z.array(z.object({ z: z.number(), lower: z.number(), upper: z.number(), signal: z.boolean() })),
    })
    .nullable(),
  /** References that lay inside the band of their estimate (with the whisker of the reference). */
  coverage: z.object({ held: z.number().int(), of: z.number().int() }).nullable(),
  notCounted: z.array(z.object({ code: z.string(), count: z.number().int() })),
});
export type Judgement = z.infer<typeof judgement>;

export const pairedError = z.object({
  sampleId: idNumber,
  sampleNumber: z.string(),
  takenAt: isoInstant,
  reportedAt: isoInstant,
  reference: z.number(),
  estimate: z.number().nullable(),
  estimateSd: z.number().nullable(),
  error: z.number().nullable(),
  corrected: z.number().nullable(),
  allowed: z.number(),
  notCounted: z.string().nullable(),
  origin: z.enum(['recorded', 'replayed']),
});
export type PairedError = z.infer<typeof pairedError>;

export const performance = z.object({
  from: isoInstant,
  to: isoInstant,
  judgement,
  errors: z.array(pairedError),
  /** R of the method: limits the difference of two results, so the whisker of one is ± R/√2. */
  reproducibility: z.number().nullable(),
});
export type Performance = z.infer<typeof performance>;

export const chartSeries = z.object({
  at: z.array(z.number()),
  value: z.array(z.number().nullable()),
  low: z.array(z.number().nullable()),
  high: z.array(z.number().nullable()),
});

export const replayFigures = z.object({
  judgement,
  errors: z.array(pairedError),
  steps: z.number().int(),
  estimated: z.number().int(),
  withoutEstimate: z.array(z.object({ tagName: z.string(), steps: z.number().int() })),
  chart: chartSeries,
});
export type ReplayFigures = z.infer<typeof replayFigures>;

export const replay = z.object({
  id: idNumber,
  softSensorId: idNumber,
  revisionNumber: z.number().int().nullable(),
  draft: z.boolean(),
  from: isoInstant,
  to: isoInstant,
  judgedFrom: isoInstant,
  updateFactor: z.number(),
  runId: idNumber.nullable(),
  createdBy: z.string(),
  createdAt: isoInstant,
  reproducibility: z.number().nullable(),
  figures: replayFigures.nullable(),
});
export type Replay = z.infer<typeof replay>;

const exampleJudgement: Judgement = {
  bias: { ok: true, n: 12, bias: 15.3, low: 12.2, high: 18.3, sd: 4.8, rmse: 16, phi: 0.2, effectiveN: 8 },
  holdLast: { n: 11, rmse: 4, bias: 0 },
  exponential: { factor: 0.3, n: 12, rmse: 6.1, bias: 2.2 },
  ewma: null,
  coverage: { held: 2, of: 12 },
  notCounted: [],
};
const exampleReplay: Replay = {
  id: 1,
  softSensorId: 1,
  revisionNumber: 4,
  draft: false,
  from: '2026-11-01T00:00:00.000Z',
  to: '2026-12-01T00:00:00.000Z',
  judgedFrom: '2026-11-01T00:00:00.000Z',
  updateFactor: 0.2,
  runId: 12,
  createdBy: 'Marco Castellane',
  createdAt: '2026-12-01T06:00:00.000Z',
  reproducibility: 9,
  figures: null,
};
const period = { from: isoInstant, to: isoInstant };
const updateFactor = z.coerce
  .number()
  .gt(0, 'The factor must be above 0.')
  .max(1, 'The factor can’t be above 1.');

export const judging = {
  'performance.get': endpoint({
    method: 'GET',
    path: '/soft-sensors/:softSensorId/performance',
    kind: 'json',
    summary: 'How wrong an estimate was over a period, from its frozen pairs',
    access: { may: 'site.view', on: 'softSensor' },
    params: ids('softSensorId'),
    query: z.object({ ...period, updateFactor: updateFactor.optional() }),
    reply: performance,
    example: {
      from: '2026-11-01T00:00:00.000Z',
      to: '2026-12-01T00:00:00.000Z',
      judgement: exampleJudgement,
      errors: [],
      reproducibility: 9,
    },
  }),
  'estimate.series': endpoint({
    method: 'GET',
    path: '/soft-sensors/:softSensorId/series',
    kind: 'json',
    summary: 'The estimate with its 95 % band over a period, at most a few thousand points',
    access: { may: 'site.view', on: 'softSensor' },
    params: ids('softSensorId'),
    query: z.object(period),
    reply: chartSeries,
    example: { at: [1764547200000], value: [1528], low: [1523], high: [1533] },
  }),
  'replays.list': endpoint({
    method: 'GET',
    path: '/soft-sensors/:softSensorId/replays',
    kind: 'json',
    summary: 'Replays of a soft sensor, newest first, without their points',
    access: { may: 'site.view', on: 'softSensor' },
    params: ids('softSensorId'),
    reply: z.object({ rows: z.array(replay) }),
    example: { rows: [exampleReplay] },
  }),
  'replays.start': endpoint({
    method: 'POST',
    path: '/soft-sensors/:softSensorId/replays',
    kind: 'json',
    summary: 'Run a model over a period of history and judge it on the samples of that period',
    access: { may: 'softSensor.replay', on: 'softSensor' },
    params: ids('softSensorId'),
    body: z.object({ ...period, judgedFrom: isoInstant, updateFactor, model: z.enum(['draft', 'in-force']) }),
    reply: replay,
    example: exampleReplay,
  }),
  'replays.get': endpoint({
    method: 'GET',
    path: '/replays/:replayId',
    kind: 'json',
    summary: 'A replay with its figures, errors and points',
    access: { may: 'site.view', on: 'replay' },
    params: ids('replayId'),
    reply: replay,
    example: exampleReplay,
  }),
};
