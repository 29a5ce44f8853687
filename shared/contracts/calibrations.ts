import { z } from 'zod';
import { endpoint, idNumber, ids, isoInstant, longText, shortText } from './endpoint.ts';
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
