import { z } from 'zod';
import { endpoint, idNumber, ids, isoInstant, longText, shortText, version } from './endpoint.ts';
import {
  checkResult,
  checkStandard,
  exampleCheckStandard,
  examplePrecision,
  methodPrecision,
} from './precision.ts';
import {
  exampleHistory,
  exampleRetest,
  heldSample,
  retest,
  sampleHistory,
  unknownPoint,
} from './standing-samples.ts';

const words = (label: string) => shortText(label, 400);
const note = longText.max(400, 'Keep the note under 400 characters.').default('');
/** A number as a person writes it, with a decimal comma or point. */
const typedNumber = z.string().trim().min(1, 'Write a number, such as 1,482.5 or 1482,5.').max(40);

/** What may be corrected; what is left out stays as it is. */
const correction = z.object({
  value: typedNumber.optional(),
  unit: z.string().trim().max(20).optional(),
  takenAt: isoInstant.optional(),
  reportedAt: isoInstant.optional(),
  samplePointId: idNumber.optional(),
  methodId: idNumber.nullable().optional(),
  sampleNumber: shortText('a sample number', 80).optional(),
  analyst: z.string().trim().max(80).optional(),
  reason: words('why it is corrected'),
  version,
});
export type SampleCorrection = z.input<typeof correction>;

/** What becomes of a held result for which no second one comes. */
const then = z.enum(['release', 'withdraw', 'hold'], 'Choose what becomes of the held result.');
const retestAnswer = z.discriminatedUnion('answer', [
  z.object({
    answer: z.literal('result'),
    value: typedNumber,
    unit: z.string().trim().max(20).optional(),
    /** When the laboratory reported it; now where it is left out. */
    reportedAt: isoInstant.optional(),
    note,
  }),
  z.object({ answer: z.literal('no-bottle'), then, note }),
  z.object({ answer: z.literal('not-needed'), then, note }),
]);
export type RetestAnswer = z.input<typeof retestAnswer>;

const standardBody = z.object({ name: shortText('a name', 80), acceptedValue: typedNumber });

