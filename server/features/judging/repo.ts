import { and, asc, desc, eq, gt, gte, isNull, lte, sql } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';
import { lifeStates, pairs, samples, softSensorStatus } from '../../db/schema/index.ts';
import type { SensorRow } from '../estimates/repo.ts';

export type PairRow = typeof pairs.$inferSelect;
export type SampleRow = typeof samples.$inferSelect;

/** Pairs whose sample was superseded, withdrawn, held or released since no longer stand; they are kept. */
export async function retireOrphanPairs(tx: Queryable, sensor: SensorRow, now: Date): Promise<void> {
  await tx.execute(sql`
    update pairs p set superseded_at = ${now.toISOString()}::timestamptz
    from samples s
    where p.site_id = ${sensor.siteId} and p.soft_sensor_id = ${sensor.id} and p.superseded_at is null
      and s.site_id = p.site_id and s.id = p.sample_id
      and (s.superseded_at is not null or s.withdrawn_at is not null
        or (p.not_counted = 'held' and s.held_since is null) or (p.not_counted is null and s.held_since is not null)
        or s.sample_point_id is distinct from ${sensor.samplePointId}::int
        or (${sensor.methodId}::int is not null and s.method_id is not null and s.method_id <> ${sensor.methodId}::int))`);
}

/** Samples that judge this sensor and have no standing pair, or were taken at or after `from`; with that pair. */
export async function samplesToPair(tx: Queryable, sensor: SensorRow, from: Date | null) {
  if (sensor.samplePointId === null) return [];
  const since = from === null ? sql`false` : sql`${samples.takenAt} >= ${from.toISOString()}::timestamptz`;
  return tx
    .select({ sample: samples, pair: pairs })
    .from(samples)
    .leftJoin(
      pairs,
      and(
        eq(pairs.siteId, samples.siteId),
        eq(pairs.sampleId, samples.id),
        eq(pairs.softSensorId, sensor.id),
        isNull(pairs.supersededAt),
      ),
    )
    .where(
      and(
        eq(samples.siteId, sensor.siteId),
        eq(samples.samplePointId, sensor.samplePointId),
        isNull(samples.supersededAt),
        isNull(samples.withdrawnAt),
        sensor.methodId === null
          ? undefined
          : sql`coalesce(${samples.methodId}, ${sensor.methodId}) = ${sensor.methodId}`,
        sql`(${pairs.id} is null or ${since})`,
      ),
    )
    .orderBy(asc(samples.takenAt));
}

export async function supersedePairs(
  tx: Queryable,
  siteId: number,
  ids: readonly number[],
  now: Date,
): Promise<void> {
  if (ids.length === 0) return;
  await tx
    .update(pairs)
    .set({ supersededAt: now })
    .where(and(eq(pairs.siteId, siteId), sql`${pairs.id} = any(${sql.param([...ids])}::bigint[])`));
}

const rowsAtOnce = 3000;

export async function addPairs(tx: Queryable, rows: readonly (typeof pairs.$inferInsert)[]): Promise<void> {
  for (let from = 0; from < rows.length; from += rowsAtOnce) {
    await tx.insert(pairs).values(rows.slice(from, from + rowsAtOnce));
  }
}

/** Standing pairs of a sensor in order of the time taken; of a period where one is given. */
export async function standingPairs(db: Queryable, sensor: SensorRow, period?: { from: Date; to: Date }) {
  return db
    .select({ pair: pairs, sampleNumber: samples.sampleNumber })
    .from(pairs)
    .innerJoin(samples, and(eq(samples.siteId, pairs.siteId), eq(samples.id, pairs.sampleId)))
    .where(
      and(
        eq(pairs.siteId, sensor.siteId),
        eq(pairs.softSensorId, sensor.id),
        isNull(pairs.supersededAt),
        period ? and(gte(pairs.takenAt, period.from), lte(pairs.takenAt, period.to)) : undefined,
      ),
    )
    .orderBy(asc(pairs.takenAt), asc(pairs.sampleId));
}

