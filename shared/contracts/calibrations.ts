import { z } from 'zod';
import {
  calibrationEvidence,
  calibrationKinds,
  evidenceReply,
  exampleEvidence,
} from './calibration-evidence.ts';
import { endpoint, idNumber, ids, isoInstant, longText, shortText } from './endpoint.ts';
import { biasFigures, pairedError } from './judging.ts';

const person = z.object({ id: idNumber, name: z.string() });

export const calibration = z.object({
  id: idNumber,
  siteId: idNumber,
  softSensorId: idNumber,
  revisionNumber: z.number().int(),
  number: z.number().int(),
  kind: z.enum(calibrationKinds),
  slope: z.number(),
  offset: z.number(),
  slopeBefore: z.number(),
  offsetBefore: z.number(),
  evidence: calibrationEvidence,
  reason: z.string(),
  proposedAt: isoInstant,
  proposedBy: person,
  toBeEntered: z.boolean(),
  decision: z.enum(['approved', 'confirmed', 'declined', 'withdrawn']).nullable(),
  decidedAt: isoInstant.nullable(),
  decidedBy: person.nullable(),
  decisionReason: z.string(),
  enteredBy: z.string().nullable(),
  enteredAt: isoInstant.nullable(),
  effectiveFrom: isoInstant.nullable(),
  /** When a later calibration or revision took its place; null while it stands. */
  effectiveTo: isoInstant.nullable(),
});
export type Calibration = z.infer<typeof calibration>;

/** A calibration with all that a record of it shows. */
export const calibrationRecord = calibration.extend({
  siteName: z.string(),
  siteZone: z.string(),
  unitName: z.string(),
  tagName: z.string(),
  name: z.string(),
  unit: z.string(),
  decimals: z.number().int(),
  methodName: z.string().nullable(),
  reproducibility: z.number().nullable(),
  /** The samples it was judged on, as they stood then. */
  errors: z.array(pairedError),
  /** Corrected errors of samples taken since it is in force; proven from 10 on. */
  since: biasFigures.nullable(),
  /** Sample numbers of the evidence that were revised or withdrawn after it was proposed. */
  revisedSamples: z.array(z.string()),
  ownerThen: person.nullable(),
  ownerNow: person.nullable(),
  approver: person.nullable(),
});
export type CalibrationRecord = z.infer<typeof calibrationRecord>;

const exampleCalibration: Calibration = {
  id: 7,
  siteId: 1,
  softSensorId: 1,
  revisionNumber: 4,
  number: 2,
  kind: 'bias',
  slope: 1,
  offset: -15.3,
  slopeBefore: 1,
  offsetBefore: 0,
  evidence: exampleEvidence,
  reason: 'Reads high since the crown thermocouple was moved',
  proposedAt: '2026-11-30T09:00:00.000Z',
  proposedBy: { id: 3, name: 'Marco Castellane' },
  toBeEntered: false,
  decision: null,
  decidedAt: null,
  decidedBy: null,
  decisionReason: '',
  enteredBy: null,
  enteredAt: null,
  effectiveFrom: null,
  effectiveTo: null,
};

