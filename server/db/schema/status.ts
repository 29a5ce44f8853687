import { sql } from 'drizzle-orm';
import {
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
} from 'drizzle-orm/pg-core';
import { type ErrorStripPoint, type HealthReason, healths } from '../../../shared/contracts/judging.ts';
import { instant } from './columns.ts';
import { persons } from './people.ts';
import { softSensors } from './register.ts';
import { sites } from './sites.ts';

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
    healthBefore: text('health_before', { enum: healths }),
    /** Since when the unit (or the soft sensor by itself) is stopped; health then stays as it was. */
    stoppedSince: instant('stopped_since'),
    recalibratedAt: instant('recalibrated_at'),
    /** Counted references taken since the last recalibration, or since it came into service. */
    referencesSince: integer('references_since').notNull().default(0),
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
    index('soft_sensor_status_not_fit')
      .on(t.rank.desc())
      .where(sql`${t.inService} and ${t.stoppedSince} is null and ${t.severity} > 0`),
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
  stopped: integer('stopped').notNull().default(0),
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

/** When a person last looked at the board, and the time before that, which "since you last looked" counts from. */
export const boardLooks = pgTable('board_looks', {
  personId: integer('person_id')
    .primaryKey()
    .references(() => persons.id),
  lookedAt: instant('looked_at').notNull(),
  previousAt: instant('previous_at'),
});
