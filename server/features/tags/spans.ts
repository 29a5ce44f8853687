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
