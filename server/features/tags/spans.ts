import { sql } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';

/** Counts a tag's readings anew: first, last, how many. For what was computed or removed; imports keep count as they go. */
export async function refreshSpan(tx: Queryable, siteId: number, tagId: number): Promise<void> {
  await tx.execute(sql`
    with counted as (
      select min(at) as first_at, max(at) as last_at, count(*) as readings
      from readings where site_id = ${siteId} and tag_id = ${tagId}
    ), gone as (
      delete from tag_spans where site_id = ${siteId} and tag_id = ${tagId} and (select readings from counted) = 0
    )
    insert into tag_spans (site_id, tag_id, first_at, last_at, last_value, readings)
    select ${siteId}, ${tagId}, c.first_at, c.last_at, r.value, c.readings
    from counted c join readings r on r.site_id = ${siteId} and r.tag_id = ${tagId} and r.at = c.last_at
    where c.readings > 0
    on conflict (site_id, tag_id) do update set
      first_at = excluded.first_at, last_at = excluded.last_at, last_value = excluded.last_value, readings = excluded.readings`);
}

/** Keeps count after an import: `added` readings more, the first and last of what was added or replaced. */
export async function widenSpans(
  tx: Queryable,
  siteId: number,
  changed: readonly { tagId: number; added: number; first: Date; last: Date }[],
): Promise<void> {
  const ids = sql.param(changed.map(({ tagId }) => tagId));
  const counts = sql.param(changed.map(({ added }) => added));
  const firsts = sql.param(changed.map(({ first }) => first.toISOString()));
  const lasts = sql.param(changed.map(({ last }) => last.toISOString()));
  await tx.execute(sql`
    insert into tag_spans (site_id, tag_id, first_at, last_at, last_value, readings)
    select ${siteId}, c.tag_id, c.first_at, c.last_at, r.value, c.added
    from unnest(${ids}::int[], ${firsts}::timestamptz[], ${lasts}::timestamptz[], ${counts}::int[])
      c (tag_id, first_at, last_at, added)
    cross join lateral (
      select value from readings r where r.site_id = ${siteId} and r.tag_id = c.tag_id and r.at = c.last_at limit 1
    ) r
    order by c.tag_id
    on conflict (site_id, tag_id) do update set
      first_at = least(tag_spans.first_at, excluded.first_at),
      last_at = greatest(tag_spans.last_at, excluded.last_at),
      last_value = case when excluded.last_at >= tag_spans.last_at then excluded.last_value else tag_spans.last_value end,
      readings = tag_spans.readings + excluded.readings`);
}
