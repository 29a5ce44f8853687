import { and, desc, eq, isNotNull, isNull, sql } from 'drizzle-orm';
import type { SampleReasonCode } from '../../../shared/contracts/sample-import.ts';
import { isHold, type SampleDraft } from '../../../shared/rules/sample-row.ts';
import { type StoredSample, sampleKey } from '../../../shared/rules/sample-outcomes.ts';
import type { Queryable } from '../../db/client.ts';
import { methods, samplePoints, samples } from '../../db/schema/index.ts';
import { type SensorAtPoint, sensorsByPoint } from './points-repo.ts';

interface SampleFilter {
  page: number;
  perPage: number;
  /** One sample, whether or not it still stands. */
  id?: number | undefined;
  samplePointId?: number | undefined;
  importId?: number | undefined;
}

/** Samples that stand, the last taken first, each with the soft sensors that it goes to. */
export async function listSamples(db: Queryable, siteId: number, filter: SampleFilter) {
  const where = and(
    eq(samples.siteId, siteId),
    filter.id === undefined
      ? and(isNull(samples.supersededAt), isNull(samples.withdrawnAt))
      : eq(samples.id, filter.id),
    filter.samplePointId === undefined ? undefined : eq(samples.samplePointId, filter.samplePointId),
    filter.importId === undefined ? undefined : eq(samples.importId, filter.importId),
  );
  const rows = await db
    .select({ sample: samples, samplePoint: samplePoints.name, method: methods.name })
    .from(samples)
    .innerJoin(
      samplePoints,
      and(eq(samplePoints.siteId, samples.siteId), eq(samplePoints.id, samples.samplePointId)),
    )
    .leftJoin(methods, and(eq(methods.siteId, samples.siteId), eq(methods.id, samples.methodId)))
    .where(where)
    .orderBy(
      desc(sql`coalesce(${samples.takenAt}, ${samples.takenOn}::timestamp at time zone 'UTC')`),
      desc(samples.id),
    )
    .limit(filter.perPage)
    .offset((filter.page - 1) * filter.perPage);
  const sensors = await sensorsByPoint(db, siteId);
  return {
    rows: rows.map(({ sample, samplePoint, method }) => ({
      ...sample,
      samplePoint,
      method,
      changed: sample.version > 1,
      goesTo: sensorsFor(sensors, sample.samplePointId, sample.methodId),
    })),
    total: await db.$count(samples, where),
  };
}

/** A sample judges the soft sensors at its point that ask for its method, or where either names none. */
export function sensorsFor(
  sensors: Map<number, SensorAtPoint[]>,
  samplePointId: number,
  methodId: number | null,
) {
  return (sensors.get(samplePointId) ?? [])
    .filter((sensor) => sensor.methodId === null || methodId === null || sensor.methodId === methodId)
    .map(({ softSensorId, tagName }) => ({ softSensorId, tagName }));
}

type StoredRow = StoredSample & Record<string, unknown>;

/**
 * What stands under the points and numbers of these drafts, by key. `asOf` asks what stood beside an import when it was
 * committed: everything but its own samples.
 */
export async function findStored(
  db: Queryable,
  siteId: number,
  methodId: number | null,
  drafts: readonly SampleDraft[],
  asOf: { importId: number; at: Date } | null,
): Promise<Map<string, StoredSample>> {
  if (drafts.length === 0) return new Map();
  const points = sql`${sql.param(drafts.map((draft) => draft.samplePointId))}::int[]`;
  const numbers = sql`${sql.param(drafts.map((draft) => draft.sampleNumber))}::text[]`;
  const atPoints = sql`${sql.param([...new Set(drafts.map((draft) => draft.samplePointId))])}::int[]`;
  const at = asOf?.at.toISOString() ?? null;
  const stands = asOf
    ? sql`s.import_id is distinct from ${asOf.importId} and s.entered_at <= ${at}::timestamptz
        and coalesce(s.superseded_at, 'infinity') > ${at}::timestamptz and coalesce(s.withdrawn_at, 'infinity') > ${at}::timestamptz`
    : sql`s.superseded_at is null and s.withdrawn_at is null`;
  const found = await db.execute<StoredRow>(sql`
    select s.sample_point_id as "samplePointId", s.sample_number as "sampleNumber",
      s.method_id is not distinct from ${methodId}::int as "sameMethod",
      (extract(epoch from s.taken_at) * 1000)::float8 as "takenAt", s.taken_on::text as "takenOn",
      s.value, s.qualifier, s.unit
    from (select distinct * from unnest(${points}, ${numbers}) as k(point, number)) k
    join samples s on s.sample_point_id = k.point and s.sample_number = k.number
    where s.site_id = ${siteId} and s.sample_point_id = any(${atPoints}) and ${stands}
      and (s.method_id is not distinct from ${methodId}::int or s.method_id is null or ${methodId}::int is null)
    order by (s.method_id is not distinct from ${methodId}::int)`);
  // The one with the method of the file comes last, and so wins.
  return new Map(found.rows.map((row) => [sampleKey(row), row]));
}

