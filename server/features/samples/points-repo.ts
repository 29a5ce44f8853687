import { and, asc, eq, isNull, ne, sql } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';
import { methods, samplePoints, units } from '../../db/schema/index.ts';

export type SamplePointRow = typeof samplePoints.$inferSelect;
export type MethodRow = typeof methods.$inferSelect;

/** A soft sensor in use, at the sample point from which it takes its references. */
export interface SensorAtPoint {
  samplePointId: number;
  softSensorId: number;
  tagName: string;
  unit: string;
  methodId: number | null;
}

/** Soft sensors that take samples, retired ones left out, by sample point. */
export async function sensorsByPoint(db: Queryable, siteId: number): Promise<Map<number, SensorAtPoint[]>> {
  const found = await db.execute<SensorAtPoint & Record<string, unknown>>(sql`
    select s.sample_point_id as "samplePointId", s.id as "softSensorId", s.tag_name as "tagName", s.unit,
      s.method_id as "methodId"
    from soft_sensors s
    left join current_life_states l on l.site_id = s.site_id and l.soft_sensor_id = s.id
    where s.site_id = ${siteId} and s.sample_point_id is not null and l.state is distinct from 'retired'
    order by s.tag_name`);
  const by = new Map<number, SensorAtPoint[]>();
  for (const sensor of found.rows)
    by.set(sensor.samplePointId, [...(by.get(sensor.samplePointId) ?? []), sensor]);
  return by;
}

export async function listSamplePoints(db: Queryable, siteId: number, id?: number) {
  const rows = await db
    .select({
      id: samplePoints.id,
      siteId: samplePoints.siteId,
      unitId: samplePoints.unitId,
      unitName: units.name,
      name: samplePoints.name,
      aliases: samplePoints.aliases,
      archivedAt: samplePoints.archivedAt,
      version: samplePoints.version,
    })
    .from(samplePoints)
    .leftJoin(units, and(eq(units.siteId, samplePoints.siteId), eq(units.id, samplePoints.unitId)))
    .where(and(eq(samplePoints.siteId, siteId), id === undefined ? undefined : eq(samplePoints.id, id)))
    .orderBy(asc(samplePoints.name));
  const sensors = await sensorsByPoint(db, siteId);
  return rows.map((row) => ({
    ...row,
    goesTo: (sensors.get(row.id) ?? []).map(({ samplePointId: _point, ...sensor }) => sensor),
  }));
}

export async function getSamplePoint(db: Queryable, siteId: number, id: number) {
  const [row] = await listSamplePoints(db, siteId, id);
  return row!;
}

/** A sample point in use; null for one that is archived or of another site. */
export async function findPointInUse(db: Queryable, siteId: number, id: number) {
  const [row] = await db
    .select({ id: samplePoints.id, name: samplePoints.name })
    .from(samplePoints)
    .where(and(eq(samplePoints.siteId, siteId), eq(samplePoints.id, id), isNull(samplePoints.archivedAt)));
  return row ?? null;
}

export async function listMethods(db: Queryable, siteId: number): Promise<MethodRow[]> {
  return db.select().from(methods).where(eq(methods.siteId, siteId)).orderBy(asc(methods.name));
}

/** A method in use; null for one that is archived or of another site. */
export async function findMethod(db: Queryable, siteId: number, id: number): Promise<MethodRow | null> {
  const [row] = await db
    .select()
    .from(methods)
    .where(and(eq(methods.siteId, siteId), eq(methods.id, id), isNull(methods.archivedAt)));
  return row ?? null;
}

/** Does another method of the site bear the name? */
export async function methodNameTaken(
  db: Queryable,
  siteId: number,
  name: string,
  exceptId: number | null,
): Promise<boolean> {
  const same = sql`lower(${methods.name}) = lower(${name})`;
  const other = exceptId === null ? undefined : ne(methods.id, exceptId);
  return (await db.$count(methods, and(eq(methods.siteId, siteId), same, other))) > 0;
}

/** The other sample point of the site that goes by a name, as its own or as another one; null where none does. */
export async function findPointCalled(
  db: Queryable,
  siteId: number,
  name: string,
  exceptId: number | null,
): Promise<{ id: number; name: string } | null> {
  const [row] = await db
    .select({ id: samplePoints.id, name: samplePoints.name })
    .from(samplePoints)
    .where(
      and(
        eq(samplePoints.siteId, siteId),
        exceptId === null ? undefined : ne(samplePoints.id, exceptId),
        sql`lower(${name}) in (select lower(known) from unnest(${samplePoints.aliases} || ${samplePoints.name}) known)`,
      ),
    )
    .limit(1);
  return row ?? null;
}
