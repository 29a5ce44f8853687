import { sql } from 'drizzle-orm';
import type { NotTakenReason, SamplingPlan } from '../../../shared/contracts/sampling.ts';
import type { Queryable } from '../../db/client.ts';

type Sensor = Record<string, unknown> & {
  id: number;
  tagName: string;
  quantity: string;
  unit: string;
  samplePointId: number;
  samplePoint: string;
  unitName: string | null;
  methodId: number | null;
  method: string | null;
  plan: SamplingPlan | null;
  stoppedSince: number | null;
};

/**
 * Soft sensors that have a sample point in use, with the stop that stands at an instant: those in service or in
 * validation, by their plan, and others for which somebody asks.
 */
export async function sampledSensors(db: Queryable, siteId: number, at: Date): Promise<Sensor[]> {
  const when = at.toISOString();
  const found = await db.execute<Sensor>(sql`
    select s.id, s.tag_name as "tagName", s.quantity, s.unit, p.id as "samplePointId", p.name as "samplePoint",
      coalesce(pu.name, su.name) as "unitName", m.id as "methodId", m.name as method,
      case when l.state in ('in-service', 'in-validation') then s.sampling_plan end as plan,
      (select (extract(epoch from min(t.stopped_at)) * 1000)::float8 from stoppages t
        where t.site_id = s.site_id and (t.unit_id = s.unit_id or t.soft_sensor_id = s.id)
          and t.stopped_at <= ${when}::timestamptz and (t.started_at is null or t.started_at > ${when}::timestamptz)
      ) as "stoppedSince"
    from soft_sensors s
    join current_life_states l on l.site_id = s.site_id and l.soft_sensor_id = s.id
    join sample_points p on p.site_id = s.site_id and p.id = s.sample_point_id and p.archived_at is null
    join units su on su.site_id = s.site_id and su.id = s.unit_id
    left join units pu on pu.site_id = p.site_id and pu.id = p.unit_id
    left join methods m on m.site_id = s.site_id and m.id = s.method_id and m.archived_at is null
    where s.site_id = ${siteId} and (l.state in ('in-service', 'in-validation') or l.state <> 'retired' and exists (
      select from sample_requests r
      where r.site_id = s.site_id and r.soft_sensor_id = s.id and r.withdrawn_at is null
        and r.until_at > ${when}::timestamptz))
    order by p.name, s.tag_name`);
  return found.rows;
}

type Request = Record<string, unknown> & {
  id: number;
  siteId: number;
  softSensorId: number;
  tagName: string;
  samplePoint: string;
  count: number;
  taken: number;
  takenBefore: number;
  fromAt: Date;
  untilAt: Date;
  reason: string;
  askedBy: string;
  askedAt: Date;
  withdrawnAt: Date | null;
  version: number;
};

/** Requests that are open at some time from an instant on, or the one with an id; `takenBefore` counts up to that instant. */
export async function listRequests(
  db: Queryable,
  siteId: number,
  from: Date,
  id?: number,
): Promise<Request[]> {
  const start = from.toISOString();
  const which =
    id === undefined ? sql`r.withdrawn_at is null and r.until_at > ${start}::timestamptz` : sql`r.id = ${id}`;
  const found = await db.execute<Request>(sql`
    select r.id, r.site_id as "siteId", r.soft_sensor_id as "softSensorId", s.tag_name as "tagName",
      p.name as "samplePoint", r.count, x.taken, x.before as "takenBefore", r.from_at as "fromAt",
      r.until_at as "untilAt", r.reason, q.name as "askedBy", r.asked_at as "askedAt",
      r.withdrawn_at as "withdrawnAt", r.version
    from sample_requests r
    join soft_sensors s on s.site_id = r.site_id and s.id = r.soft_sensor_id
    join sample_points p on p.site_id = r.site_id and p.id = r.sample_point_id
    join persons q on q.id = r.asked_by
    cross join lateral (
      select count(*)::int as taken, (count(*) filter (where t.taken_at < ${start}::timestamptz))::int as before
      from samples t
      where t.site_id = r.site_id and t.sample_point_id = r.sample_point_id and t.taken_at >= r.from_at
        and t.taken_at < r.until_at and t.superseded_at is null and t.withdrawn_at is null
        and (t.method_id is null or s.method_id is null or t.method_id = s.method_id)
    ) x
    where r.site_id = ${siteId} and ${which}
    order by r.asked_at, r.id`);
  const date = (value: Date | string | null) => (value === null ? null : new Date(value));
  return found.rows.map((row) => ({
    ...row,
    fromAt: date(row.fromAt)!,
    untilAt: date(row.untilAt)!,
    askedAt: date(row.askedAt)!,
    withdrawnAt: date(row.withdrawnAt),
  }));
}

