import { sql } from 'drizzle-orm';
import {
  bigint,
  check,
  doublePrecision,
  foreignKey,
  index,
  integer,
  pgTable,
  primaryKey,
  smallint,
  text,
  unique,
  uniqueIndex,
} from 'drizzle-orm/pg-core';
import { identity, instant } from './columns.ts';
import { sites, units } from './sites.ts';

export const tags = pgTable(
  'tags',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    unitId: integer('unit_id'),
    name: text('name').notNull(),
    description: text('description').notNull().default(''),
    unit: text('unit').notNull(),
    kind: text('kind', { enum: ['measured', 'estimate', 'shadow'] })
      .notNull()
      .default('measured'),
    rangeLow: doublePrecision('range_low'),
    rangeHigh: doublePrecision('range_high'),
    archivedAt: instant('archived_at'),
    version: integer('version').notNull().default(1),
  },
  (t) => [
    unique('tags_site_id_key').on(t.siteId, t.id),
    uniqueIndex('tags_name_key').on(t.siteId, sql`lower(${t.name})`),
    foreignKey({
      name: 'tags_unit_fk',
      columns: [t.siteId, t.unitId],
      foreignColumns: [units.siteId, units.id],
    }),
    check('tags_kind', sql`${t.kind} in ('measured', 'estimate', 'shadow')`),
    check('tags_range', sql`${t.rangeLow} < ${t.rangeHigh}`),
  ],
);

/**
 * Monthly partitions; the DDL is hand-written in the migration. No foreign keys (measured: they double the time
 * of an insert): imports check the tags. quality: 0 Good, 1 Uncertain, 2 Bad (OPC UA Part 8).
 */
export const readings = pgTable(
  'readings',
  {
    siteId: integer('site_id').notNull(),
    tagId: integer('tag_id').notNull(),
    at: instant('at').notNull(),
    value: doublePrecision('value').notNull(),
    sd: doublePrecision('sd'),
    quality: smallint('quality').notNull().default(0),
  },
  (t) => [primaryKey({ name: 'readings_pkey', columns: [t.siteId, t.tagId, t.at] })],
);

/** Hourly roll-up of readings, monthly partitions like `readings`. Figures are over Good and Uncertain readings. */
export const readingHours = pgTable(
  'reading_hours',
  {
    siteId: integer('site_id').notNull(),
    tagId: integer('tag_id').notNull(),
    hour: instant('hour').notNull(),
    readings: integer('readings').notNull(),
    bad: integer('bad').notNull(),
    mean: doublePrecision('mean'),
    low: doublePrecision('low'),
    high: doublePrecision('high'),
  },
  (t) => [primaryKey({ name: 'reading_hours_pkey', columns: [t.siteId, t.tagId, t.hour] })],
);

/** Hours whose roll-up is out of date; the roll-up job takes them. */
export const dirtyHours = pgTable(
  'dirty_hours',
  {
    siteId: integer('site_id').notNull(),
    tagId: integer('tag_id').notNull(),
    hour: instant('hour').notNull(),
  },
  (t) => [primaryKey({ name: 'dirty_hours_pkey', columns: [t.siteId, t.tagId, t.hour] })],
);

/** First, last and number of readings of a tag, kept by imports so that a list of tags need not count readings. */
export const tagSpans = pgTable(
  'tag_spans',
  {
    siteId: integer('site_id').notNull(),
    tagId: integer('tag_id').notNull(),
    firstAt: instant('first_at').notNull(),
    lastAt: instant('last_at').notNull(),
    lastValue: doublePrecision('last_value').notNull(),
    readings: bigint('readings', { mode: 'number' }).notNull(),
  },
  (t) => [
    primaryKey({ name: 'tag_spans_pkey', columns: [t.siteId, t.tagId] }),
    foreignKey({
      name: 'tag_spans_tag_fk',
      columns: [t.siteId, t.tagId],
      foreignColumns: [tags.siteId, tags.id],
    }),
    index('tag_spans_last').on(t.siteId, t.lastAt),
  ],
);
