import { z } from 'zod';
import { endpoint, idNumber, ids, idText, isoInstant, longText, shortText, version } from './endpoint.ts';
import { isoDate } from './interval.ts';
import { health } from './judging.ts';
import { pageQuery, paged } from './paging.ts';

export const dutyKinds = ['recalibration', 'review', 'ownership-gap'] as const;
export type DutyKind = (typeof dutyKinds)[number];

export const reviewConclusions = ['keep', 'change', 'retire'] as const;
export type ReviewConclusion = (typeof reviewConclusions)[number];

/** What a review looks at; each is found in order or not. */
export const reviewAnswers = z.object({
  purpose: z.boolean(),
  consumers: z.boolean(),
  inputs: z.boolean(),
  validity: z.boolean(),
  owner: z.boolean(),
});
export type ReviewAnswers = z.infer<typeof reviewAnswers>;

/** What is missing in the ownership of a soft sensor; a deputy is compulsory for classes A and B. */
export const gapCodes = [
  'no-owner',
  'owner-deactivated',
  'owner-no-engineer',
  'no-deputy',
  'deputy-deactivated',
  'deputy-no-engineer',
] as const;
export type GapCode = (typeof gapCodes)[number];

const person = z.object({ id: idNumber, name: z.string() });

/** What was decided the last time that somebody attended to a duty of this kind. */
export const lastDecision = z.discriminatedUnion('what', [
  z.object({
    what: z.literal('calibration'),
    calibrationId: idNumber,
    kind: z.string(),
    at: isoInstant,
    by: person.nullable(),
  }),
  z.object({
    what: z.literal('review'),
    reviewId: idNumber,
    conclusion: z.enum(reviewConclusions),
    at: isoInstant,
    by: person.nullable(),
  }),
  z.object({ what: z.literal('waiver'), reason: z.string(), at: isoInstant, by: person.nullable() }),
]);
export type LastDecision = z.infer<typeof lastDecision>;

export const duty = z.object({
  id: idNumber,
  kind: z.enum(dutyKinds),
  state: z.enum(['open', 'done', 'waived']),
  siteId: idNumber,
  siteName: z.string(),
  siteZone: z.string(),
  unitName: z.string(),
  softSensorId: idNumber,
  tagName: z.string(),
  name: z.string(),
  importanceClass: z.enum(['A', 'B', 'C']),
  life: z.string(),
  health: health.nullable(),
  /** Since when its unit, or it alone, is stopped: nobody is reminded meanwhile, and the date stands. */
  stoppedSince: isoInstant.nullable(),
  /** A date at the site, as is `openedOn`. */
  dueOn: isoDate,
  openedOn: isoDate,
  /** The site's own day now. */
  today: isoDate,
  /** Days since `dueOn` at the site's own day; negative: days to go. */
  daysLate: z.number().int(),
  owner: person.nullable(),
  deputy: person.nullable(),
  /** Who must attend to it: whom it was reassigned to, else the owner; for a gap the managers of the site. */
  assignees: z.array(person),
  reassigned: z.boolean(),
  /** What is missing, for an ownership gap. */
  gaps: z.array(z.enum(gapCodes)),
  /** Assignees whose mail server refuses our mails, with its own words. */
  unreachable: z.array(z.object({ name: z.string(), why: z.string() })),
  lastDecision: lastDecision.nullable(),
  closedAt: isoInstant.nullable(),
  closedBy: person.nullable(),
  /** How it ended: attended to, waived, the gap filled, or of no more use (another interval, retired). */
  closedAs: z.enum(['done', 'waived', 'filled', 'dropped']).nullable(),
  reason: z.string(),
  /** Whether the person who asks may attend to it, waive it, give it to somebody else. */
  mayAttend: z.boolean(),
  mayWaive: z.boolean(),
  mayReassign: z.boolean(),
  version,
});
export type Duty = z.infer<typeof duty>;

export const review = z.object({
  id: idNumber,
  doneAt: isoInstant,
  doneBy: person,
  conclusion: z.enum(reviewConclusions),
  answers: reviewAnswers,
  note: z.string(),
});
export type Review = z.infer<typeof review>;

