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
  primaryKey,
  text,
  unique,
  uniqueIndex,
} from 'drizzle-orm/pg-core';
import {
  healths,
  type ErrorStripPoint,
  type HealthReason,
  type ReplayFigures,
} from '../../../shared/contracts/judging.ts';
import type { Model } from '../../../shared/contracts/models.ts';
import { bigIdentity, bytes, identity, instant } from './columns.ts';
import { persons } from './people.ts';
import { drafts, revisions, softSensors } from './register.ts';
import { runs } from './runs.ts';
import { samples } from './samples.ts';
import { sites } from './sites.ts';

/** The earliest instant from which a soft sensor's estimate must be computed again; one row while there is work. */
export const softSensorWork = pgTable(
  'soft_sensor_work',
  {
    siteId: integer('site_id').notNull(),
    softSensorId: integer('soft_sensor_id').notNull(),
    dirtyFrom: instant('dirty_from').notNull(),
  },
  (t) => [
    primaryKey({ name: 'soft_sensor_work_pkey', columns: [t.siteId, t.softSensorId] }),
    foreignKey({
      name: 'soft_sensor_work_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
  ],
);

/** Daily state (and covariance) of an estimator, so that late data are computed from the day before them. */
export const checkpoints = pgTable(
  'checkpoints',
  {
    siteId: integer('site_id').notNull(),
    softSensorId: integer('soft_sensor_id').notNull(),
    revisionId: integer('revision_id').notNull(),
    at: instant('at').notNull(),
    state: bytes('state').notNull(),
  },
  (t) => [
    primaryKey({ name: 'checkpoints_pkey', columns: [t.siteId, t.softSensorId, t.revisionId, t.at] }),
    foreignKey({
      name: 'checkpoints_revision_fk',
      columns: [t.siteId, t.revisionId],
      foreignColumns: [revisions.siteId, revisions.id],
    }),
  ],
);

/** A sample beside the estimate of its moment; frozen. A changed input makes a new row that supersedes. */
export const pairs = pgTable(
  'pairs',
  {
    id: bigIdentity(),
    siteId: integer('site_id').notNull(),
    softSensorId: integer('soft_sensor_id').notNull(),
    sampleId: bigint('sample_id', { mode: 'number' }).notNull(),
    revisionId: integer('revision_id'),
    takenAt: instant('taken_at').notNull(),
    reportedAt: instant('reported_at').notNull(),
    reference: doublePrecision('reference').notNull(),
    estimate: doublePrecision('estimate'),
    estimateSd: doublePrecision('estimate_sd'),
    spread: doublePrecision('spread'),
    error: doublePrecision('error'),
    origin: text('origin', { enum: ['recorded', 'replayed'] }).notNull(),
    notCounted: text('not_counted'),
    computedAt: instant('computed_at').notNull(),
    supersededAt: instant('superseded_at'),
  },
  (t) => [
    unique('pairs_site_id_key').on(t.siteId, t.id),
    uniqueIndex('pairs_current_key')
      .on(t.siteId, t.softSensorId, t.sampleId)
      .where(sql`${t.supersededAt} is null`),
    index('pairs_taken').on(t.siteId, t.softSensorId, t.takenAt),
    foreignKey({
      name: 'pairs_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
    foreignKey({
      name: 'pairs_sample_fk',
      columns: [t.siteId, t.sampleId],
      foreignColumns: [samples.siteId, samples.id],
    }),
    foreignKey({
      name: 'pairs_revision_fk',
      columns: [t.siteId, t.revisionId],
      foreignColumns: [revisions.siteId, revisions.id],
    }),
    check('pairs_origin', sql`${t.origin} in ('recorded', 'replayed')`),
    check('pairs_counted', sql`${t.notCounted} is not null or ${t.error} is not null`),
    check('pairs_error', sql`(${t.error} is null) = (${t.estimate} is null)`),
  ],
);

/** All that the board reads; written in the transaction that judged. */
export const softSensorStatus = pgTable(
  'soft_sensor_status',
  {
    siteId: integer('site_id').notNull(),
    softSensorId: integer('soft_sensor_id').notNull(),
    health: text('health', { enum: healths }).notNull(),
    severity: integer('severity').notNull(),
    reasons: jsonb('reasons').$type<HealthReason[]>().notNull(),
    bias: doublePrecision('bias'),
    biasLow: doublePrecision('bias_low'),
    biasHigh: doublePrecision('bias_high'),
    rmse: doublePrecision('rmse'),
    counted: integer('counted').notNull().default(0),
    allowedError: doublePrecision('allowed_error'),
    lastErrors: jsonb('last_errors').$type<ErrorStripPoint[]>().notNull().default([]),
    lastReferenceAt: instant('last_reference_at'),
    lastReferenceValue: doublePrecision('last_reference_value'),
    currentAt: instant('current_at'),
    currentValue: doublePrecision('current_value'),
    currentSd: doublePrecision('current_sd'),
    healthSince: instant('health_since').notNull(),
    inService: boolean('in_service').notNull().default(false),
    ownerId: integer('owner_id').references(() => persons.id),
    /** Order on the board, worst first: health, then importance class, then bias against the allowed error. */
    rank: doublePrecision('rank').notNull().default(0),
    judgedAt: instant('judged_at').notNull(),
  },
  (t) => [
    primaryKey({ name: 'soft_sensor_status_pkey', columns: [t.siteId, t.softSensorId] }),
    index('soft_sensor_status_worst')
      .on(t.rank.desc())
      .where(sql`${t.inService}`),
    index('soft_sensor_status_unowned')
      .on(t.siteId)
      .where(sql`${t.inService} and ${t.ownerId} is null`),
    index('soft_sensor_status_owner').on(t.ownerId),
    foreignKey({
      name: 'soft_sensor_status_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
    check('soft_sensor_status_health', sql`${t.health} in ('fit', 'watch', 'unfit', 'unproven')`),
  ],
);

/** Counts of a site's soft sensors by health, recounted in the transaction that changed one. */
export const siteSummaries = pgTable('site_summaries', {
  siteId: integer('site_id')
    .primaryKey()
    .references(() => sites.id),
  total: integer('total').notNull(),
  fit: integer('fit').notNull(),
  watch: integer('watch').notNull(),
  unfit: integer('unfit').notNull(),
  unproven: integer('unproven').notNull(),
  unfitInClosedLoop: integer('unfit_in_closed_loop').notNull(),
  notInService: integer('not_in_service').notNull(),
});

/** The same at the last recount of each local month: its end, once the month is over. */
export const siteMonths = pgTable(
  'site_months',
  {
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    month: text('month').notNull(),
    unfit: integer('unfit').notNull(),
    unproven: integer('unproven').notNull(),
  },
  (t) => [
    primaryKey({ name: 'site_months_pkey', columns: [t.siteId, t.month] }),
    check('site_months_form', sql`${t.month} ~ '^\\d{4}-\\d{2}$'`),
  ],
);

/** Health at the end of each local day. */
export const healthDays = pgTable(
  'health_days',
  {
    siteId: integer('site_id').notNull(),
    softSensorId: integer('soft_sensor_id').notNull(),
    day: text('day').notNull(),
    health: text('health', { enum: healths }).notNull(),
  },
  (t) => [
    primaryKey({ name: 'health_days_pkey', columns: [t.siteId, t.softSensorId, t.day] }),
    index('health_days_day').on(t.siteId, t.day),
    foreignKey({
      name: 'health_days_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
    check('health_days_health', sql`${t.health} in ('fit', 'watch', 'unfit', 'unproven')`),
    check('health_days_day_form', sql`${t.day} ~ '^\\d{4}-\\d{2}-\\d{2}$'`),
  ],
);

/** What a model would have shown over a period: figures, chart points and the packed estimate, nothing in `readings`. */
export const replays = pgTable(
  'replays',
  {
    id: identity(),
    siteId: integer('site_id').notNull(),
    softSensorId: integer('soft_sensor_id').notNull(),
    revisionId: integer('revision_id'),
    draftId: integer('draft_id'),
    model: jsonb('model').$type<Model>().notNull(),
    fromAt: instant('from_at').notNull(),
    toAt: instant('to_at').notNull(),
    judgedFrom: instant('judged_from').notNull(),
    updateFactor: doublePrecision('update_factor').notNull(),
    runId: integer('run_id'),
    figures: jsonb('figures').$type<ReplayFigures>(),
    packed: bytes('packed'),
    createdBy: integer('created_by')
      .notNull()
      .references(() => persons.id),
    createdAt: instant('created_at').notNull(),
  },
  (t) => [
    unique('replays_site_id_key').on(t.siteId, t.id),
    index('replays_sensor').on(t.siteId, t.softSensorId, t.createdAt),
    foreignKey({
      name: 'replays_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
    foreignKey({
      name: 'replays_revision_fk',
      columns: [t.siteId, t.revisionId],
      foreignColumns: [revisions.siteId, revisions.id],
    }),
    foreignKey({
      name: 'replays_draft_fk',
      columns: [t.siteId, t.draftId],
      foreignColumns: [drafts.siteId, drafts.id],
    }),
    foreignKey({
      name: 'replays_run_fk',
      columns: [t.siteId, t.runId],
      foreignColumns: [runs.siteId, runs.id],
    }),
    check('replays_period', sql`${t.fromAt} < ${t.toAt}`),
  ],
);
