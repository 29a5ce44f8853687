import { sql } from 'drizzle-orm';
import {
  bigint,
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
import type { ReplayFigures } from '../../../shared/contracts/judging.ts';
import type { Model } from '../../../shared/contracts/models.ts';
import { bigIdentity, bytes, identity, instant } from './columns.ts';
import { persons } from './people.ts';
import { drafts, revisions, softSensors } from './register.ts';
import { runs } from './runs.ts';
import { samples } from './samples.ts';

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
