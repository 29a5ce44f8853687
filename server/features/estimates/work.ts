import { sql } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';

/**
 * Marks the soft sensors that rest on these tags (as inputs of the model in force, or as the tag where an external
 * estimate arrives) as out of date from an instant on, and queues one job for each.
 */
export async function markDirty(tx: Queryable, siteId: number, tagIds: number[], from: Date): Promise<void> {
  const marked = await tx.execute<{ id: number }>(sql`
    with touched as (
      select s.id from soft_sensors s
      left join lateral (
        select r.model from revisions r
        where r.site_id = s.site_id and r.soft_sensor_id = s.id and r.decision = 'approved'
        order by r.effective_from desc limit 1
      ) r on true
      where s.site_id = ${siteId}
        and (s.estimate_tag_id = any(${sql.param(tagIds)}::int[])
          or exists (
            select 1 from jsonb_array_elements(coalesce(r.model -> 'terms', '[]'::jsonb)) term
            where (term ->> 'tagId')::int = any(${sql.param(tagIds)}::int[])))
    )
    insert into soft_sensor_work (site_id, soft_sensor_id, dirty_from)
    select ${siteId}, id, ${from.toISOString()}::timestamptz from touched
    on conflict (site_id, soft_sensor_id) do update
      set dirty_from = least(soft_sensor_work.dirty_from, excluded.dirty_from)
    returning soft_sensor_id as id`);
  for (const { id } of marked.rows) await queueEstimate(tx, siteId, id);
}

/** Marks one soft sensor as out of date from an instant on. */
export async function markSensorDirty(
  tx: Queryable,
  siteId: number,
  softSensorId: number,
  from: Date,
): Promise<void> {
  await tx.execute(sql`
    insert into soft_sensor_work (site_id, soft_sensor_id, dirty_from)
    values (${siteId}, ${softSensorId}, ${from.toISOString()}::timestamptz)
    on conflict (site_id, soft_sensor_id) do update
      set dirty_from = least(soft_sensor_work.dirty_from, excluded.dirty_from)`);
  await queueEstimate(tx, siteId, softSensorId);
}

async function queueEstimate(tx: Queryable, siteId: number, softSensorId: number): Promise<void> {
  await tx.execute(sql`select graphile_worker.add_job('estimate', ${JSON.stringify({ siteId, softSensorId })}::json,
    job_key := ${`estimate:${softSensorId}`}, max_attempts := 5)`);
}
