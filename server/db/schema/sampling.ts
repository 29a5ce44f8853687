import { sql } from 'drizzle-orm';
import {
  bigint,
  check,
  doublePrecision,
  foreignKey,
  index,
  integer,
  pgTable,
  text,
  unique,
  uniqueIndex,
  uuid,
} from 'drizzle-orm/pg-core';
import { identity, instant } from './columns.ts';
import { persons } from './people.ts';
import { softSensors } from './register.ts';
import { methods, samplePoints, samples } from './samples.ts';
import { sites } from './sites.ts';

/** Samples that somebody asks for beyond the plan, from a time to a time. */
export const sampleRequests = pgTable(
  'sample_requests',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    softSensorId: integer('soft_sensor_id').notNull(),
    samplePointId: integer('sample_point_id').notNull(),
    count: integer('count').notNull(),
    fromAt: instant('from_at').notNull(),
    untilAt: instant('until_at').notNull(),
    reason: text('reason').notNull().default(''),
    askedBy: integer('asked_by')
      .notNull()
      .references(() => persons.id),
    askedAt: instant('asked_at').notNull(),
    withdrawnAt: instant('withdrawn_at'),
    withdrawnBy: integer('withdrawn_by').references(() => persons.id),
    version: integer('version').notNull().default(1),
  },
  (t) => [
    unique('sample_requests_site_id_key').on(t.siteId, t.id),
    index('sample_requests_open').on(t.siteId, t.untilAt),
    foreignKey({
      name: 'sample_requests_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
    foreignKey({
      name: 'sample_requests_point_fk',
      columns: [t.siteId, t.samplePointId],
      foreignColumns: [samplePoints.siteId, samplePoints.id],
    }),
    check('sample_requests_count', sql`${t.count} between 1 and 50`),
    check('sample_requests_span', sql`${t.fromAt} < ${t.untilAt}`),
  ],
);

/** An asked-for sample that could not be taken, and why. */
export const samplesNotTaken = pgTable(
  'samples_not_taken',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    samplePointId: integer('sample_point_id').notNull(),
    askedFor: instant('asked_for').notNull(),
    reason: text('reason', { enum: ['unit-stopped', 'no-safe-access', 'bottle-lost', 'other'] }).notNull(),
    note: text('note').notNull().default(''),
    entryKey: uuid('entry_key').notNull(),
    recordedBy: integer('recorded_by')
      .notNull()
      .references(() => persons.id),
    recordedAt: instant('recorded_at').notNull(),
  },
  (t) => [
    unique('samples_not_taken_entry_key').on(t.siteId, t.entryKey),
    index('samples_not_taken_point').on(t.siteId, t.samplePointId, t.askedFor),
    foreignKey({
      name: 'samples_not_taken_point_fk',
      columns: [t.siteId, t.samplePointId],
      foreignColumns: [samplePoints.siteId, samplePoints.id],
    }),
    check(
      'samples_not_taken_reason',
      sql`${t.reason} in ('unit-stopped', 'no-safe-access', 'bottle-lost', 'other')`,
    ),
    check('samples_not_taken_note', sql`${t.reason} <> 'other' or ${t.note} <> ''`),
  ],
);

/** A second analysis asked of the laboratory for a result that is held, and what came of it. */
export const retests = pgTable(
  'retests',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    sampleId: bigint('sample_id', { mode: 'number' }).notNull(),
    askedBy: integer('asked_by')
      .notNull()
      .references(() => persons.id),
    askedAt: instant('asked_at').notNull(),
    reason: text('reason').notNull(),
    answer: text('answer', { enum: ['result', 'no-bottle', 'not-needed'] }),
    answeredBy: integer('answered_by').references(() => persons.id),
    answeredAt: instant('answered_at'),
    note: text('note').notNull().default(''),
    resultSampleId: bigint('result_sample_id', { mode: 'number' }),
  },
  (t) => [
    unique('retests_site_id_key').on(t.siteId, t.id),
    uniqueIndex('retests_open_key')
      .on(t.siteId, t.sampleId)
      .where(sql`${t.answer} is null`),
    foreignKey({
      name: 'retests_sample_fk',
      columns: [t.siteId, t.sampleId],
      foreignColumns: [samples.siteId, samples.id],
    }),
    foreignKey({
      name: 'retests_result_fk',
      columns: [t.siteId, t.resultSampleId],
      foreignColumns: [samples.siteId, samples.id],
    }),
    check('retests_answer', sql`${t.answer} in ('result', 'no-bottle', 'not-needed')`),
    check('retests_answered', sql`(${t.answer} is null) = (${t.answeredAt} is null)`),
  ],
);

/** A material of known value that the laboratory measures again and again by one method. */
export const checkStandards = pgTable(
  'check_standards',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    methodId: integer('method_id').notNull(),
    name: text('name').notNull(),
    acceptedValue: doublePrecision('accepted_value').notNull(),
    archivedAt: instant('archived_at'),
    version: integer('version').notNull().default(1),
  },
  (t) => [
    unique('check_standards_site_id_key').on(t.siteId, t.id),
    uniqueIndex('check_standards_name_key').on(t.siteId, t.methodId, sql`lower(${t.name})`),
    foreignKey({
      name: 'check_standards_method_fk',
      columns: [t.siteId, t.methodId],
      foreignColumns: [methods.siteId, methods.id],
    }),
  ],
);

/** Results on a check standard; those of one series were found by one person in one run (repeatability conditions). */
export const checkResults = pgTable(
  'check_results',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    standardId: integer('standard_id').notNull(),
    measuredAt: instant('measured_at').notNull(),
    analyst: text('analyst').notNull().default(''),
    values: doublePrecision('values').array().notNull(),
    recordedBy: integer('recorded_by')
      .notNull()
      .references(() => persons.id),
    recordedAt: instant('recorded_at').notNull(),
    withdrawnAt: instant('withdrawn_at'),
    withdrawnReason: text('withdrawn_reason'),
  },
  (t) => [
    unique('check_results_site_id_key').on(t.siteId, t.id),
    index('check_results_standard').on(t.siteId, t.standardId, t.measuredAt),
    foreignKey({
      name: 'check_results_standard_fk',
      columns: [t.siteId, t.standardId],
      foreignColumns: [checkStandards.siteId, checkStandards.id],
    }),
    check('check_results_some', sql`cardinality(${t.values}) >= 1`),
    check('check_results_withdrawn', sql`(${t.withdrawnAt} is null) = (${t.withdrawnReason} is null)`),
  ],
);
