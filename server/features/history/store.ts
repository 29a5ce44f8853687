import { sql, type SQL } from 'drizzle-orm';
import type pg from 'pg';
import type { Queryable } from '../../db/client.ts';
import type { Batch } from './batch.ts';
import { type ChangedTag, lockHistory, markHours } from './changed.ts';
import { copyBatch } from './copy-binary.ts';

/** What became of the readings of a batch. `changed`: tags with readings added or replaced, with their outer instants. */
export interface Stored {
  added: number;
  unchanged: number;
  /** Differ from what is stored: replaced or kept, as was asked. */
  differing: number;
  changed: ChangedTag[];
}

/**
 * Stores a batch inside the caller's transaction and marks its hours for roll-up. Where nothing is stored yet between
 * the first and the last instant of any tag, the rows go straight in (measured: 2.5 times faster); else by way of a
 * stage, where each is compared with what is there.
 */
export async function storeBatch(
  tx: Queryable,
  client: pg.PoolClient,
  batch: Batch,
  to: { siteId: number; replaceExisting: boolean },
): Promise<Stored> {
  if (batch.size === 0) return { added: 0, unchanged: 0, differing: 0, changed: [] };
  await lockHistory(tx, to.siteId);
  await tx.execute(sql`set local jit = off`);
  if (batch.ascending && !(await overlaps(tx, batch, to.siteId)))
    return storeStraight(tx, client, batch, to.siteId);
  return storeByStage(tx, client, batch, to);
}

async function overlaps(tx: Queryable, batch: Batch, siteId: number): Promise<boolean> {
  const instants = (pick: 'firstMs' | 'lastMs') =>
    sql`${sql.param(batch.parts.map((part) => new Date(part[pick]).toISOString()))}::timestamptz[]`;
  const found = await tx.execute<{ any: boolean }>(sql`
    select exists (
      select 1
      from unnest(${tagIdsOf(batch)}, ${instants('firstMs')}, ${instants('lastMs')}) part (tag_id, first, last)
      cross join lateral (
        select 1 from readings r
        where r.site_id = ${siteId} and r.tag_id = part.tag_id and r.at between part.first and part.last
        limit 1
      ) one
    ) as any`);
  return found.rows[0]!.any;
}

const tagIdsOf = (batch: Batch): SQL => sql`${sql.param(batch.parts.map(({ tagId }) => tagId))}::int[]`;

async function storeStraight(
  tx: Queryable,
  client: pg.PoolClient,
  batch: Batch,
  siteId: number,
): Promise<Stored> {
  await copyBatch(client, batch, 'readings', siteId);
  await markHours(tx, siteId, batch.parts);
  const changed = batch.parts.map(({ tagId, count, firstMs, lastMs }) => ({
    tagId,
    added: count,
    first: new Date(firstMs),
    last: new Date(lastMs),
  }));
  return { added: batch.size, unchanged: 0, differing: 0, changed };
}

/** Of readings that stand twice in the batch the first counts, or with `replaceExisting` the last, as if one by one. */
async function storeByStage(
  tx: Queryable,
  client: pg.PoolClient,
  batch: Batch,
  { siteId, replaceExisting }: { siteId: number; replaceExisting: boolean },
): Promise<Stored> {
  await tx.execute(sql`create temporary table stage
    (n int, tag_id int, at timestamptz(3), value float8, quality smallint) on commit drop`);
  await copyBatch(client, batch, 'stage', siteId);
  await tx.execute(sql`analyze stage`);
  const twice = batch.ascending ? { same: 0, other: 0 } : await dropTwice(tx, replaceExisting);
  const from = new Date(Math.min(...batch.parts.map(({ firstMs }) => firstMs))).toISOString();
  const to = new Date(Math.max(...batch.parts.map(({ lastMs }) => lastMs))).toISOString();
  const rows = await tx.execute<JudgedTag>(sql`
    with judged as materialized (
      select s.tag_id, s.at, s.value, s.quality, r.at is null as fresh, r.value = s.value and r.quality = s.quality as same
      from stage s
      left join readings r on r.site_id = ${siteId} and r.tag_id = s.tag_id and r.at = s.at
        and r.at between ${from}::timestamptz and ${to}::timestamptz
    ), chosen as (
      select * from judged where fresh or (${replaceExisting} and not same)
    ), written as (
      insert into readings (site_id, tag_id, at, value, quality)
      select ${siteId}, tag_id, at, value, quality from chosen order by tag_id, at
      on conflict (site_id, tag_id, at) do update set value = excluded.value, sd = null, quality = excluded.quality
    ), marked as (
      insert into dirty_hours (site_id, tag_id, hour)
      select distinct ${siteId}::int, tag_id, date_bin('1 hour', at, 'epoch'::timestamptz) as hour from chosen
      order by tag_id, hour
      on conflict (site_id, tag_id, hour) do update set hour = excluded.hour
    )
    select j.tag_id as "tagId",
      count(*) filter (where fresh)::int as added,
      count(*) filter (where same)::int as same,
      count(*) filter (where not same)::int as other,
      min(at) filter (where fresh or (${replaceExisting} and not same)) as first,
      max(at) filter (where fresh or (${replaceExisting} and not same)) as last
    from judged j group by j.tag_id`);
  const total = (pick: 'added' | 'same' | 'other') => rows.rows.reduce((sum, row) => sum + row[pick], 0);
  return {
    added: total('added'),
    unchanged: total('same') + twice.same,
    differing: total('other') + twice.other,
    changed: rows.rows.flatMap(({ tagId, added, first, last }) =>
      first && last ? [{ tagId, added, first: new Date(first), last: new Date(last) }] : [],
    ),
  };
}

interface JudgedTag extends Record<string, unknown> {
  tagId: number;
  added: number;
  same: number;
  other: number;
  first: string | null;
  last: string | null;
}

/** Takes readings of the same tag and instant out of the stage but for one, and counts those taken out. */
async function dropTwice(tx: Queryable, lastCounts: boolean): Promise<{ same: number; other: number }> {
  const order = lastCounts ? sql`desc` : sql`asc`;
  const dropped = await tx.execute<{ same: number; other: number }>(sql`
    with ranked as (
      select n, value, quality,
        first_value(n) over w as kept_n, first_value(value) over w as kept_value, first_value(quality) over w as kept_quality
      from stage window w as (partition by tag_id, at order by n ${order})
    ), gone as (
      delete from stage using ranked where stage.n = ranked.n and ranked.n <> ranked.kept_n
      returning ranked.value = ranked.kept_value and ranked.quality = ranked.kept_quality as same
    )
    select count(*) filter (where same)::int as same, count(*) filter (where not same)::int as other from gone`);
  return dropped.rows[0]!;
}
