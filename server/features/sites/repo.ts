import { and, asc, eq, inArray } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';
import { areas, sites, units } from '../../db/schema/index.ts';

export type SiteRow = typeof sites.$inferSelect;
export type AreaRow = typeof areas.$inferSelect;
export type UnitRow = typeof units.$inferSelect;

const siteColumns = {
  id: sites.id,
  name: sites.name,
  zone: sites.zone,
  shifts: sites.shifts,
  archivedAt: sites.archivedAt,
  version: sites.version,
};
const unitColumns = {
  id: units.id,
  siteId: units.siteId,
  areaId: units.areaId,
  areaName: areas.name,
  name: units.name,
  archivedAt: units.archivedAt,
  version: units.version,
};

export async function listSites(db: Queryable, siteIds: number[] | 'every') {
  const where = siteIds === 'every' ? undefined : inArray(sites.id, siteIds.length > 0 ? siteIds : [0]);
  return db.select(siteColumns).from(sites).where(where).orderBy(asc(sites.name));
}

export async function getSite(db: Queryable, id: number) {
  const [row] = await db.select(siteColumns).from(sites).where(eq(sites.id, id));
  return row!;
}

export async function listAreas(db: Queryable, siteId: number) {
  return db.select().from(areas).where(eq(areas.siteId, siteId)).orderBy(asc(areas.name));
}

export async function listUnits(db: Queryable, siteId: number) {
  return db
    .select(unitColumns)
    .from(units)
    .innerJoin(areas, and(eq(areas.siteId, units.siteId), eq(areas.id, units.areaId)))
    .where(eq(units.siteId, siteId))
    .orderBy(asc(areas.name), asc(units.name));
}

export async function getUnit(db: Queryable, siteId: number, id: number) {
  const [row] = await db
    .select(unitColumns)
    .from(units)
    .innerJoin(areas, and(eq(areas.siteId, units.siteId), eq(areas.id, units.areaId)))
    .where(and(eq(units.siteId, siteId), eq(units.id, id)));
  return row!;
}

/** Keeps the area as it is until the transaction ends. */
export async function holdArea(db: Queryable, siteId: number, id: number): Promise<AreaRow | null> {
  const [row] = await db
    .select()
    .from(areas)
    .where(and(eq(areas.siteId, siteId), eq(areas.id, id)))
    .for('share');
  return row ?? null;
}
