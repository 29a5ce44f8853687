import { z } from 'zod';
import {
  endpoint,
  idNumber,
  ids,
  idText,
  isoInstant,
  longText,
  nothing,
  shortText,
  version,
} from './endpoint.ts';
import { health, healthReason, errorStripPoint } from './judging.ts';
import { run } from './runs.ts';

export const consumer = z.object({
  kind: z.enum(['display', 'closed-loop', 'quality-release', 'emission-report']),
  name: shortText('what uses it', 80),
});
export type Consumer = z.infer<typeof consumer>;

const positive = (what: string) => z.number().positive(`${what} must be above 0.`);
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

export const lifeState = z.enum(['draft', 'in-validation', 'in-service', 'suspended', 'retired']);
export type LifeState = z.infer<typeof lifeState>;

/** What a person types on a data sheet. */
export const sheetFields = z.object({
  unitId: idNumber,
  tagName: shortText('the tag', 40),
  name: shortText('a name', 100),
  quantity: shortText('the quantity', 80),
  unit: z.string().trim().max(20, 'Keep the engineering unit under 20 characters.'),
  decimals: z.number().int().min(0).max(6, 'Use at most 6 decimals.'),
  rangeLow: z.number().nullable(),
  rangeHigh: z.number().nullable(),
  purpose: longText,
  importanceClass: z.enum(['A', 'B', 'C']),
  consumers: z.array(consumer).max(20),
  samplePointId: idNumber.nullable(),
  methodId: idNumber.nullable(),
  transportDelayMs: z
    .number()
    .int()
    .min(0, 'A delay can’t be negative.')
    .max(7 * 86_400_000),
  pairingWindowMs: z.number().int().min(0, 'A window can’t be negative.').max(86_400_000),
  steadyStateGate: z.boolean(),
  promisedReferenceMs: positive('The promised interval'),
  allowedErrorAbsolute: positive('The allowed error').nullable(),
  allowedErrorPercent: positive('The allowed error').nullable(),
  allowedSpread: positive('The allowed spread').nullable(),
  historyArrives: z.enum(['live', 'uploaded']),
  historyEveryMs: positive('The interval of history'),
  correctionMode: z.enum(['monitor', 'propose', 'automatic']),
  updateFactor: z.number().gt(0, 'The factor must be above 0.').max(1, 'The factor can’t be above 1.'),
  recalibrationMonths: z.number().int().min(1, 'At least one month.').max(120),
  reviewMonths: z.number().int().min(1, 'At least one month.').max(120),
  fallback: longText,
  limitations: longText,
  ownerId: idNumber.nullable(),
  deputyId: idNumber.nullable(),
  approverId: idNumber.nullable(),
});
export type SheetFields = z.infer<typeof sheetFields>;

/** Rules between fields of a sheet; each names the field to mend. */
export const sheetBody = sheetFields.superRefine((fields, context) => {
  const say = (path: keyof SheetFields, message: string) =>
    context.addIssue({ code: 'custom', path: [path], message });
  if (fields.allowedErrorAbsolute === null && fields.allowedErrorPercent === null) {
    say('allowedErrorAbsolute', 'State the allowed error: absolute, in per cent of the value, or both.');
  }
  if (fields.rangeLow !== null && fields.rangeHigh !== null && fields.rangeLow >= fields.rangeHigh) {
    say('rangeHigh', 'The upper end of the range must be above the lower.');
  }
  if (fields.deputyId !== null && fields.deputyId === fields.ownerId) {
    say('deputyId', 'The deputy must be another person than the owner.');
  }
});

const personRef = z.object({ id: idNumber, name: z.string() }).nullable();

export const registerRow = z.object({
  id: idNumber,
  siteId: idNumber,
  siteName: z.string(),
  areaName: z.string(),
  unitName: z.string(),
  tagName: z.string(),
  name: z.string(),
  quantity: z.string(),
  unit: z.string(),
  decimals: z.number().int(),
  importanceClass: z.enum(['A', 'B', 'C']),
  consumers: z.array(consumer),
  life: lifeState,
  form: z.enum(['regression', 'external']).nullable(),
  owner: personRef,
  health: health.nullable(),
  reasons: z.array(healthReason),
  lastReferenceAt: isoInstant.nullable(),
});
export type RegisterRow = z.infer<typeof registerRow>;

export const status = z.object({
  health,
  reasons: z.array(healthReason),
  healthSince: isoInstant,
  bias: z.number().nullable(),
  biasLow: z.number().nullable(),
  biasHigh: z.number().nullable(),
  rmse: z.number().nullable(),
  counted: z.number().int(),
  allowedError: z.number().nullable(),
  lastErrors: z.array(errorStripPoint),
  lastReferenceAt: isoInstant.nullable(),
  lastReferenceValue: z.number().nullable(),
  currentAt: isoInstant.nullable(),
  currentValue: z.number().nullable(),
  currentSd: z.number().nullable(),
  judgedAt: isoInstant,
});
export type Status = z.infer<typeof status>;