/** How a row of a file went in. */
export interface AddedLine {
  flags: string[];
  held: boolean;
}

/** The rows of a committed file that were added, by line; what a correction took the place of counts too. */
export async function linesAdded(
  db: Queryable,
  { siteId, id }: { siteId: number; id: number },
): Promise<Map<number, AddedLine>> {
  const rows = await db
    .select({ line: samples.line, flags: samples.flags })
    .from(samples)
    .where(and(eq(samples.siteId, siteId), eq(samples.importId, id), isNotNull(samples.line)));
  return new Map(
    rows.map(({ line, flags }) => [
      line!,
      { flags, held: flags.some((code) => isHold(code as SampleReasonCode)) },
    ]),
  );
}

export interface NewSamples {
  siteId: number;
  methodId: number | null;
  importId: number;
  enteredBy: number;
  enteredAt: Date;
  rows: { sample: SampleDraft; line: number; held: boolean; flags: string[] }[];
}

/** Adds samples by arrays: a hundred thousand rows are far more than bind parameters allow. */
export async function addSamples(tx: Queryable, added: NewSamples): Promise<void> {
  const { siteId, methodId, importId, enteredBy, rows } = added;
  const at = added.enteredAt.toISOString();
  const column = <T>(type: string, of: (row: NewSamples['rows'][number]) => T) =>
    sql`${sql.param(rows.map(of))}::${sql.raw(type)}[]`;
  const instant = (ms: number | null) => (ms === null ? null : new Date(ms).toISOString());
  await tx.execute(sql`
    insert into samples (site_id, sample_point_id, method_id, sample_number, taken_at, taken_on, reported_at, value,
      qualifier, unit, as_written, flags, held_since, stated_unit, stated_value, replicates, composite_ms, analyst,
      import_id, line, entered_by, entered_at)
    select ${siteId}::int, n.point, ${methodId}::int, n.number, n.taken_at, n.taken_on, n.reported_at, n.value,
      n.qualifier, n.unit, n.written, string_to_array(n.flags, ' '),
      case when n.held then ${at}::timestamptz end, n.stated_unit, n.stated_value,
      string_to_array(n.replicates, ' ')::float8[], n.composite_ms, n.analyst, ${importId}::int, n.line, ${enteredBy}::int,
      ${at}::timestamptz
    from unnest(
      ${column('int', ({ sample }) => sample.samplePointId)}, ${column('text', ({ sample }) => sample.sampleNumber)},
      ${column('timestamptz', ({ sample }) => instant(sample.takenAt))}, ${column('date', ({ sample }) => sample.takenOn)},
      ${column('timestamptz', ({ sample }) => instant(sample.reportedAt))}, ${column('float8', ({ sample }) => sample.value)},
      ${column('text', ({ sample }) => sample.qualifier)}, ${column('text', ({ sample }) => sample.unit)},
      ${column('text', ({ sample }) => sample.asWritten)}, ${column('text', ({ flags }) => flags.join(' '))},
      ${column('bool', ({ held }) => held)}, ${column('text', ({ sample }) => sample.statedUnit)},
      ${column('float8', ({ sample }) => sample.statedValue)},
      ${column('text', ({ sample }) => sample.replicates?.join(' ') ?? null)},
      ${column('int', ({ sample }) => sample.compositeMs)}, ${column('text', ({ sample }) => sample.analyst || null)},
      ${column('int', ({ line }) => line)}
    ) as n(point, number, taken_at, taken_on, reported_at, value, qualifier, unit, written, flags, held, stated_unit, stated_value, replicates,
      composite_ms, analyst, line)`);
}

/** Takes the samples of an import out again; returns the points they were at. */
export async function withdrawSamples(
  tx: Queryable,
  siteId: number,
  importId: number,
  now: Date,
): Promise<number[]> {
  const gone = await tx
    .update(samples)
    .set({ withdrawnAt: now })
    .where(and(eq(samples.siteId, siteId), eq(samples.importId, importId), isNull(samples.withdrawnAt)))
    .returning({ samplePointId: samples.samplePointId });
  return [...new Set(gone.map(({ samplePointId }) => samplePointId))];
}
