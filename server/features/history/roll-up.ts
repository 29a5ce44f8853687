import { sql } from 'drizzle-orm';
import type { Db, Tx } from '../../db/client.ts';

const hoursAtOnce = 20_000;

interface Mark {
  tagId: number;
  hour: number;
}
interface Taken {
  tagIds: number[];
  hours: number[];
}
const beforeAll: Mark = { tagId: 0, hour: 0 };

/**
 * Rolls up the hours of a site that are marked, some thousand in a transaction: the marks go in the transaction that
 * writes the figures, so that neither a killed worker nor a second one loses an hour or counts one twice.
 */
export async function rollUp({ db }: { db: Db }, { siteId }: { siteId: number }): Promise<void> {
  let after = beforeAll;
  for (;;) {
    const last = await db.transaction((tx) => rollUpSome(tx, siteId, after));
    // Nothing behind the last one: once more from the beginning, for marks that came meanwhile.
    if (!last && after === beforeAll) return;
    after = last ?? beforeAll;
  }
}

async function rollUpSome(tx: Tx, siteId: number, after: Mark): Promise<Mark | null> {
  await tx.execute(sql`set local jit = off`);
  const { tagIds, hours } = await takeMarked(tx, siteId, after);
  if (hours.length === 0) return null;
  await writeHours(tx, siteId, { tagIds, hours });
  return { tagId: tagIds.at(-1)!, hour: hours.at(-1)! };
}

/**
 * A statement of its own, before the figures: whoever stored readings held these marks until commit, so the next
 * statement sees all of them. It begins behind the marks taken last: beginning in front it would have to pass over all
 * that were removed, which for years of hourly readings takes longer than all else (measured).
 */
async function takeMarked(tx: Tx, siteId: number, after: Mark): Promise<Taken> {
  const taken = await tx.execute<Record<'tagIds' | 'hours', number[] | null>>(sql`
    with gone as (
      delete from dirty_hours where ctid = any(array(
      select ctid from dirty_hours
      where site_id = ${siteId} and (tag_id, hour) > (${after.tagId}::int, to_timestamp(${after.hour} * 3600.0))
      order by tag_id, hour limit ${hoursAtOnce} for update skip locked
      ))
      returning tag_id, (extract(epoch from hour) / 3600)::int as hour
    )
    select array_agg(tag_id order by tag_id, hour) as "tagIds", array_agg(hour order by tag_id, hour) as hours from gone`);
  const { tagIds, hours } = taken.rows[0]!;
  return { tagIds: tagIds ?? [], hours: hours ?? [] };
}

/**
 * Figures of the hours taken; an hour that lost its last reading loses its figures. Runs of hours are read in one go each; joining hours and readings on "between" instead lets the planner choose a
 * plan that takes minutes (measured).
 */
async function writeHours(tx: Tx, siteId: number, { tagIds, hours }: Taken): Promise<void> {
  const taken = sql`unnest(${sql.param(tagIds)}::int[], ${sql.param(hours)}::int[]) taken (tag_id, hour)`;
  await tx.execute(sql`
    with written as (
      insert into reading_hours (site_id, tag_id, hour, readings, bad, mean, low, high)
      select ${siteId}, span.tag_id, figures.*
      from (
        select tag_id, to_timestamp(min(hour) * 3600.0) as first, to_timestamp((max(hour) + 1) * 3600.0) as past
        from (select tag_id, hour, hour - row_number() over (partition by tag_id order by hour) as run from ${taken}) numbered
        group by tag_id, run
      ) span
      cross join lateral (
        select date_bin('1 hour', r.at, 'epoch'::timestamptz) as hour, count(*), count(*) filter (where r.quality = 2),
          avg(r.value) filter (where r.quality < 2),
          min(r.value) filter (where r.quality < 2),
          max(r.value) filter (where r.quality < 2)
        from readings r
        where r.site_id = ${siteId} and r.tag_id = span.tag_id and r.at >= span.first and r.at < span.past
        group by 1
      ) figures
      on conflict (site_id, tag_id, hour) do update set readings = excluded.readings, bad = excluded.bad,
        mean = excluded.mean, low = excluded.low, high = excluded.high
      returning tag_id, hour
    )
    delete from reading_hours h using ${taken}
    where h.site_id = ${siteId} and h.tag_id = taken.tag_id and h.hour = to_timestamp(taken.hour * 3600.0)
      and not exists (select 1 from written w where w.tag_id = h.tag_id and w.hour = h.hour)`);
}
