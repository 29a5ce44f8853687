import { z } from 'zod';
import { endpoint, idNumber, ids, isoInstant, nothing, shortText, version } from './endpoint.ts';
import { run } from './runs.ts';

/** A number above 0, said in words when it is not. */
export const positive = (what: string) => z.number().positive(`${what} must be above 0.`);
const step = positive('The step').max(86_400_000, 'A step can’t be longer than a day.');

/** A model as its engineer states it; estimate and inputs in the engineering units of their tags. */
export const regressionModel = z.object({
  form: z.literal('regression'),
  stepMs: step.int().min(1000, 'A step can’t be shorter than a second.'),
  /** How old a reading may be and still stand for its tag. */
  holdLimitMs: positive('The hold limit')
    .int()
    .max(7 * 86_400_000, 'Hold a reading for at most 7 days.'),
  intercept: z.number(),
  terms: z
    .array(z.object({ tagId: idNumber, coefficient: z.number() }))
    .min(1, 'Choose at least one input.')
    .max(40, 'Use at most 40 inputs.'),
  /** SD of a single error on held-out samples, or of the fit; null while unknown. */
  residualSd: z.number().positive().nullable(),
});
export const externalModel = z.object({
  form: z.literal('external'),
  holdLimitMs: positive('The hold limit')
    .int()
    .max(7 * 86_400_000, 'Hold a reading for at most 7 days.'),
  residualSd: z.number().positive().nullable(),
});
export const model = z.discriminatedUnion('form', [regressionModel, externalModel]);
export type Model = z.infer<typeof model>;
export type RegressionModel = z.infer<typeof regressionModel>;

/** What a least-squares fit found, kept with the model it led to. */
export const fitSummary = z.object({
  from: isoInstant,
  to: isoInstant,
  samples: z.number().int(),
  residualSd: z.number(),
  rSquared: z.number().nullable(),
  conditionNumber: z.number(),
  intercept: z.object({ value: z.number(), standardError: z.number() }),
  terms: z.array(
    z.object({
      tagId: idNumber,
      tagName: z.string(),
      coefficient: z.number(),
      standardError: z.number(),
      low: z.number(),
      high: z.number(),
    }),
  ),
  /** Groups of inputs that move together, by tag name: their coefficients can't be told apart well. */
  collinear: z.array(z.array(z.string())),
  notUsed: z.array(z.object({ code: z.string(), count: z.number().int() })),
});
export type FitSummary = z.infer<typeof fitSummary>;

const revisionDecision = z.enum(['approved', 'declined', 'withdrawn']);
export const revision = z.object({
  id: idNumber,
  softSensorId: idNumber,
  number: z.number().int(),
  model,
  fit: fitSummary.nullable(),
  reason: z.string(),
  changeReference: z.string(),
  proposedAt: isoInstant,
  proposedBy: z.object({ id: idNumber, name: z.string() }),
  decision: revisionDecision.nullable(),
  decidedAt: isoInstant.nullable(),
  decidedBy: z.object({ id: idNumber, name: z.string() }).nullable(),
  decisionReason: z.string(),
  effectiveFrom: isoInstant.nullable(),
});
export type Revision = z.infer<typeof revision>;

export const draft = z.object({
  id: idNumber,
  softSensorId: idNumber,
  model,
  fit: fitSummary.nullable(),
  version,
  updatedAt: isoInstant,
  updatedBy: z.string(),
});
export type Draft = z.infer<typeof draft>;

const exampleModel: Model = { form: 'external', holdLimitMs: 600_000, residualSd: 2.4 };
export const exampleRevision: Revision = {
  id: 4,
  softSensorId: 1,
  number: 4,
  model: exampleModel,
  fit: null,
  reason: 'New shell thermocouple',
  changeReference: 'MOC-311',
  proposedAt: '2026-06-01T08:00:00.000Z',
  proposedBy: { id: 3, name: 'Marco Castellane' },
  decision: 'approved',
  decidedAt: '2026-06-02T08:00:00.000Z',
  decidedBy: { id: 5, name: 'Ines Okafor-Lund' },
  decisionReason: '',
  effectiveFrom: '2026-06-02T08:00:00.000Z',
};
const exampleDraft: Draft = {
  id: 1,
  softSensorId: 1,
  model: exampleModel,
  fit: null,
  version: 1,
  updatedAt: '2026-06-01T08:00:00.000Z',
  updatedBy: 'Marco Castellane',
};
export const models = {
  'drafts.save': endpoint({
    method: 'PUT',
    path: '/soft-sensors/:softSensorId/draft',
    kind: 'json',
    summary: 'Save the draft of a model; version is null for a first draft',
    access: { may: 'softSensor.edit', on: 'softSensor' },
    params: ids('softSensorId'),
    body: z.object({ model, version: version.nullable() }),
    reply: draft,
    example: exampleDraft,
  }),
  'drafts.fit': endpoint({
    method: 'POST',
    path: '/soft-sensors/:softSensorId/draft/fit',
    kind: 'json',
    summary:
      'Fit the draft’s coefficients by least squares on the samples of a period; the run’s result is the fit',
    access: { may: 'softSensor.edit', on: 'softSensor' },
    params: ids('softSensorId'),
    body: z.object({ from: isoInstant, to: isoInstant, version }),
    reply: run,
    example: {
      id: 12,
      siteId: 1,
      kind: 'fit',
      subjectId: 1,
      state: 'waiting',
      done: 0,
      total: null,
      problem: null,
      result: null,
      createdAt: '2026-06-01T08:00:00.000Z',
      startedAt: null,
      finishedAt: null,
    },
  }),
  'revisions.list': endpoint({
    method: 'GET',
    path: '/soft-sensors/:softSensorId/revisions',
    kind: 'json',
    summary: 'Revisions of a soft sensor, newest first',
    access: { may: 'site.view', on: 'softSensor' },
    params: ids('softSensorId'),
    reply: z.object({ rows: z.array(revision) }),
    example: { rows: [exampleRevision] },
  }),
  'revisions.propose': endpoint({
    method: 'POST',
    path: '/soft-sensors/:softSensorId/revisions',
    kind: 'json',
    summary: 'Send the draft for approval by a second person',
    access: { may: 'softSensor.edit', on: 'softSensor' },
    params: ids('softSensorId'),
    body: z.object({
      version,
      reason: shortText('the reason', 400),
      changeReference: z.string().trim().max(60, 'Keep the reference under 60 characters.'),
    }),
    reply: revision,
    example: exampleRevision,
  }),
  'revisions.decide': endpoint({
    method: 'POST',
    path: '/revisions/:revisionId/decision',
    kind: 'json',
    summary: 'Approve or decline a revision; never by who proposed or edited it',
    access: { may: 'softSensor.approve', on: 'revision' },
    params: ids('revisionId'),
    body: z
      .object({ decision: z.enum(['approved', 'declined']), reason: z.string().trim().max(400) })
      .refine((body) => body.decision === 'approved' || body.reason.length > 0, {
        path: ['reason'],
        message: 'Say why it is declined, so that it can be mended.',
      }),
    reply: revision,
    example: exampleRevision,
  }),
  'revisions.withdraw': endpoint({
    method: 'POST',
    path: '/revisions/:revisionId/withdrawal',
    kind: 'json',
    summary: 'Take a revision back that waits for approval',
    access: { may: 'softSensor.edit', on: 'revision' },
    params: ids('revisionId'),
    body: nothing,
    reply: revision,
    example: { ...exampleRevision, decision: 'withdrawn', effectiveFrom: null },
  }),
};
