import { sql } from 'drizzle-orm';
import { foreignKey, integer, jsonb, pgTable, text, unique, uniqueIndex } from 'drizzle-orm/pg-core';
import type { Shift } from '../../../shared/contracts/sampling.ts';
import { usualShifts } from '../../../shared/contracts/sites.ts';
import { identity, instant } from './columns.ts';

export const sites = pgTable(
  'sites',
  {
    id: identity(),
    name: text('name').notNull(),
    zone: text('zone').notNull(),
    /** When shifts begin, by the clock of the site; each lasts until the next begins. */
    shifts: jsonb('shifts').$type<Shift[]>().notNull().default(usualShifts),
    archivedAt: instant('archived_at'),
    version: integer('version').notNull().default(1),
    createdAt: instant('created_at').notNull().defaultNow(),
  },
  (t) => [uniqueIndex('sites_name_key').on(sql`lower(${t.name})`)],
);

export const areas = pgTable(
  'areas',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    name: text('name').notNull(),
    archivedAt: instant('archived_at'),
    version: integer('version').notNull().default(1),
  },
  (t) => [
    unique('areas_site_id_key').on(t.siteId, t.id),
    uniqueIndex('areas_name_key').on(t.siteId, sql`lower(${t.name})`),
  ],
);

export const units = pgTable(
  'units',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    areaId: integer('area_id').notNull(),
    name: text('name').notNull(),
    archivedAt: instant('archived_at'),
    version: integer('version').notNull().default(1),
  },
  (t) => [
    unique('units_site_id_key').on(t.siteId, t.id),
    uniqueIndex('units_name_key').on(t.siteId, t.areaId, sql`lower(${t.name})`),
    foreignKey({
      name: 'units_area_fk',
      columns: [t.siteId, t.areaId],
      foreignColumns: [areas.siteId, areas.id],
    }),
  ],
);
