import { sql } from 'drizzle-orm';
import { wallClock } from '../../../shared/rules/format.ts';
import type { Tx } from '../../db/client.ts';
import { getSite } from '../sites/repo.ts';

/**
 * Recounts a site in the transaction that changed the health or the life of one of its soft sensors; the board reads
 * the result. The row of the present month follows, and stays as it was when the month ends.
 */
export async function recountSite(tx: Tx, siteId: number, now: Date): Promise<void> {
  const { zone } = await getSite(tx, siteId);
  const { year, month } = wallClock(now, zone);
  const monthName = `${year}-${String(month).padStart(2, '0')}`;
  // One recount of a site at a time, so that the last one to commit has seen all others.
  await tx.execute(sql`select pg_advisory_xact_lock(hashtext('cupel-recount'), ${siteId}::int)`);
  await tx.execute(sql`
    insert into site_summaries (site_id, total, fit, watch, unfit, unproven, unfit_in_closed_loop, not_in_service, stopped)
    select ${siteId},
      count(*) filter (where st.in_service and st.stopped_since is null),
      count(*) filter (where st.in_service and st.stopped_since is null and st.health = 'fit'),
      count(*) filter (where st.in_service and st.stopped_since is null and st.health = 'watch'),
      count(*) filter (where st.in_service and st.stopped_since is null and st.health = 'unfit'),
      count(*) filter (where st.in_service and st.stopped_since is null and st.health = 'unproven'),
      count(*) filter (where st.in_service and st.stopped_since is null and st.health = 'unfit' and ss.consumers @> '[{"kind":"closed-loop"}]'),
      count(*) filter (where l.state in ('draft', 'in-validation', 'suspended')),
      count(*) filter (where st.in_service and st.stopped_since is not null)
    from soft_sensors ss
    join current_life_states l on l.site_id = ss.site_id and l.soft_sensor_id = ss.id
    left join soft_sensor_status st on st.site_id = ss.site_id and st.soft_sensor_id = ss.id
    where ss.site_id = ${siteId}
    on conflict (site_id) do update set total = excluded.total, fit = excluded.fit, watch = excluded.watch,
      unfit = excluded.unfit, unproven = excluded.unproven, unfit_in_closed_loop = excluded.unfit_in_closed_loop,
      not_in_service = excluded.not_in_service, stopped = excluded.stopped`);
  await tx.execute(sql`
    insert into site_months (site_id, month, unfit, unproven)
    select site_id, ${monthName}, unfit, unproven from site_summaries where site_id = ${siteId}
    on conflict (site_id, month) do update set unfit = excluded.unfit, unproven = excluded.unproven`);
}
