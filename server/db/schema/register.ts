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
  text,
  unique,
  uniqueIndex,
} from 'drizzle-orm/pg-core';
import type { Interval } from '../../../shared/contracts/interval.ts';
import type { FitSummary, Model } from '../../../shared/contracts/models.ts';
import type { Consumer } from '../../../shared/contracts/register.ts';
import type { SamplingPlan } from '../../../shared/contracts/sampling.ts';
import { identity, instant } from './columns.ts';
import { persons } from './people.ts';
import { sites, units } from './sites.ts';
import { methods, samplePoints } from './samples.ts';
import { tags } from './tags.ts';

/** The data sheet: what is said of a soft sensor. What changes at a moment (owner, life, model) has a table of its own. */
export const softSensors = pgTable(
  'soft_sensors',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    unitId: integer('unit_id').notNull(),
    tagName: text('tag_name').notNull(),
    name: text('name').notNull(),
    quantity: text('quantity').notNull(),
    unit: text('unit').notNull(),
    decimals: integer('decimals').notNull(),
    rangeLow: doublePrecision('range_low'),
    rangeHigh: doublePrecision('range_high'),
    purpose: text('purpose').notNull().default(''),
    importanceClass: text('importance_class', { enum: ['A', 'B', 'C'] }).notNull(),
    consumers: jsonb('consumers').$type<Consumer[]>().notNull().default([]),
    estimateTagId: integer('estimate_tag_id').notNull(),
    samplePointId: integer('sample_point_id'),
    methodId: integer('method_id'),
    transportDelayMs: integer('transport_delay_ms').notNull().default(0),
    pairingWindowMs: integer('pairing_window_ms').notNull().default(0),
    /** How often a reference is asked for; null where nobody asks by plan. */
    samplingPlan: jsonb('sampling_plan').$type<SamplingPlan>(),
    steadyStateGate: boolean('steady_state_gate').notNull().default(true),
    promisedReferenceMs: doublePrecision('promised_reference_ms').notNull(),
    allowedErrorAbsolute: doublePrecision('allowed_error_absolute'),
    allowedErrorPercent: doublePrecision('allowed_error_percent'),
    allowedSpread: doublePrecision('allowed_spread'),
    logScale: boolean('log_scale').notNull().default(false),
    historyArrives: text('history_arrives', { enum: ['live', 'uploaded'] })
      .notNull()
      .default('uploaded'),
    historyEveryMs: doublePrecision('history_every_ms').notNull(),
    externalCorrectedSince: instant('external_corrected_since'),
    correctionMode: text('correction_mode', { enum: ['monitor', 'propose', 'automatic'] })
      .notNull()
      .default('propose'),
    updateFactor: doublePrecision('update_factor').notNull().default(0.2),
    recalibrationInterval: jsonb('recalibration_interval').$type<Interval>().notNull(),
    reviewInterval: jsonb('review_interval').$type<Interval>().notNull(),
    fallback: text('fallback').notNull().default(''),
    limitations: text('limitations').notNull().default(''),
    version: integer('version').notNull().default(1),
    createdAt: instant('created_at').notNull(),
    createdBy: integer('created_by')
      .notNull()
      .references(() => persons.id),
  },
  (t) => [
    unique('soft_sensors_site_id_key').on(t.siteId, t.id),
    uniqueIndex('soft_sensors_tag_name_key').on(t.siteId, sql`lower(${t.tagName})`),
    index('soft_sensors_sample_point').on(t.siteId, t.samplePointId),
    foreignKey({
      name: 'soft_sensors_unit_fk',
      columns: [t.siteId, t.unitId],
      foreignColumns: [units.siteId, units.id],
    }),
    foreignKey({
      name: 'soft_sensors_tag_fk',
      columns: [t.siteId, t.estimateTagId],
      foreignColumns: [tags.siteId, tags.id],
    }),
    foreignKey({
      name: 'soft_sensors_point_fk',
      columns: [t.siteId, t.samplePointId],
      foreignColumns: [samplePoints.siteId, samplePoints.id],
    }),
    foreignKey({
      name: 'soft_sensors_method_fk',
      columns: [t.siteId, t.methodId],
      foreignColumns: [methods.siteId, methods.id],
    }),
    check('soft_sensors_class', sql`${t.importanceClass} in ('A', 'B', 'C')`),
    check('soft_sensors_decimals', sql`${t.decimals} between 0 and 6`),
    check('soft_sensors_range', sql`${t.rangeLow} < ${t.rangeHigh}`),
    check('soft_sensors_allowed', sql`coalesce(${t.allowedErrorAbsolute}, ${t.allowedErrorPercent}) > 0`),
    check('soft_sensors_arrives', sql`${t.historyArrives} in ('live', 'uploaded')`),
    check('soft_sensors_mode', sql`${t.correctionMode} in ('monitor', 'propose', 'automatic')`),
    check('soft_sensors_factor', sql`${t.updateFactor} > 0 and ${t.updateFactor} <= 1`),
    check(
      'soft_sensors_intervals',
      sql`(${t.recalibrationInterval} ->> 'every')::int > 0 and (${t.reviewInterval} ->> 'every')::int > 0`,
    ),
  ],
);