const exampleDuty: Duty = {
  id: 21,
  kind: 'recalibration',
  state: 'open',
  siteId: 1,
  siteName: 'Tarnby',
  siteZone: 'Europe/Copenhagen',
  unitName: 'Furnace 1',
  softSensorId: 1,
  tagName: 'TY-1402',
  name: 'Crown interior temperature',
  importanceClass: 'A',
  life: 'in-service',
  health: 'fit',
  stoppedSince: null,
  dueOn: '2026-12-08',
  openedOn: '2026-09-08',
  today: '2026-12-01',
  daysLate: -7,
  owner: { id: 3, name: 'Marco Castellane' },
  deputy: { id: 4, name: 'Jun Brightwell' },
  assignees: [{ id: 3, name: 'Marco Castellane' }],
  reassigned: false,
  gaps: [],
  unreachable: [],
  lastDecision: {
    what: 'calibration',
    calibrationId: 7,
    kind: 'as-found',
    at: '2026-09-08T08:00:00.000Z',
    by: { id: 5, name: 'Ines Okafor-Lund' },
  },
  closedAt: null,
  closedBy: null,
  closedAs: null,
  reason: '',
  mayAttend: true,
  mayWaive: false,
  mayReassign: true,
  version: 1,
};

const exampleReview: Review = {
  id: 2,
  doneAt: '2026-06-02T08:00:00.000Z',
  doneBy: { id: 3, name: 'Marco Castellane' },
  conclusion: 'keep',
  answers: { purpose: true, consumers: true, inputs: true, validity: true, owner: true },
  note: '',
};

export const duties = {
  'duties.mine': endpoint({
    method: 'GET',
    path: '/duties',
    kind: 'json',
    summary: 'Duties, mine or of my sites; open ones by due date, closed ones by when they were closed',
    access: { may: 'site.view', on: 'sites' },
    query: z.object({
      ...pageQuery,
      whose: z.enum(['mine', 'sites']).default('sites'),
      state: z.enum(['open', 'closed']).default('open'),
      kind: z.enum(dutyKinds).optional(),
      siteId: idText.optional(),
      softSensorId: idText.optional(),
    }),
    reply: paged(duty).extend({
      /** Open ones of this choice, on all pages: past their date, due today, due within 30 days. */
      late: z.number().int(),
      dueToday: z.number().int(),
      dueSoon: z.number().int(),
    }),
    example: { rows: [exampleDuty], total: 1, late: 0, dueToday: 0, dueSoon: 1 },
  }),
  'duties.waive': endpoint({
    method: 'POST',
    path: '/duties/:dutyId/waiver',
    kind: 'json',
    summary:
      'Waive a duty for this time, with a reason and a new date; the answer is the duty that takes its place',
    access: { may: 'duty.attend', on: 'duty' },
    params: ids('dutyId'),
    body: z.object({ reason: shortText('why it can wait', 400), dueOn: isoDate, version }),
    reply: duty,
    example: { ...exampleDuty, id: 22, dueOn: '2027-01-08' },
  }),
  'duties.reassign': endpoint({
    method: 'POST',
    path: '/duties/:dutyId/assignee',
    kind: 'json',
    summary: 'Give a duty to another engineer of the site, or back to the owner (null)',
    access: { may: 'duty.attend', on: 'duty' },
    params: ids('dutyId'),
    body: z.object({
      personId: idNumber.nullable(),
      reason: longText.max(400, 'Keep the reason under 400 characters.'),
      version,
    }),
    reply: duty,
    example: { ...exampleDuty, assignees: [{ id: 4, name: 'Jun Brightwell' }], reassigned: true, version: 2 },
  }),
  'reviews.add': endpoint({
    method: 'POST',
    path: '/soft-sensors/:softSensorId/reviews',
    kind: 'json',
    summary: 'Record a review; it closes the review duty and the next one opens',
    access: { may: 'duty.attend', on: 'softSensor' },
    params: ids('softSensorId'),
    body: z
      .object({ conclusion: z.enum(reviewConclusions), answers: reviewAnswers, note: longText })
      .superRefine(({ conclusion, answers, note }, context) => {
        if (note !== '') return;
        const say = (message: string) => context.addIssue({ code: 'custom', path: ['note'], message });
        if (Object.values(answers).includes(false))
          say('Write what is not in order, and what is done about it.');
        else if (conclusion === 'change') say('Write what is to be changed.');
        else if (conclusion === 'retire') say('Write why it is to be retired.');
      }),
    reply: review,
    example: exampleReview,
  }),
  'reviews.list': endpoint({
    method: 'GET',
    path: '/soft-sensors/:softSensorId/reviews',
    kind: 'json',
    summary: 'Reviews of a soft sensor, newest first',
    access: { may: 'site.view', on: 'softSensor' },
    params: ids('softSensorId'),
    reply: z.object({ rows: z.array(review) }),
    example: { rows: [exampleReview] },
  }),
};
