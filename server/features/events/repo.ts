import { and, desc, eq, gte, isNull, lte, type SQL, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { EventKind } from '../../../shared/contracts/events.ts';
import type { StandingEvent } from '../../../shared/rules/event-order.ts';
import { subjectKey } from '../../../shared/rules/event-outcomes.ts';
import type { Queryable } from '../../db/client.ts';
import { events, persons, softSensors, units } from '../../db/schema/index.ts';

export type EventRecord = typeof events.$inferSelect;

export interface EventFilter {
  page: number;
  perPage: number;
  kind?: EventKind | undefined;
  from?: string | undefined;
  to?: string | undefined;
  withdrawn: 'true' | 'false';
  /** A unit with its soft sensors. */
  unitId?: number | undefined;
  /** One soft sensor with its unit. */
  sensor?: { id: number; unitId: number } | undefined;
}

const withdrawers = alias(persons, 'withdrawers');
/** The unit of an event: its own, or that of its soft sensor. */
const unitOf = sql<number>`coalesce(${events.unitId}, ${softSensors.unitId})`;

const select = (db: Queryable) =>
  db
    .select({
      id: events.id,
      siteId: events.siteId,
      unitId: unitOf,
      unitName: units.name,
      softSensorId: events.softSensorId,
      tagName: softSensors.tagName,
      kind: events.kind,
      at: events.at,
      note: events.note,
      recordedBy: persons.name,
      recordedAt: events.recordedAt,
      withdrawnAt: events.withdrawnAt,
      withdrawnBy: withdrawers.name,
      withdrawnReason: events.withdrawnReason,
    })
    .from(events)
    .leftJoin(
      softSensors,
      and(eq(softSensors.siteId, events.siteId), eq(softSensors.id, events.softSensorId)),
    )
    .innerJoin(units, and(eq(units.siteId, events.siteId), eq(units.id, unitOf)))
    .innerJoin(persons, eq(persons.id, events.recordedBy))
    .leftJoin(withdrawers, eq(withdrawers.id, events.withdrawnBy));

/** Events of a site, newest first, and how many match. */
export async function listEvents(db: Queryable, siteId: number, filter: EventFilter) {
  const { unitId, sensor, kind, from, to, page, perPage } = filter;
  const where = and(
    eq(events.siteId, siteId),
    filter.withdrawn === 'true' ? undefined : isNull(events.withdrawnAt),
    kind && eq(events.kind, kind),
    from ? gte(events.at, new Date(from)) : undefined,
    to ? lte(events.at, new Date(to)) : undefined,
    unitId === undefined ? undefined : eq(unitOf, unitId),
    sensor && about(sensor),
  );
  const rows = await select(db)
    .where(where)
    .orderBy(desc(events.at), desc(events.id))
    .limit(perPage)
    .offset((page - 1) * perPage);
  const [found] = await db
    .select({ total: sql`count(*)`.mapWith(Number) })
    .from(events)
    .leftJoin(
      softSensors,
      and(eq(softSensors.siteId, events.siteId), eq(softSensors.id, events.softSensorId)),
    )
    .where(where);
  return { rows, total: found!.total };
}

const about = ({ id, unitId }: { id: number; unitId: number }): SQL =>
  sql`(${events.unitId} = ${unitId} or ${events.softSensorId} = ${id})`;

export async function getEvents(db: Queryable, siteId: number, ids: readonly number[]) {
  return select(db)
    .where(and(eq(events.siteId, siteId), sql`${events.id} = any(${sql.param([...ids])}::int[])`))
    .orderBy(desc(events.at), desc(events.id));
}

/** What is stopped at an instant, the longest first; of one soft sensor and its unit where one is given. */
export async function listStandstills(
  db: Queryable,
  siteId: number,
  now: Date,
  sensor?: { id: number; unitId: number },
) {
  const of = sensor ? sql`and (p.unit_id = ${sensor.unitId} or p.soft_sensor_id = ${sensor.id})` : sql``;
  const at = sql`${now.toISOString()}::timestamptz`;
  const found = await db.execute<Record<string, unknown> & StandstillRow>(sql`
    select u.id as "unitId", u.name as "unitName", s.id as "softSensorId", s.tag_name as "tagName",
      min(p.stopped_at) as since
    from stoppages p
    left join soft_sensors s on s.site_id = p.site_id and s.id = p.soft_sensor_id
    join units u on u.site_id = p.site_id and u.id = coalesce(p.unit_id, s.unit_id)
    where p.site_id = ${siteId} and p.stopped_at <= ${at} and (p.started_at is null or p.started_at > ${at}) ${of}
    group by u.id, u.name, s.id, s.tag_name order by since, u.name`);
  return found.rows.map(({ unitId, unitName, softSensorId, tagName, since }) => ({
    unitId,
    unitName,
    softSensorId,
    tagName,
    since: new Date(since),
  }));
}

interface StandstillRow {
  unitId: number;
  unitName: string;
  softSensorId: number | null;
  tagName: string | null;
  since: string | Date;
}

/** Events that stand at a site, by subject. */
export async function standingEvents(db: Queryable, siteId: number): Promise<Map<string, StandingEvent[]>> {
  const rows = await db
    .select({
      unitId: events.unitId,
      softSensorId: events.softSensorId,
      kind: events.kind,
      at: events.at,
    })
    .from(events)
    .where(and(eq(events.siteId, siteId), isNull(events.withdrawnAt)));
  const found = new Map<string, StandingEvent[]>();
  for (const { kind, at, ...subject } of rows) {
    const key = subjectKey(subject);
    const list = found.get(key);
    if (list) list.push({ kind, at: at.getTime() });
    else found.set(key, [{ kind, at: at.getTime() }]);
  }
  return found;
}

export async function insertEvents(
  tx: Queryable,
  rows: readonly (typeof events.$inferInsert)[],
): Promise<EventRecord[]> {
  const made: EventRecord[] = [];
  for (let from = 0; from < rows.length; from += 1000) {
    made.push(
      ...(await tx
        .insert(events)
        .values(rows.slice(from, from + 1000))
        .returning()),
    );
  }
  return made;
}

export async function setWithdrawn(
  tx: Queryable,
  { siteId, id }: { siteId: number; id: number },
  by: { personId: number; at: Date; reason: string },
): Promise<void> {
  await tx
    .update(events)
    .set({ withdrawnAt: by.at, withdrawnBy: by.personId, withdrawnReason: by.reason })
    .where(and(eq(events.siteId, siteId), eq(events.id, id)));
}

/** Soft sensors of a site with their units: by tag, for files, and by unit, to be judged again. */
export async function listSensors(db: Queryable, siteId: number) {
  return db
    .select({ id: softSensors.id, tagName: softSensors.tagName, unitId: softSensors.unitId })
    .from(softSensors)
    .where(eq(softSensors.siteId, siteId));
}
