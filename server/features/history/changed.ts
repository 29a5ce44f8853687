import { sql } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';
import { addJob } from '../../jobs/queue.ts';
import { markDirty } from '../estimates/work.ts';
import { widenSpans } from '../tags/spans.ts';

/** One writer of history at a time and site until the transaction ends, so that what was compared or counted stays so. */
export async function lockHistory(tx: Queryable, siteId: number): Promise<void> {
  await tx.execute(sql`select pg_advisory_xact_lock(hashtext('cupel-history'), ${siteId}::int)`);
}

/**
 * Marks hours since 1970 of tags, to be rolled up by a job. A row that stands already is written anew: the roll-up may
 * be about to take it, and must then wait or see what was stored here.
 */
export async function markHours(
  tx: Queryable,
  siteId: number,
  parts: readonly { tagId: number; hours: Iterable<number> }[],
): Promise<void> {
  const tagIds: number[] = [];
  const hours: number[] = [];
  for (const part of parts) {
    for (const hour of part.hours) {
      tagIds.push(part.tagId);
      hours.push(hour);
    }
  }
  await tx.execute(sql`
    insert into dirty_hours (site_id, tag_id, hour)
    select ${siteId}, tag_id, to_timestamp(hour * 3600.0)
    from unnest(${sql.param(tagIds)}::int[], ${sql.param(hours)}::int[]) marked (tag_id, hour)
    order by tag_id, hour
    on conflict (site_id, tag_id, hour) do update set hour = excluded.hour`);
}

/** Marks every hour of these tags between two instants, to be rolled up by a job. */
export async function rollUpLater(
  tx: Queryable,
  siteId: number,
  tagIds: number[],
  from: Date,
  to: Date,
): Promise<void> {
  await tx.execute(sql`
    insert into dirty_hours (site_id, tag_id, hour)
    select ${siteId}, tag_id, hour
    from unnest(${sql.param(tagIds)}::int[]) tag_id,
      generate_series(
        date_bin('1 hour', ${from.toISOString()}::timestamptz, 'epoch'::timestamptz),
        ${to.toISOString()}::timestamptz,
        interval '1 hour'
      ) hour
    order by tag_id, hour
    on conflict (site_id, tag_id, hour) do update set hour = excluded.hour`);
  await queueRollUp(tx, siteId);
}

export const queueRollUp = (tx: Queryable, siteId: number) =>
  addJob(tx, 'roll-up', { siteId }, { key: `roll-up:${siteId}` });

/** Readings of these tags changed between two instants: roll-ups and estimates that rest on them follow. */
export async function readingsChanged(
  tx: Queryable,
  change: { siteId: number; tagIds: number[]; from: Date; to: Date },
): Promise<void> {
  const { siteId, tagIds, from, to } = change;
  await rollUpLater(tx, siteId, tagIds, from, to);
  await markDirty(tx, siteId, tagIds, from);
}

/** Readings of one tag were added or replaced; `first` and `last` of those alone. */
export interface ChangedTag {
  tagId: number;
  added: number;
  first: Date;
  last: Date;
}

/** What follows from a stored batch whose hours are marked: spans, the roll-up, and the estimates that rest on it. */
export async function batchStored(
  tx: Queryable,
  siteId: number,
  changed: readonly ChangedTag[],
): Promise<void> {
  if (changed.length === 0) return;
  await widenSpans(tx, siteId, changed);
  await queueRollUp(tx, siteId);
  const byFirst = new Map<number, number[]>();
  for (const { tagId, first } of changed) {
    byFirst.set(first.getTime(), [...(byFirst.get(first.getTime()) ?? []), tagId]);
  }
  for (const [firstMs, tagIds] of byFirst) await markDirty(tx, siteId, tagIds, new Date(firstMs));
}
