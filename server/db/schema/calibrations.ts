import { sql } from 'drizzle-orm';
import {
  bigint,
  boolean,
  check,
  doublePrecision,
  foreignKey,
  index,
  integer,
  jsonb,
  pgTable,
  text,
  unique,
  uniqueIndex,
} from 'drizzle-orm/pg-core';
import {
  type CalibrationEvidence,
  calibrationKinds,
} from '../../../shared/contracts/calibration-evidence.ts';
import { identity, instant } from './columns.ts';
import { persons } from './people.ts';
import { revisions, softSensors } from './register.ts';

/**
 * Records of recalibrations: corrected = slope · raw + offset from `effectiveFrom` on, until the next one or the next
 * revision. Evidence and pairs are frozen as they were judged. Only the decision is added, once, and where the
 * correction lives in a control system, who entered it and when.
 */
export const calibrations = pgTable(
  'calibrations',
  {
    id: identity(),
    siteId: integer('site_id').notNull(),
    softSensorId: integer('soft_sensor_id').notNull(),
    revisionId: integer('revision_id').notNull(),
    number: integer('number').notNull(),
    kind: text('kind', { enum: calibrationKinds }).notNull(),
    slope: doublePrecision('slope').notNull(),
    offset: doublePrecision('offset').notNull(),
    slopeBefore: doublePrecision('slope_before').notNull(),
    offsetBefore: doublePrecision('offset_before').notNull(),
    evidence: jsonb('evidence').$type<CalibrationEvidence>().notNull(),
    pairIds: bigint('pair_ids', { mode: 'number' }).array().notNull(),
    ownerId: integer('owner_id').references(() => persons.id),
    reason: text('reason').notNull(),
    proposedAt: instant('proposed_at').notNull(),
    proposedBy: integer('proposed_by')
      .notNull()
      .references(() => persons.id),
    /** An external estimate is corrected where it is computed, so approval alone changes nothing. */
    toBeEntered: boolean('to_be_entered').notNull(),
    decision: text('decision', { enum: ['approved', 'confirmed', 'declined', 'withdrawn'] }),
    decidedAt: instant('decided_at'),
    decidedBy: integer('decided_by').references(() => persons.id),
    decisionReason: text('decision_reason').notNull().default(''),
    enteredBy: text('entered_by'),
    enteredAt: instant('entered_at'),
    enteredRecordedBy: integer('entered_recorded_by').references(() => persons.id),
    enteredRecordedAt: instant('entered_recorded_at'),
    effectiveFrom: instant('effective_from'),
  },
  (t) => [
    unique('calibrations_site_id_key').on(t.siteId, t.id),
    unique('calibrations_number_key').on(t.siteId, t.softSensorId, t.number),
    unique('calibrations_effective_key').on(t.siteId, t.softSensorId, t.effectiveFrom),
    uniqueIndex('calibrations_one_waiting')
      .on(t.siteId, t.softSensorId)
      .where(sql`${t.decision} is null`),
    index('calibrations_waiting')
      .on(t.siteId)
      .where(sql`${t.decision} is null`),
    foreignKey({
      name: 'calibrations_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
    foreignKey({
      name: 'calibrations_revision_fk',
      columns: [t.siteId, t.revisionId],
      foreignColumns: [revisions.siteId, revisions.id],
    }),
    check('calibrations_kind', sql`${t.kind} in ('as-found', 'bias', 'proportional', 'linear', 'deming')`),
    check('calibrations_slope', sql`${t.slope} > 0 and ${t.slopeBefore} > 0`),
    check('calibrations_decision', sql`${t.decision} in ('approved', 'confirmed', 'declined', 'withdrawn')`),
    check(
      'calibrations_decided',
      sql`(${t.decision} is null) = (${t.decidedAt} is null) and (${t.decision} is null) = (${t.decidedBy} is null)`,
    ),
    check(
      'calibrations_second_person',
      sql`${t.decision} is distinct from 'approved' or ${t.decidedBy} <> ${t.proposedBy}`,
    ),
    check(
      'calibrations_left_as_found',
      sql`${t.kind} <> 'as-found' or (${t.slope} = ${t.slopeBefore} and ${t.offset} = ${t.offsetBefore} and not ${t.toBeEntered})`,
    ),
    check(
      'calibrations_confirmed',
      sql`${t.decision} is distinct from 'confirmed' or (${t.kind} = 'as-found' and ${t.decidedBy} = ${t.proposedBy})`,
    ),
    check(
      'calibrations_entered',
      sql`(${t.enteredAt} is null) = (${t.enteredBy} is null) and (${t.enteredAt} is null or ${t.toBeEntered})`,
    ),
    check(
      'calibrations_effective',
      sql`(${t.effectiveFrom} is not null) = (coalesce(${t.decision} in ('approved', 'confirmed'), false) and (not ${t.toBeEntered} or ${t.enteredAt} is not null)) and ${t.effectiveFrom} >= ${t.decidedAt}`,
    ),
  ],
);
