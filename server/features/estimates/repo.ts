import { and, asc, eq, isNotNull, sql } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';
import { drafts, methods, revisions, softSensors, tags, tagSpans } from '../../db/schema/index.ts';

export type SensorRow = typeof softSensors.$inferSelect;
export type RevisionRow = typeof revisions.$inferSelect;

export async function findSensor(db: Queryable, siteId: number, id: number): Promise<SensorRow | null> {
  const [row] = await db
    .select()
    .from(softSensors)
    .where(and(eq(softSensors.siteId, siteId), eq(softSensors.id, id)));
  return row ?? null;
}

/** Approved revisions, the first in force first. */
export async function approvedRevisions(
  db: Queryable,
  siteId: number,
  softSensorId: number,
): Promise<RevisionRow[]> {
  return db
    .select()
    .from(revisions)
    .where(
      and(
        eq(revisions.siteId, siteId),
        eq(revisions.softSensorId, softSensorId),
        isNotNull(revisions.effectiveFrom),
      ),
    )
    .orderBy(asc(revisions.effectiveFrom));
}

export async function findDraft(db: Queryable, siteId: number, softSensorId: number) {
  const [row] = await db
    .select()
    .from(drafts)
    .where(and(eq(drafts.siteId, siteId), eq(drafts.softSensorId, softSensorId)));
  return row ?? null;
}

/** Takes the work that waits for a soft sensor: from when on it is out of date; null when it is not. */
export async function takeWork(db: Queryable, siteId: number, softSensorId: number): Promise<Date | null> {
  const taken = await db.execute<{ dirty_from: string | Date }>(
    sql`delete from soft_sensor_work where site_id = ${siteId} and soft_sensor_id = ${softSensorId} returning dirty_from`,
  );
  const from = taken.rows[0]?.dirty_from;
  return from === undefined ? null : new Date(from);
}

/** First and last reading of each tag; tags without readings are absent. */
export async function spansOf(db: Queryable, siteId: number, tagIds: readonly number[]) {
  const rows = await db
    .select({
      tagId: tagSpans.tagId,
      firstAt: tagSpans.firstAt,
      lastAt: tagSpans.lastAt,
      lastValue: tagSpans.lastValue,
    })
    .from(tagSpans)
    .where(and(eq(tagSpans.siteId, siteId), sql`${tagSpans.tagId} = any(${sql.param([...tagIds])}::int[])`));
  return new Map(rows.map((row) => [row.tagId, row]));
}

export async function tagNames(db: Queryable, siteId: number, tagIds: readonly number[]) {
  const rows = await db
    .select({ id: tags.id, name: tags.name, description: tags.description, unit: tags.unit })
    .from(tags)
    .where(and(eq(tags.siteId, siteId), sql`${tags.id} = any(${sql.param([...tagIds])}::int[])`));
  return new Map(rows.map((row) => [row.id, row]));
}

export async function methodOf(db: Queryable, sensor: SensorRow) {
  if (sensor.methodId === null) return null;
  const [row] = await db
    .select()
    .from(methods)
    .where(and(eq(methods.siteId, sensor.siteId), eq(methods.id, sensor.methodId)));
  return row ?? null;
}