export const calibrations = {
  'calibrations.evidence': endpoint({
    method: 'GET',
    path: '/soft-sensors/:softSensorId/recalibration',
    kind: 'json',
    summary: 'Candidates of a recalibration side by side, judged on samples that did not fit them',
    access: { may: 'site.view', on: 'softSensor' },
    params: ids('softSensorId'),
    reply: evidenceReply,
    example: { ok: true, evidence: exampleEvidence, errors: [] },
  }),
  'calibrations.list': endpoint({
    method: 'GET',
    path: '/soft-sensors/:softSensorId/calibrations',
    kind: 'json',
    summary: 'Recalibrations of a soft sensor, newest first',
    access: { may: 'site.view', on: 'softSensor' },
    params: ids('softSensorId'),
    reply: z.object({ rows: z.array(calibration) }),
    example: { rows: [exampleCalibration] },
  }),
  'calibrations.get': endpoint({
    method: 'GET',
    path: '/calibrations/:calibrationId',
    kind: 'json',
    summary: 'The record of a recalibration with its samples',
    access: { may: 'site.view', on: 'calibration' },
    params: ids('calibrationId'),
    reply: calibrationRecord,
    example: {
      ...exampleCalibration,
      siteName: 'Tarnby Works',
      siteZone: 'Europe/Copenhagen',
      unitName: 'Melting furnace 1',
      tagName: 'TY-1402',
      name: 'Crown interior temperature',
      unit: '°C',
      decimals: 0,
      methodName: 'Immersion pyrometry',
      reproducibility: 9,
      errors: [],
      since: null,
      revisedSamples: [],
      ownerThen: { id: 3, name: 'Marco Castellane' },
      ownerNow: { id: 3, name: 'Marco Castellane' },
      approver: { id: 5, name: 'Ines Okafor-Lund' },
    },
  }),
  'calibrations.propose': endpoint({
    method: 'POST',
    path: '/soft-sensors/:softSensorId/calibrations',
    kind: 'json',
    summary: 'Propose leaving the estimate as found or a correction; the evidence is frozen with it',
    access: { may: 'softSensor.recalibrate', on: 'softSensor' },
    params: ids('softSensorId'),
    body: z.object({
      kind: z.enum(calibrationKinds),
      reason: shortText('a reason', 400),
      /** The evidence that the proposer saw; where newer samples changed it, the answer is 409. */
      seen: z.object({ used: z.number().int(), to: isoInstant }),
    }),
    reply: calibration,
    example: exampleCalibration,
  }),
  'calibrations.decide': endpoint({
    method: 'POST',
    path: '/calibrations/:calibrationId/decision',
    kind: 'json',
    summary: 'Approve or decline a recalibration; never by its proposer',
    access: { may: 'softSensor.approve', on: 'calibration' },
    params: ids('calibrationId'),
    body: z
      .object({
        decision: z.enum(['approved', 'declined']),
        reason: longText.max(400, 'Keep the reason under 400 characters.'),
        /** The owner whom the decider saw; another one meanwhile gets 409. */
        ownerId: idNumber.nullable(),
        /** From when it shall be in force; null: from the approval on. */
        effectiveFrom: isoInstant.nullable(),
      })
      .refine(({ decision, reason }) => decision === 'approved' || reason !== '', {
        path: ['reason'],
        message: 'Write why it is declined, so that the proposer knows what to change.',
      }),
    reply: calibration,
    example: exampleCalibration,
  }),
  'calibrations.withdraw': endpoint({
    method: 'DELETE',
    path: '/calibrations/:calibrationId',
    kind: 'json',
    summary: 'Withdraw a proposal that nobody decided yet',
    access: { may: 'softSensor.recalibrate', on: 'calibration' },
    params: ids('calibrationId'),
    reply: calibration,
    example: { ...exampleCalibration, decision: 'withdrawn' },
  }),
  'calibrations.enter': endpoint({
    method: 'POST',
    path: '/calibrations/:calibrationId/entry',
    kind: 'json',
    summary: 'Say who entered an approved correction in the control system, and when',
    access: { may: 'softSensor.recalibrate', on: 'calibration' },
    params: ids('calibrationId'),
    body: z.object({ enteredBy: shortText('who entered it'), enteredAt: isoInstant }),
    reply: calibration,
    example: exampleCalibration,
  }),
  'calibrations.confirm': endpoint({
    method: 'POST',
    path: '/confirmations',
    kind: 'json',
    summary:
      'Confirm soft sensors as found: those Fit with at least 15 references since the last recalibration',
    access: { may: 'softSensor.recalibrate', on: 'sites' },
    body: z.object({ softSensorIds: z.array(idNumber).min(1, 'Choose at least one.').max(200) }),
    reply: z.object({
      confirmed: z.array(z.object({ softSensorId: idNumber, calibrationId: idNumber })),
      refused: z.array(z.object({ softSensorId: idNumber, tagName: z.string(), why: z.string() })),
    }),
    example: { confirmed: [{ softSensorId: 1, calibrationId: 7 }], refused: [] },
  }),
};