type Taken = Record<string, unknown> & {
  id: number;
  samplePointId: number;
  methodId: number | null;
  sampleNumber: string;
  takenAt: number;
  asWritten: string;
  unit: string;
};

/** Samples of these points that stand and were taken in a span. */
export async function takenBetween(
  db: Queryable,
  siteId: number,
  samplePointIds: readonly number[],
  from: Date,
  until: Date,
): Promise<Taken[]> {
  const found = await db.execute<Taken>(sql`
    select id::float8 as id, sample_point_id as "samplePointId", method_id as "methodId", sample_number as "sampleNumber",
      (extract(epoch from taken_at) * 1000)::float8 as "takenAt", as_written as "asWritten",
      coalesce(stated_unit, unit) as unit
    from samples
    where site_id = ${siteId} and sample_point_id = any(${sql.param(samplePointIds)}::int[])
      and taken_at >= ${from.toISOString()}::timestamptz
      and taken_at < ${until.toISOString()}::timestamptz and superseded_at is null and withdrawn_at is null
    order by taken_at, id`);
  return found.rows;
}

type NotTakenRow = Record<string, unknown> & {
  id: number;
  samplePointId: number;
  askedFor: number;
  reason: NotTakenReason;
  note: string;
  by: string;
  at: Date;
};

export async function notTakenBetween(
  db: Queryable,
  siteId: number,
  from: Date,
  until: Date,
): Promise<NotTakenRow[]> {
  const found = await db.execute<NotTakenRow>(sql`
    select n.id, n.sample_point_id as "samplePointId", (extract(epoch from n.asked_for) * 1000)::float8 as "askedFor",
      n.reason, n.note, p.name as by, n.recorded_at as at
    from samples_not_taken n join persons p on p.id = n.recorded_by
    where n.site_id = ${siteId} and n.asked_for >= ${from.toISOString()}::timestamptz
      and n.asked_for < ${until.toISOString()}::timestamptz
    order by n.id`);
  return found.rows.map((row) => ({ ...row, at: new Date(row.at) }));
}

type Last = Record<string, unknown> & {
  samplePointId: number;
  asWritten: string;
  unit: string;
  takenAt: Date;
};

/** The last sample at each of these points before an instant. */
export async function lastTaken(
  db: Queryable,
  siteId: number,
  samplePointIds: readonly number[],
  before: Date,
): Promise<Map<number, Last>> {
  const found = await db.execute<Last>(sql`
    select p.id as "samplePointId", s.as_written as "asWritten", coalesce(s.stated_unit, s.unit) as unit,
      s.taken_at as "takenAt"
    from unnest(${sql.param(samplePointIds)}::int[]) as p(id)
    cross join lateral (
      select as_written, stated_unit, unit, taken_at from samples
      where site_id = ${siteId} and sample_point_id = p.id and taken_at <= ${before.toISOString()}::timestamptz
        and superseded_at is null and withdrawn_at is null
      order by taken_at desc limit 1
    ) s`);
  return new Map(found.rows.map((row) => [row.samplePointId, { ...row, takenAt: new Date(row.takenAt) }]));
}

/** Numbers that standing samples of these points bear and that begin with one of the stems, whatever their year. */
export async function numbersWith(
  db: Queryable,
  siteId: number,
  samplePointIds: readonly number[],
  stems: readonly string[],
): Promise<Set<string>> {
  const found = await db.execute<{ number: string }>(sql`
    select s.sample_number as number
    from (select distinct * from unnest(${sql.param(samplePointIds)}::int[], ${sql.param(stems)}::text[]) k(point, stem)) k
    join samples s on s.site_id = ${siteId} and s.sample_point_id = k.point and starts_with(s.sample_number, k.stem)
    where s.superseded_at is null and s.withdrawn_at is null`);
  return new Set(found.rows.map(({ number }) => number));
}
