import { sql } from 'drizzle-orm';
import {
  check,
  date,
  foreignKey,
  index,
  integer,
  jsonb,
  pgTable,
  text,
  unique,
  uniqueIndex,
} from 'drizzle-orm/pg-core';
import { type ReviewAnswers, dutyKinds, reviewConclusions } from '../../../shared/contracts/duties.ts';
import { calibrations } from './calibrations.ts';
import { identity, instant } from './columns.ts';
import { mails } from './mail.ts';
import { persons } from './people.ts';
import { revisions, softSensors } from './register.ts';

/** The yearly judgement of a whole soft sensor: purpose, inputs, validity region, owner. */
export const reviews = pgTable(
  'reviews',
  {
    id: identity(),
    siteId: integer('site_id').notNull(),
    softSensorId: integer('soft_sensor_id').notNull(),
    doneAt: instant('done_at').notNull(),
    doneBy: integer('done_by')
      .notNull()
      .references(() => persons.id),
    conclusion: text('conclusion', { enum: reviewConclusions }).notNull(),
    answers: jsonb('answers').$type<ReviewAnswers>().notNull(),
    note: text('note').notNull().default(''),
  },
  (t) => [
    unique('reviews_site_id_key').on(t.siteId, t.id),
    index('reviews_sensor').on(t.siteId, t.softSensorId, t.doneAt),
    foreignKey({
      name: 'reviews_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
    check('reviews_conclusion', sql`${t.conclusion} in ('keep', 'change', 'retire')`),
  ],
);

/** What a named person must attend to by a date at the site; at most one open of each kind a soft sensor. */
export const duties = pgTable(
  'duties',
  {
    id: identity(),
    siteId: integer('site_id').notNull(),
    softSensorId: integer('soft_sensor_id').notNull(),
    kind: text('kind', { enum: dutyKinds }).notNull(),
    dueOn: date('due_on', { mode: 'string' }).notNull(),
    openedAt: instant('opened_at').notNull(),
    openedOn: date('opened_on', { mode: 'string' }).notNull(),
    /** Whom it was reassigned to; null: the owner, or for an ownership gap the managers of the site. */
    assigneeId: integer('assignee_id').references(() => persons.id),
    state: text('state', { enum: ['open', 'done', 'waived'] })
      .notNull()
      .default('open'),
    closedAt: instant('closed_at'),
    closedBy: integer('closed_by').references(() => persons.id),
    reason: text('reason').notNull().default(''),
    calibrationId: integer('calibration_id'),
    reviewId: integer('review_id'),
    version: integer('version').notNull().default(1),
  },
  (t) => [
    unique('duties_site_id_key').on(t.siteId, t.id),
    uniqueIndex('duties_open_key')
      .on(t.siteId, t.softSensorId, t.kind)
      .where(sql`${t.state} = 'open'`),
    index('duties_due')
      .on(t.dueOn)
      .where(sql`${t.state} = 'open'`),
    foreignKey({
      name: 'duties_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
    foreignKey({
      name: 'duties_calibration_fk',
      columns: [t.siteId, t.calibrationId],
      foreignColumns: [calibrations.siteId, calibrations.id],
    }),
    foreignKey({
      name: 'duties_review_fk',
      columns: [t.siteId, t.reviewId],
      foreignColumns: [reviews.siteId, reviews.id],
    }),
    check('duties_kind', sql`${t.kind} in ('recalibration', 'review', 'ownership-gap')`),
    check('duties_state', sql`${t.state} in ('open', 'done', 'waived')`),
    check('duties_closed', sql`(${t.closedAt} is null) = (${t.state} = 'open')`),
    check('duties_waived', sql`${t.state} <> 'waived' or (${t.closedBy} is not null and ${t.reason} <> '')`),
  ],
);

/** An owner or deputy offers a soft sensor to a successor, who accepts in writing or declines. */
export const handovers = pgTable(
  'handovers',
  {
    id: identity(),
    siteId: integer('site_id').notNull(),
    softSensorId: integer('soft_sensor_id').notNull(),
    part: text('part', { enum: ['owner', 'deputy'] }).notNull(),
    fromId: integer('from_id').references(() => persons.id),
    toId: integer('to_id')
      .notNull()
      .references(() => persons.id),
    proposedAt: instant('proposed_at').notNull(),
    proposedBy: integer('proposed_by')
      .notNull()
      .references(() => persons.id),
    reason: text('reason').notNull().default(''),
    answer: text('answer', { enum: ['accepted', 'declined', 'withdrawn'] }),
    answeredAt: instant('answered_at'),
    answeredBy: integer('answered_by').references(() => persons.id),
    answerReason: text('answer_reason').notNull().default(''),
  },
  (t) => [
    unique('handovers_site_id_key').on(t.siteId, t.id),
    uniqueIndex('handovers_open_key')
      .on(t.siteId, t.softSensorId, t.part)
      .where(sql`${t.answer} is null`),
    index('handovers_to')
      .on(t.toId)
      .where(sql`${t.answer} is null`),
    foreignKey({
      name: 'handovers_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
    check('handovers_part', sql`${t.part} in ('owner', 'deputy')`),
    check('handovers_answer', sql`${t.answer} in ('accepted', 'declined', 'withdrawn')`),
    check(
      'handovers_answered',
      sql`(${t.answer} is null) = (${t.answeredAt} is null) and (${t.answer} is null) = (${t.answeredBy} is null)`,
    ),
    check(
      'handovers_by_successor',
      sql`${t.answer} is distinct from 'accepted' or ${t.answeredBy} = ${t.toId}`,
    ),
  ],
);

/** One mail a person and local day, with all that was decided to be told since the one before. */
export const digests = pgTable(
  'digests',
  {
    id: identity(),
    personId: integer('person_id')
      .notNull()
      .references(() => persons.id),
    day: date('day', { mode: 'string' }).notNull(),
    mailId: integer('mail_id')
      .notNull()
      .references(() => mails.id),
    composedAt: instant('composed_at').notNull(),
  },
  (t) => [unique('digests_person_day_key').on(t.personId, t.day)],
);

/**
 * That one person must be told of one thing: a stage of a duty (days after it was due; negative: before), a proposal that
 * waits for their decision, a handover that waits for their answer. The unique key makes any number of scans decide it once.
 */
export const notices = pgTable(
  'notices',
  {
    id: identity(),
    siteId: integer('site_id').notNull(),
    dutyId: integer('duty_id'),
    calibrationId: integer('calibration_id'),
    revisionId: integer('revision_id'),
    handoverId: integer('handover_id'),
    stage: integer('stage').notNull().default(0),
    personId: integer('person_id')
      .notNull()
      .references(() => persons.id),
    decidedAt: instant('decided_at').notNull(),
    digestId: integer('digest_id').references(() => digests.id),
    /** It went stale before a digest could carry it: done, decided or answered meanwhile. */
    droppedAt: instant('dropped_at'),
  },
  (t) => [
    unique('notices_once')
      .on(t.dutyId, t.calibrationId, t.revisionId, t.handoverId, t.stage, t.personId)
      .nullsNotDistinct(),
    index('notices_waiting')
      .on(t.personId)
      .where(sql`${t.digestId} is null and ${t.droppedAt} is null`),
    index('notices_digest').on(t.digestId),
    foreignKey({
      name: 'notices_duty_fk',
      columns: [t.siteId, t.dutyId],
      foreignColumns: [duties.siteId, duties.id],
    }),
    foreignKey({
      name: 'notices_calibration_fk',
      columns: [t.siteId, t.calibrationId],
      foreignColumns: [calibrations.siteId, calibrations.id],
    }),
    foreignKey({
      name: 'notices_revision_fk',
      columns: [t.siteId, t.revisionId],
      foreignColumns: [revisions.siteId, revisions.id],
    }),
    foreignKey({
      name: 'notices_handover_fk',
      columns: [t.siteId, t.handoverId],
      foreignColumns: [handovers.siteId, handovers.id],
    }),
    check(
      'notices_subject',
      sql`num_nonnulls(${t.dutyId}, ${t.calibrationId}, ${t.revisionId}, ${t.handoverId}) = 1`,
    ),
  ],
);