/** Who looks after a soft sensor, from when; each row ends where the next begins. */
export const ownerships = pgTable(
  'ownerships',
  {
    id: identity(),
    siteId: integer('site_id').notNull(),
    softSensorId: integer('soft_sensor_id').notNull(),
    ownerId: integer('owner_id').references(() => persons.id),
    deputyId: integer('deputy_id').references(() => persons.id),
    approverId: integer('approver_id').references(() => persons.id),
    labContactId: integer('lab_contact_id').references(() => persons.id),
    effectiveFrom: instant('effective_from').notNull(),
    recordedBy: integer('recorded_by')
      .notNull()
      .references(() => persons.id),
    reason: text('reason').notNull().default(''),
  },
  (t) => [
    unique('ownerships_effective_key').on(t.siteId, t.softSensorId, t.effectiveFrom),
    foreignKey({
      name: 'ownerships_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
    check('ownerships_deputy', sql`${t.deputyId} <> ${t.ownerId}`),
  ],
);

/** Life of the record: draft, in validation, in service, suspended, retired; separate from health. */
export const lifeStates = pgTable(
  'life_states',
  {
    id: identity(),
    siteId: integer('site_id').notNull(),
    softSensorId: integer('soft_sensor_id').notNull(),
    state: text('state', {
      enum: ['draft', 'in-validation', 'in-service', 'suspended', 'retired'],
    }).notNull(),
    effectiveFrom: instant('effective_from').notNull(),
    recordedBy: integer('recorded_by')
      .notNull()
      .references(() => persons.id),
    reason: text('reason').notNull().default(''),
  },
  (t) => [
    unique('life_states_effective_key').on(t.siteId, t.softSensorId, t.effectiveFrom),
    foreignKey({
      name: 'life_states_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
    check(
      'life_states_state',
      sql`${t.state} in ('draft', 'in-validation', 'in-service', 'suspended', 'retired')`,
    ),
  ],
);

/** A model being worked on; the only editable form of a model. */
export const drafts = pgTable(
  'drafts',
  {
    id: identity(),
    siteId: integer('site_id').notNull(),
    softSensorId: integer('soft_sensor_id').notNull(),
    model: jsonb('model').$type<Model>().notNull(),
    fit: jsonb('fit').$type<FitSummary>(),
    version: integer('version').notNull().default(1),
    updatedAt: instant('updated_at').notNull(),
    updatedBy: integer('updated_by')
      .notNull()
      .references(() => persons.id),
  },
  (t) => [
    unique('drafts_sensor_key').on(t.siteId, t.softSensorId),
    unique('drafts_site_id_key').on(t.siteId, t.id),
    foreignKey({
      name: 'drafts_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
  ],
);

/** One immutable version of a model. Only the decision is added to a row, once, by somebody who did not propose it. */
export const revisions = pgTable(
  'revisions',
  {
    id: identity(),
    siteId: integer('site_id').notNull(),
    softSensorId: integer('soft_sensor_id').notNull(),
    number: integer('number').notNull(),
    model: jsonb('model').$type<Model>().notNull(),
    fit: jsonb('fit').$type<FitSummary>(),
    reason: text('reason').notNull(),
    changeReference: text('change_reference').notNull().default(''),
    proposedAt: instant('proposed_at').notNull(),
    proposedBy: integer('proposed_by')
      .notNull()
      .references(() => persons.id),
    editedBy: integer('edited_by').array().notNull().default([]),
    decision: text('decision', { enum: ['approved', 'declined', 'withdrawn'] }),
    decidedAt: instant('decided_at'),
    decidedBy: integer('decided_by').references(() => persons.id),
    decisionReason: text('decision_reason').notNull().default(''),
    effectiveFrom: instant('effective_from'),
  },
  (t) => [
    unique('revisions_site_id_key').on(t.siteId, t.id),
    unique('revisions_number_key').on(t.siteId, t.softSensorId, t.number),
    unique('revisions_effective_key').on(t.siteId, t.softSensorId, t.effectiveFrom),
    foreignKey({
      name: 'revisions_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
    check('revisions_decision', sql`${t.decision} in ('approved', 'declined', 'withdrawn')`),
    check(
      'revisions_decided',
      sql`(${t.decision} is null) = (${t.decidedAt} is null) and (${t.decision} is null) = (${t.decidedBy} is null)`,
    ),
    check(
      'revisions_second_person',
      sql`${t.decision} is distinct from 'approved' or (${t.decidedBy} <> ${t.proposedBy} and not ${t.decidedBy} = any(${t.editedBy}))`,
    ),
    check(
      'revisions_effective',
      sql`(${t.effectiveFrom} is not null) = (${t.decision} is not distinct from 'approved') and ${t.effectiveFrom} >= ${t.decidedAt}`,
    ),
  ],
);
