import { and, asc, eq, gte, lt, lte, sql } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';
import { readingHours, readings, tagSpans, tags, units } from '../../db/schema/index.ts';

export type TagRow = typeof tags.$inferSelect;

export async function listTags(
  db: Queryable,
  siteId: number,
  only: { unitId?: number; tagId?: number } = {},
) {
  return db
    .select({
      id: tags.id,
      siteId: tags.siteId,
      unitId: tags.unitId,
      unitName: units.name,
      name: tags.name,
      description: tags.description,
      unit: tags.unit,
      kind: tags.kind,
      rangeLow: tags.rangeLow,
      rangeHigh: tags.rangeHigh,
      archivedAt: tags.archivedAt,
      version: tags.version,
      readings: sql<number>`coalesce(${tagSpans.readings}, 0)::int`,
      firstAt: tagSpans.firstAt,
      lastAt: tagSpans.lastAt,
      lastValue: tagSpans.lastValue,
    })
    .from(tags)
    .leftJoin(units, and(eq(units.siteId, tags.siteId), eq(units.id, tags.unitId)))
    .leftJoin(tagSpans, and(eq(tagSpans.siteId, tags.siteId), eq(tagSpans.tagId, tags.id)))
    .where(
      and(
        eq(tags.siteId, siteId),
        only.unitId === undefined ? undefined : eq(tags.unitId, only.unitId),
        only.tagId === undefined ? undefined : eq(tags.id, only.tagId),
      ),
    )
    .orderBy(asc(tags.name));
}

export async function countReadings(
  db: Queryable,
  key: TagKey,
  from: Date,
  to: Date,
  atMost: number,
): Promise<number> {
  const some = db
    .select({ at: readings.at })
    .from(readings)
    .where(inPeriod(key, from, to))
    .limit(atMost + 1)
    .as('some');
  const [row] = await db.select({ count: sql<number>`count(*)::int` }).from(some);
  return row!.count;
}

interface TagKey {
  siteId: number;
  tagId: number;
}

const inPeriod = (key: TagKey, from: Date, to: Date) =>
  and(
    eq(readings.siteId, key.siteId),
    eq(readings.tagId, key.tagId),
    gte(readings.at, from),
    lte(readings.at, to),
  );

export async function listReadings(db: Queryable, key: TagKey, from: Date, to: Date) {
  return db
    .select({ at: readings.at, value: readings.value, sd: readings.sd, quality: readings.quality })
    .from(readings)
    .where(inPeriod(key, from, to))
    .orderBy(asc(readings.at));
}

/** Buckets of whole hours, as many hours each as keep the answer under `atMost` points. */
export async function listHours(db: Queryable, key: TagKey, from: Date, to: Date, atMost: number) {
  const hours = Math.max(1, Math.ceil((to.getTime() - from.getTime()) / 3_600_000 / atMost));
  const bucket = sql<number>`floor(extract(epoch from ${readingHours.hour}) / ${hours * 3600}) * ${hours * 3600}`;
  return db
    .select({
      seconds: bucket.mapWith(Number).as('seconds'),
      mean: sql<
        number | null
      >`sum(${readingHours.mean} * (${readingHours.readings} - ${readingHours.bad})) / nullif(sum(case when ${readingHours.mean} is null then 0 else ${readingHours.readings} - ${readingHours.bad} end), 0)`,
      low: sql<number | null>`min(${readingHours.low})`,
      high: sql<number | null>`max(${readingHours.high})`,
    })
    .from(readingHours)
    .where(
      and(
        eq(readingHours.siteId, key.siteId),
        eq(readingHours.tagId, key.tagId),
        gte(readingHours.hour, from),
        lt(readingHours.hour, to),
      ),
    )
    .groupBy(sql`1`)
    .orderBy(sql`1`);
}

/** Every name of a site's tags, for imports: lower-case name to tag. */
export async function tagsByName(db: Queryable, siteId: number): Promise<Map<string, TagRow>> {
  const rows = await db.select().from(tags).where(eq(tags.siteId, siteId));
  return new Map(rows.map((row) => [row.name.toLowerCase(), row]));
}

export async function findTag(db: Queryable, siteId: number, id: number): Promise<TagRow | null> {
  const [row] = await db
    .select()
    .from(tags)
    .where(and(eq(tags.siteId, siteId), eq(tags.id, id)));
  return row ?? null;
}

/** Removes readings; null where there were none, else how many and over which period they lay. */
export async function removeReadings(db: Queryable, key: TagKey, from: Date, to: Date) {
  const gone = await db.execute<{ removed: number; first: Date; last: Date }>(sql`
    with gone as (delete from ${readings} where ${inPeriod(key, from, to)} returning at)
    select count(*)::int as removed, min(at) as first, max(at) as last from gone`);
  const row = gone.rows[0]!;
  return row.removed === 0
    ? null
    : { removed: row.removed, first: new Date(row.first), last: new Date(row.last) };
}
