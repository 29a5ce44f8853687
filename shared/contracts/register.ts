import { z } from 'zod';
import { endpoint, idNumber, ids, idText, isoInstant, longText, shortText, version } from './endpoint.ts';
import { interval, isoDate } from './interval.ts';
import { health, healthReason, errorStripPoint } from './judging.ts';
import { correction } from './calibration-evidence.ts';
import { calibration } from './calibrations.ts';
import { draft, positive, revision } from './models.ts';
import { exampleSheet } from './register-examples.ts';
import { samplingPlan } from './sampling.ts';

export const consumer = z.object({
  kind: z.enum(['display', 'closed-loop', 'quality-release', 'emission-report']),
  name: shortText('what uses it', 80),
});
export type Consumer = z.infer<typeof consumer>;

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
  /** How often the laboratory is asked for a reference; null where nobody asks by plan. */
  samplingPlan: samplingPlan.nullable(),
  steadyStateGate: z.boolean(),
  promisedReferenceMs: positive('The promised interval'),
  allowedErrorAbsolute: positive('The allowed error').nullable(),
  allowedErrorPercent: positive('The allowed error').nullable(),
  allowedSpread: positive('The allowed spread').nullable(),
  historyArrives: z.enum(['live', 'uploaded']),
  historyEveryMs: positive('The interval of history'),
  correctionMode: z.enum(['monitor', 'propose', 'automatic']),
  updateFactor: z.number().gt(0, 'The factor must be above 0.').max(1, 'The factor can’t be above 1.'),
  recalibrationInterval: interval,
  reviewInterval: interval,
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
  recalibratedAt: isoInstant.nullable(),
  referencesSince: z.number().int(),
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
  /** Why it is in that life state, in the words of who put it there. */
  lifeReason: z.string(),
  /** Since when its unit, or it alone, is stopped. */
  stoppedSince: isoInstant.nullable(),
  owner: personRef,
  deputy: personRef,
  approver: personRef,
  revisionInForce: revision.nullable(),
  waiting: revision.nullable(),
  draft: draft.nullable(),
  /** The correction in force with the calibration that put it there; null where the raw estimate stands. */
  correction: correction
    .extend({
      calibrationId: idNumber,
      since: isoInstant,
      approvedBy: z.string(),
      /** It is in the readings since somebody entered it in a control system; nothing is added here. */
      entered: z.boolean(),
    })
    .nullable(),
  waitingCalibration: calibration.nullable(),
  /** Approved for an external estimate, but nobody said yet that it was entered in the control system. */
  calibrationToEnter: calibration.nullable(),
  lastCalibration: calibration.nullable(),
  dueOn: z.object({ recalibration: isoDate.nullable(), review: isoDate.nullable() }),
  inputs: z.array(z.object({ tagId: idNumber, name: z.string(), description: z.string(), unit: z.string() })),
  status: status.nullable(),
  working: z.boolean(),
  version,
});
export type Sheet = z.infer<typeof sheet>;

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
  'life.reason': endpoint({
    method: 'PUT',
    path: '/soft-sensors/:softSensorId/suspension',
    kind: 'json',
    summary: 'Say afterwards why a soft sensor was suspended',
    access: { may: 'softSensor.suspend', on: 'softSensor' },
    params: ids('softSensorId'),
    body: z.object({ reason: shortText('a reason', 400) }),
    reply: sheet,
    example: { ...exampleSheet, life: 'suspended', lifeReason: 'Purge blocked' },
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
