import { sql } from 'drizzle-orm';
import { check, foreignKey, index, integer, pgTable, text, unique, uniqueIndex } from 'drizzle-orm/pg-core';
import { eventKinds } from '../../../shared/contracts/events.ts';
import { identity, instant } from './columns.ts';
import { persons } from './people.ts';
import { softSensors } from './register.ts';
import { units } from './sites.ts';

/** What happened to a unit, or to one soft sensor. A wrong record is withdrawn with a reason, never removed. */
export const events = pgTable(
  'events',
  {
    id: identity(),
    siteId: integer('site_id').notNull(),
    unitId: integer('unit_id'),
    softSensorId: integer('soft_sensor_id'),
    kind: text('kind', { enum: eventKinds }).notNull(),
    at: instant('at').notNull(),
    note: text('note').notNull().default(''),
    recordedBy: integer('recorded_by')
      .notNull()
      .references(() => persons.id),
    recordedAt: instant('recorded_at').notNull(),
    withdrawnAt: instant('withdrawn_at'),
    withdrawnBy: integer('withdrawn_by').references(() => persons.id),
    withdrawnReason: text('withdrawn_reason').notNull().default(''),
  },
  (t) => [
    unique('events_site_id_key').on(t.siteId, t.id),
    uniqueIndex('events_standing_key')
      .on(t.siteId, sql`coalesce(${t.unitId}, 0)`, sql`coalesce(${t.softSensorId}, 0)`, t.kind, t.at)
      .where(sql`${t.withdrawnAt} is null`),
    index('events_unit').on(t.siteId, t.unitId, t.at),
    index('events_sensor').on(t.siteId, t.softSensorId, t.at),
    foreignKey({
      name: 'events_unit_fk',
      columns: [t.siteId, t.unitId],
      foreignColumns: [units.siteId, units.id],
    }),
    foreignKey({
      name: 'events_sensor_fk',
      columns: [t.siteId, t.softSensorId],
      foreignColumns: [softSensors.siteId, softSensors.id],
    }),
    check('events_subject', sql`(${t.unitId} is null) <> (${t.softSensorId} is null)`),
    check(
      'events_kind',
      sql`${t.kind} in ('stop', 'start', 'grade-change', 'turnaround', 'instrument-replaced', 'method-change')`,
    ),
    check('events_withdrawn', sql`(${t.withdrawnAt} is null) = (${t.withdrawnBy} is null)`),
  ],
);
