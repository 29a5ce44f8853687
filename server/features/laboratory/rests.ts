import { sql } from 'drizzle-orm';
import { type Resting, sayWhatRests } from '../../../shared/rules/laboratory-sentences.ts';
import type { Queryable } from '../../db/client.ts';
import { getSite } from '../sites/repo.ts';

/**
 * What rests on the samples of a file since it was added, as a sentence; null where nothing does and it may be undone:
 * recalibrations decided with a pair of one of them as evidence, versions that took the place of one, re-tests.
 */
export async function whatRestsOn(db: Queryable, siteId: number, importId: number): Promise<string | null> {
  const { zone } = await getSite(db, siteId);
  const resting: Resting = {
    decisions: await decisionsOn(db, siteId, importId),
    ...(await changesOf(db, siteId, importId)),
  };
  return sayWhatRests(resting, zone);
}

type Decision = Resting['decisions'][number];

async function decisionsOn(db: Queryable, siteId: number, importId: number): Promise<Decision[]> {
  const found = await db.execute<
    Record<string, unknown> & Omit<Decision, 'decidedAt'> & { decidedAt: string | Date }
  >(sql`
    select f.tag_name as "tagName", c.number, c.decision, c.decided_at as "decidedAt",
      count(distinct s.id)::int as samples, min(s.sample_number) as "sampleNumber"
    from sample_imports i
    join calibrations c on c.site_id = i.site_id and c.decision in ('approved', 'confirmed') and c.decided_at >= i.committed_at
    join soft_sensors f on f.site_id = c.site_id and f.id = c.soft_sensor_id
    cross join lateral unnest(c.pair_ids) as used(pair_id)
    join pairs p on p.site_id = c.site_id and p.id = used.pair_id
    join samples s on s.site_id = p.site_id and s.id = p.sample_id and s.import_id = i.id
    where i.site_id = ${siteId} and i.id = ${importId}
    group by f.tag_name, c.number, c.decision, c.decided_at
    order by c.decided_at desc`);
  return found.rows.map((row) => ({ ...row, decidedAt: new Date(row.decidedAt).toISOString() }));
}

async function changesOf(
  db: Queryable,
  siteId: number,
  importId: number,
): Promise<Omit<Resting, 'decisions'>> {
  const found = await db.execute<{ number: string; what: 'corrected' | 'retested' }>(sql`
    select s.sample_number as number, case when r.id is null then 'corrected' else 'retested' end as what
    from samples s
    left join lateral (
      select id from retests r where r.site_id = s.site_id and r.sample_id = s.id limit 1
    ) r on true
    where s.site_id = ${siteId} and s.import_id = ${importId} and s.withdrawn_at is null
      and (s.superseded_at is not null or r.id is not null)
    order by s.sample_number`);
  const of = (what: string) => found.rows.filter((row) => row.what === what).map(({ number }) => number);
  return { corrected: of('corrected'), retested: of('retested') };
}