/** The whole of a soft sensor's data sheet. */
export const sheet = z.object({
  id: idNumber,
  siteId: idNumber,
  siteName: z.string(),
  siteZone: z.string(),
  areaName: z.string(),
  unitName: z.string(),
  samplePointName: z.string().nullable(),
  methodName: z.string().nullable(),
  methodReproducibility: z.number().nullable(),
  estimateTagId: idNumber,
  fields: sheetFields,
  life: lifeState,
  lifeSince: isoInstant,
  owner: personRef,
  deputy: personRef,
  approver: personRef,
  revisionInForce: revision.nullable(),
  waiting: revision.nullable(),
  draft: draft.nullable(),
  inputs: z.array(z.object({ tagId: idNumber, name: z.string(), description: z.string(), unit: z.string() })),
  status: status.nullable(),
  working: z.boolean(),
  version,
});
export type Sheet = z.infer<typeof sheet>;

const exampleModel: Model = { form: 'external', holdLimitMs: 600_000, residualSd: 2.4 };
const exampleRevision: Revision = {
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
const exampleFields: SheetFields = {
  unitId: 1,
  tagName: 'TY-1402',
  name: 'Crown interior temperature',
  quantity: 'temperature',
  unit: '°C',
  decimals: 0,
  rangeLow: 1200,
  rangeHigh: 1650,
  purpose: 'Crown temperature for the furnace pressure loop',
  importanceClass: 'A',
  consumers: [{ kind: 'closed-loop', name: 'furnace pressure loop' }],
  samplePointId: 1,
  methodId: 1,
  transportDelayMs: 0,
  pairingWindowMs: 600_000,
  steadyStateGate: true,
  promisedReferenceMs: 604_800_000,
  allowedErrorAbsolute: 10,
  allowedErrorPercent: null,
  allowedSpread: null,
  historyArrives: 'live',
  historyEveryMs: 60_000,
  correctionMode: 'propose',
  updateFactor: 0.2,
  recalibrationMonths: 3,
  reviewMonths: 12,
  fallback: 'Use the laboratory value.',
  limitations: '',
  ownerId: 3,
  deputyId: 4,
  approverId: 5,
};
const exampleSheet: Sheet = {
  id: 1,
  siteId: 1,
  siteName: 'Tarnby Works',
  siteZone: 'Europe/Copenhagen',
  areaName: 'Hot end',
  unitName: 'Melting furnace 1',
  samplePointName: 'KX-09',
  methodName: 'Immersion pyrometry',
  methodReproducibility: 9,
  estimateTagId: 7,
  fields: exampleFields,
  life: 'in-service',
  lifeSince: '2026-06-02T08:00:00.000Z',
  owner: { id: 3, name: 'Marco Castellane' },
  deputy: { id: 4, name: 'Jun Brightwell' },
  approver: { id: 5, name: 'Ines Okafor-Lund' },
  revisionInForce: exampleRevision,
  waiting: null,
  draft: null,
  inputs: [],
  status: null,
  working: false,
  version: 1,
};

export const register = {
  'register.list': endpoint({
    method: 'GET',
    path: '/soft-sensors',
    kind: 'json',
    summary: 'Soft sensors of every site that the person may see',
    access: { may: 'site.view', on: 'sites' },
    query: z.object({ siteId: idText.optional() }),
    reply: z.object({ rows: z.array(registerRow) }),
    example: { rows: [] },
  }),
  'register.add': endpoint({
    method: 'POST',
    path: '/sites/:siteId/soft-sensors',
    kind: 'json',
    summary: 'Register a soft sensor; it begins as a draft',
    access: { may: 'softSensor.register', on: 'site' },
    params: ids('siteId'),
    body: sheetBody,
    reply: sheet,
    example: exampleSheet,
  }),
  'register.get': endpoint({
    method: 'GET',
    path: '/soft-sensors/:softSensorId',
    kind: 'json',
    summary: 'The data sheet of a soft sensor',
    access: { may: 'site.view', on: 'softSensor' },
    params: ids('softSensorId'),
    reply: sheet,
    example: exampleSheet,
  }),
  'register.change': endpoint({
    method: 'PUT',
    path: '/soft-sensors/:softSensorId',
    kind: 'json',
    summary: 'Change the data sheet; a stale version gets both sides back',
    access: { may: 'softSensor.edit', on: 'softSensor' },
    params: ids('softSensorId'),
    body: z.object({ fields: sheetBody, version }),
    reply: sheet,
    example: exampleSheet,
  }),
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
  'life.suspend': endpoint({
    method: 'POST',
    path: '/soft-sensors/:softSensorId/suspension',
    kind: 'json',
    summary: 'Suspend a soft sensor at once',
    access: { may: 'softSensor.suspend', on: 'softSensor' },
    params: ids('softSensorId'),
    body: z.object({ reason: z.string().trim().max(400) }),
    reply: sheet,
    example: { ...exampleSheet, life: 'suspended' },
  }),
  'life.putBack': endpoint({
    method: 'DELETE',
    path: '/soft-sensors/:softSensorId/suspension',
    kind: 'json',
    summary: 'Put a suspended soft sensor back in service; only its approver or a manager of the site',
    access: { may: 'softSensor.approve', on: 'softSensor' },
    params: ids('softSensorId'),
    reply: sheet,
    example: exampleSheet,
  }),
};
