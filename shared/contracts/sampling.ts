import { z } from 'zod';
import { endpoint, idNumber, ids, isoInstant, version } from './endpoint.ts';
import { exampleSample, sample } from './sample-rows.ts';

const clock = z.string().regex(/^([01]\d|2[0-3]):[0-5]\d$/, 'A time looks like 06:00.');

/** A shift begins at a time of the site's clock and lasts until the next begins. */
export const shift = z.object({
  name: z.string().trim().min(1, 'Name the shift.').max(30, 'Keep the name under 30 characters.'),
  from: clock,
});
export type Shift = z.infer<typeof shift>;

/** How often a reference is asked for: `count` in each shift, day or week. */
export const samplingPlan = z.object({
  count: z.number().int().min(1, 'Ask for one sample at least.').max(24, 'Ask for 24 samples at most.'),
  per: z.enum(['shift', 'day', 'week']),
});
export type SamplingPlan = z.infer<typeof samplingPlan>;

const clockNow = z.object({ name: z.string(), fromAt: isoInstant, untilAt: isoInstant });

export const notTakenReasons = ['unit-stopped', 'no-safe-access', 'bottle-lost', 'other'] as const;
export const notTakenReason = z.enum(notTakenReasons);
export type NotTakenReason = z.infer<typeof notTakenReason>;

/** Why a sample is asked for: the plan of its soft sensors, or somebody who asked. */
const source = z.discriminatedUnion('kind', [
  z.object({ kind: z.literal('plan') }),
  z.object({ kind: z.literal('request'), requestId: idNumber, askedBy: z.string(), reason: z.string() }),
]);

const state = z.discriminatedUnion('kind', [
  z.object({ kind: z.literal('open') }),
  z.object({
    kind: z.literal('taken'),
    sampleId: idNumber,
    sampleNumber: z.string(),
    takenAt: isoInstant,
    asWritten: z.string(),
    unit: z.string(),
  }),
  z.object({
    kind: z.literal('not-taken'),
    reason: notTakenReason,
    note: z.string(),
    by: z.string(),
    at: isoInstant,
  }),
  z.object({ kind: z.literal('unit-stopped'), since: isoInstant }),
]);

/** One sample that is asked for in a shift; several soft sensors at one point share it. */
export const ask = z.object({
  key: z.string(),
  samplePointId: idNumber,
  samplePoint: z.string(),
  unitName: z.string().nullable(),
  softSensors: z.array(z.object({ id: idNumber, tagName: z.string(), quantity: z.string() })),
  unit: z.string(),
  methodId: idNumber.nullable(),
  method: z.string().nullable(),
  askedFor: isoInstant,
  source,
  state,
  /** A number for the bottle, made from point and day, that no other sample bears. */
  suggestedNumber: z.string(),
  last: z.object({ asWritten: z.string(), unit: z.string(), takenAt: isoInstant }).nullable(),
});
export type Ask = z.infer<typeof ask>;

export const asked = z.object({ shift: clockNow, asks: z.array(ask) });
export type Asked = z.infer<typeof asked>;

export const sampleRequest = z.object({
  id: idNumber,
  siteId: idNumber,
  softSensorId: idNumber,
  tagName: z.string(),
  samplePoint: z.string(),
  count: z.number().int(),
  /** Samples taken at the point since it was asked for. */
  taken: z.number().int(),
  fromAt: isoInstant,
  untilAt: isoInstant,
  reason: z.string(),
  askedBy: z.string(),
  askedAt: isoInstant,
  withdrawnAt: isoInstant.nullable(),
  version,
});
export type SampleRequest = z.infer<typeof sampleRequest>;

const note = z.string().trim().max(200, 'Keep the note under 200 characters.');

/** A result as it is typed at the sample point; the device makes the key, so that sending twice adds once. */
export const enteredSample = z.object({
  entryKey: z.uuid(),
  samplePointId: idNumber,
  methodId: idNumber.nullable(),
  /** Empty: numbered by the server. */
  sampleNumber: z.string().trim().max(80, 'A sample number has 80 characters at most.'),
  takenAt: isoInstant,
  value: z.string().trim().min(1, 'Write the value.').max(40, 'Keep the value under 40 characters.'),
  unit: z.string().trim().max(20, 'Keep the unit under 20 characters.'),
  note,
});
export type EnteredSample = z.infer<typeof enteredSample>;

