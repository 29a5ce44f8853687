import { sql } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';
import { addJob } from '../../jobs/queue.ts';
import { markDirty } from '../estimates/work.ts';

/** Marks the hours of these tags between two instants, to be rolled up by a job. */
export async function rollUpLater(
  tx: Queryable,
  siteId: number,
  tagIds: number[],
  from: Date,
  to: Date,
): Promise<void> {
  const ids = sql`${sql.param(tagIds)}::int[]`;
  await tx.execute(sql`
    insert into dirty_hours (site_id, tag_id, hour)
    select ${siteId}, tag_id, hour
    from unnest(${ids}) tag_id,
      generate_series(date_trunc('hour', ${from.toISOString()}::timestamptz), ${to.toISOString()}::timestamptz, interval '1 hour') hour
    on conflict do nothing`);
  await addJob(tx, 'roll-up', { siteId }, { key: `roll-up:${siteId}` });
}

/** Readings of these tags changed between two instants: roll-ups and estimates that rest on them follow. */
export async function readingsChanged(
  tx: Queryable,
  change: { siteId: number; tagIds: number[]; from: Date; to: Date },
): Promise<void> {
  const { siteId, tagIds, from, to } = change;
  await rollUpLater(tx, siteId, tagIds, from, to);
  await markDirty(tx, siteId, tagIds, from);
}