export const laboratory = {
  'samples.history': endpoint({
    method: 'GET',
    path: '/samples/:sampleId/history',
    kind: 'json',
    summary: 'All versions of a sample, and what was decided on each',
    access: { may: 'site.view', on: 'sample' },
    params: ids('sampleId'),
    reply: sampleHistory,
    example: exampleHistory,
  }),
  'samples.correct': endpoint({
    method: 'POST',
    path: '/samples/:sampleId/correct',
    kind: 'json',
    summary: 'Correct a sample with a reason: a new version takes its place, the old one is kept',
    access: { may: 'samples.judge', on: 'sample' },
    params: ids('sampleId'),
    body: correction,
    reply: sampleHistory,
    example: exampleHistory,
  }),
  'samples.withdraw': endpoint({
    method: 'POST',
    path: '/samples/:sampleId/withdraw',
    kind: 'json',
    summary: 'Withdraw a sample that is none, such as one of the wrong bottle; it stays on record',
    access: { may: 'samples.judge', on: 'sample' },
    params: ids('sampleId'),
    body: z.object({ reason: words('why it is withdrawn'), version }),
    reply: sampleHistory,
    example: exampleHistory,
  }),
  'samples.held': endpoint({
    method: 'GET',
    path: '/sites/:siteId/held',
    kind: 'json',
    summary: 'Samples that are held and why, the longest held first',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    reply: z.object({ rows: z.array(heldSample) }),
    example: { rows: [] },
  }),
  'samples.release': endpoint({
    method: 'POST',
    path: '/samples/:sampleId/release',
    kind: 'json',
    summary: 'Release a held sample with a reason; it counts from now on',
    access: { may: 'samples.judge', on: 'sample' },
    params: ids('sampleId'),
    body: z.object({ reason: words('why it counts'), version }),
    reply: sampleHistory,
    example: exampleHistory,
  }),
  'retests.list': endpoint({
    method: 'GET',
    path: '/sites/:siteId/retests',
    kind: 'json',
    summary: 'Re-tests asked for: the open ones, oldest first, then the last hundred answered',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    reply: z.object({ rows: z.array(retest) }),
    example: { rows: [exampleRetest] },
  }),
  'retests.ask': endpoint({
    method: 'POST',
    path: '/samples/:sampleId/retest',
    kind: 'json',
    summary: 'Ask for a second analysis; the result is held until it is answered',
    access: { may: 'samples.judge', on: 'sample' },
    params: ids('sampleId'),
    body: z.object({ reason: words('why it is asked for') }),
    reply: retest,
    example: exampleRetest,
  }),
  'retests.answer': endpoint({
    method: 'POST',
    path: '/samples/:sampleId/retest/answer',
    kind: 'json',
    summary: 'Answer the open re-test of a sample: a result, no bottle left, or not needed',
    access: { may: 'samples.judge', on: 'sample' },
    params: ids('sampleId'),
    body: retestAnswer,
    reply: retest,
    example: exampleRetest,
  }),
  'samplePoints.unknown': endpoint({
    method: 'GET',
    path: '/sites/:siteId/unknown-sample-points',
    kind: 'json',
    summary: 'Names of sample points that added files bring and that were not known',
    access: { may: 'site.view', on: 'site' },
    params: ids('siteId'),
    reply: z.object({ rows: z.array(unknownPoint) }),
    example: { rows: [] },
  }),
  'methods.precision': endpoint({
    method: 'GET',
    path: '/methods/:methodId/precision',
    kind: 'json',
    summary: 'How precise the laboratory of the site is with a method, from replicates and check standards',
    access: { may: 'site.view', on: 'method' },
    params: ids('methodId'),
    reply: methodPrecision,
    example: examplePrecision,
  }),
  'checkStandards.list': endpoint({
    method: 'GET',
    path: '/methods/:methodId/check-standards',
    kind: 'json',
    summary: 'Check standards of a method with their results, newest first',
    access: { may: 'site.view', on: 'method' },
    params: ids('methodId'),
    reply: z.object({ rows: z.array(checkStandard) }),
    example: { rows: [exampleCheckStandard] },
  }),
  'checkStandards.add': endpoint({
    method: 'POST',
    path: '/methods/:methodId/check-standards',
    kind: 'json',
    summary: 'Add a check standard: a material whose value is known',
    access: { may: 'samples.configure', on: 'method' },
    params: ids('methodId'),
    body: standardBody,
    reply: checkStandard,
    example: exampleCheckStandard,
  }),
  'checkStandards.change': endpoint({
    method: 'PUT',
    path: '/check-standards/:checkStandardId',
    kind: 'json',
    summary: 'Rename a check standard, change its accepted value, archive or take back',
    access: { may: 'samples.configure', on: 'checkStandard' },
    params: ids('checkStandardId'),
    body: standardBody.extend({ archived: z.boolean(), version }),
    reply: checkStandard,
    example: exampleCheckStandard,
  }),
  'checkResults.add': endpoint({
    method: 'POST',
    path: '/check-standards/:checkStandardId/results',
    kind: 'json',
    summary: 'Add a series of results on a check standard, found by one person in one run',
    access: { may: 'samples.add', on: 'checkStandard' },
    params: ids('checkStandardId'),
    body: z.object({
      /** As typed, one to a line or between semicolons: "5,41; 5,38". */
      values: z.string().trim().min(1, 'Write at least one result.').max(2000),
      measuredAt: isoInstant,
      analyst: z.string().trim().max(80).default(''),
    }),
    reply: checkResult,
    example: exampleCheckStandard.results[0]!,
  }),
  'checkResults.withdraw': endpoint({
    method: 'POST',
    path: '/check-results/:checkResultId/withdraw',
    kind: 'json',
    summary: 'Withdraw a series of results with a reason; it stays on record',
    access: { may: 'samples.judge', on: 'checkResult' },
    params: ids('checkResultId'),
    body: z.object({ reason: words('why it is withdrawn') }),
    reply: checkResult,
    example: exampleCheckStandard.results[0]!,
  }),
};