export const notTaken = z
  .object({
    entryKey: z.uuid(),
    samplePointId: idNumber,
    askedFor: isoInstant,
    reason: notTakenReason,
    note,
  })
  .refine(({ reason, note }) => reason !== 'other' || note !== '', {
    path: ['note'],
    message: 'Write why it was not taken.',
  });
export type NotTaken = z.infer<typeof notTaken>;

const exampleAsk: Ask = {
  key: '1 1 2026-12-01T21:00:00.000Z 1',
  samplePointId: 1,
  samplePoint: 'KX-09',
  unitName: 'Melting furnace 1',
  softSensors: [{ id: 1, tagName: 'TY-1402', quantity: 'temperature' }],
  unit: '°C',
  methodId: 1,
  method: 'Immersion pyrometry',
  askedFor: '2026-12-02T01:00:00.000Z',
  source: { kind: 'plan' },
  state: { kind: 'open' },
  suggestedNumber: 'KX-09-1202-1',
  last: { asWritten: '1482,5', unit: '°C', takenAt: '2026-12-01T13:00:00.000Z' },
};
const exampleRequest: SampleRequest = {
  id: 1,
  siteId: 1,
  softSensorId: 1,
  tagName: 'TY-1402',
  samplePoint: 'KX-09',
  count: 5,
  taken: 2,
  fromAt: '2026-12-01T12:00:00.000Z',
  untilAt: '2026-12-04T12:00:00.000Z',
  reason: 'The last eight read high.',
  askedBy: 'Marco Castellane',
  askedAt: '2026-12-01T11:58:00.000Z',
  withdrawnAt: null,
  version: 1,
};

export const sampling = {
  'sampling.asked': endpoint({
    method: 'GET',
    path: '/sites/:siteId/asked',
    kind: 'json',
    summary: 'Samples that are asked for in a shift, from the plans of soft sensors and by people',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    query: z.object({ shift: z.enum(['previous', 'current', 'next']).optional() }),
    reply: asked,
    example: {
      shift: { name: 'Night', fromAt: '2026-12-01T21:00:00.000Z', untilAt: '2026-12-02T05:00:00.000Z' },
      asks: [exampleAsk],
    },
  }),
  'sampling.enter': endpoint({
    method: 'POST',
    path: '/sites/:siteId/samples',
    kind: 'json',
    summary: 'Enter one sample by hand; sent again with the same key it is added once',
    access: { may: 'samples.add', on: 'site' },
    params: ids('siteId'),
    body: enteredSample,
    reply: z.object({
      sample,
      /** Why it is held and does not count yet. */
      held: z.string().nullable(),
      /** It stood already, sent before with the same key. */
      again: z.boolean(),
    }),
    example: { sample: exampleSample, held: null, again: false },
  }),
  'sampling.notTaken': endpoint({
    method: 'POST',
    path: '/sites/:siteId/not-taken',
    kind: 'json',
    summary: 'Say why a sample that was asked for was not taken',
    access: { may: 'samples.add', on: 'site' },
    params: ids('siteId'),
    body: notTaken,
    reply: z.object({ again: z.boolean() }),
    example: { again: false },
  }),
  'sampling.requests': endpoint({
    method: 'GET',
    path: '/sites/:siteId/sample-requests',
    kind: 'json',
    summary: 'Samples that people asked for beyond the plans and that are still open',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    reply: z.object({ rows: z.array(sampleRequest) }),
    example: { rows: [exampleRequest] },
  }),
  'sampling.ask': endpoint({
    method: 'POST',
    path: '/soft-sensors/:softSensorId/sample-requests',
    kind: 'json',
    summary: 'Ask the laboratory for samples of a soft sensor',
    access: { may: 'samples.ask', on: 'softSensor' },
    params: ids('softSensorId'),
    body: z.object({
      count: z.number().int().min(1, 'Ask for one sample at least.').max(50, 'Ask for 50 samples at most.'),
      fromAt: isoInstant,
      untilAt: isoInstant,
      reason: z.string().trim().max(200, 'Keep the reason under 200 characters.'),
    }),
    reply: sampleRequest,
    example: exampleRequest,
  }),
  'sampling.withdraw': endpoint({
    method: 'POST',
    path: '/sample-requests/:sampleRequestId/withdraw',
    kind: 'json',
    summary: 'No longer ask for samples',
    access: { may: 'samples.ask', on: 'sampleRequest' },
    params: ids('sampleRequestId'),
    body: z.object({ version }),
    reply: sampleRequest,
    example: exampleRequest,
  }),
};