/** The last standing pairs since an instant (or of all time) whose result was reported by `now`, oldest first. */
export async function lastPairs(
  db: Queryable,
  sensor: SensorRow,
  since: Date | null,
  now: Date,
  atMost: number,
): Promise<PairRow[]> {
  const rows = await db
    .select()
    .from(pairs)
    .where(
      and(
        eq(pairs.siteId, sensor.siteId),
        eq(pairs.softSensorId, sensor.id),
        isNull(pairs.supersededAt),
        lte(pairs.reportedAt, now),
        since === null ? undefined : gte(pairs.takenAt, since),
      ),
    )
    .orderBy(desc(pairs.takenAt), desc(pairs.sampleId))
    .limit(atMost);
  return rows.reverse();
}

/** Counted references taken after an instant (or ever) and reported by `now`. */
export async function countReferences(
  db: Queryable,
  sensor: SensorRow,
  after: Date | null,
  now: Date,
): Promise<number> {
  return db.$count(
    pairs,
    and(
      eq(pairs.siteId, sensor.siteId),
      eq(pairs.softSensorId, sensor.id),
      isNull(pairs.supersededAt),
      isNull(pairs.notCounted),
      lte(pairs.reportedAt, now),
      after === null ? undefined : gt(pairs.takenAt, after),
    ),
  );
}

export async function findStatus(db: Queryable, siteId: number, softSensorId: number) {
  const [row] = await db
    .select()
    .from(softSensorStatus)
    .where(and(eq(softSensorStatus.siteId, siteId), eq(softSensorStatus.softSensorId, softSensorId)));
  return row ?? null;
}

export async function saveStatus(tx: Queryable, row: typeof softSensorStatus.$inferInsert): Promise<void> {
  const { siteId: _siteId, softSensorId: _softSensorId, ...values } = row;
  await tx
    .insert(softSensorStatus)
    .values(row)
    .onConflictDoUpdate({ target: [softSensorStatus.siteId, softSensorStatus.softSensorId], set: values });
}

/** Keeps the health of a day; true where it is the day's first. */
export async function saveHealthDay(
  tx: Queryable,
  row: { siteId: number; softSensorId: number; day: string; health: string },
): Promise<boolean> {
  const saved = await tx.execute<{ fresh: boolean }>(sql`
    insert into health_days (site_id, soft_sensor_id, day, health)
    values (${row.siteId}, ${row.softSensorId}, ${row.day}, ${row.health})
    on conflict (site_id, soft_sensor_id, day) do update set health = excluded.health
    returning (xmax = 0) as fresh`);
  return saved.rows[0]!.fresh;
}

/** The life state that stands, or that stood at an instant. */
export async function lifeNow(db: Queryable, siteId: number, softSensorId: number, at?: Date) {
  const [row] = await db
    .select()
    .from(lifeStates)
    .where(
      and(
        eq(lifeStates.siteId, siteId),
        eq(lifeStates.softSensorId, softSensorId),
        at === undefined ? undefined : lte(lifeStates.effectiveFrom, at),
      ),
    )
    .orderBy(desc(lifeStates.effectiveFrom), desc(lifeStates.id))
    .limit(1);
  return row ?? null;
}

/** Soft sensors whose health time alone may change: all that are in service. */
export async function sensorsInService(db: Queryable): Promise<{ siteId: number; softSensorId: number }[]> {
  const found = await db.execute<{ siteId: number; softSensorId: number }>(sql`
    select site_id as "siteId", soft_sensor_id as "softSensorId" from current_life_states where state = 'in-service'`);
  return found.rows;
}

/** Samples that judge this sensor, with a time, taken in a period; oldest first. */
export async function samplesBetween(
  db: Queryable,
  sensor: SensorRow,
  from: Date,
  to: Date,
): Promise<SampleRow[]> {
  if (sensor.samplePointId === null) return [];
  return db
    .select()
    .from(samples)
    .where(
      and(
        eq(samples.siteId, sensor.siteId),
        eq(samples.samplePointId, sensor.samplePointId),
        isNull(samples.supersededAt),
        isNull(samples.withdrawnAt),
        gte(samples.takenAt, from),
        lte(samples.takenAt, to),
        sensor.methodId === null
          ? undefined
          : sql`coalesce(${samples.methodId}, ${sensor.methodId}) = ${sensor.methodId}`,
      ),
    )
    .orderBy(asc(samples.takenAt), asc(samples.id));
}
