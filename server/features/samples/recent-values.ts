import { sql } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';

const most = 30;

interface Row extends Record<string, unknown> {
  samplePointId: number;
  value: number;
  unit: string;
}

/**
 * The last results that count at each sample point under a method: not held, not beyond the method's range, with a time,
 * all in the unit that most of them have. In the order they were taken, thirty at most.
 * @param asOf asks what stood when an import was committed, its own samples aside
 */
export async function recentValues(
  db: Queryable,
  siteId: number,
  methodId: number | null,
  pointIds: readonly number[],
  asOf: { importId: number; at: Date } | null = null,
): Promise<Map<number, number[]>> {
  if (pointIds.length === 0) return new Map();
  const points = sql`${sql.param([...pointIds])}::int[]`;
  const at = asOf?.at.toISOString() ?? null;
  const stands = asOf
    ? sql`s.import_id is distinct from ${asOf.importId} and s.entered_at <= ${at}::timestamptz
        and coalesce(s.superseded_at, 'infinity') > ${at}::timestamptz and coalesce(s.withdrawn_at, 'infinity') > ${at}::timestamptz`
    : sql`s.superseded_at is null and s.withdrawn_at is null`;
  const found = await db.execute<Row>(sql`
    select p.id as "samplePointId", r.value, r.unit
    from unnest(${points}) p(id)
    cross join lateral (
      select s.value, s.unit, s.taken_at, s.id from samples s
      where s.site_id = ${siteId} and s.sample_point_id = p.id and s.method_id is not distinct from ${methodId}::int
        and ${stands} and s.held_since is null and s.qualifier is null and s.taken_at is not null
      order by s.taken_at desc, s.id desc limit ${most}) r
    order by p.id, r.taken_at, r.id`);
  const byPoint = new Map<number, Row[]>();
  for (const row of found.rows)
    byPoint.set(row.samplePointId, [...(byPoint.get(row.samplePointId) ?? []), row]);
  return new Map([...byPoint].map(([pointId, rows]) => [pointId, inOneUnit(rows)]));
}

function inOneUnit(rows: readonly Row[]): number[] {
  const counts = new Map<string, number>();
  for (const { unit } of rows) counts.set(unit, (counts.get(unit) ?? 0) + 1);
  const [usual] = [...counts].sort((a, b) => b[1] - a[1])[0]!;
  return rows.filter(({ unit }) => unit === usual).map(({ value }) => value);
}
