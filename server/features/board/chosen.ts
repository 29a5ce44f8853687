import { sql } from 'drizzle-orm';
import type { Board, CountsByHealth } from '../../../shared/contracts/board.ts';
import type { Queryable } from '../../db/client.ts';
import { type BoardFilter, confirmable, siteFilter } from './repo.ts';

/** Counts of one's own, and how many may be confirmed; the summaries of sites know neither of a person. */
export async function countChosen(
  db: Queryable,
  filter: BoardFilter,
): Promise<Pick<Board, 'mine' | 'confirmable'>> {
  const { person, whose } = filter;
  if (whose === 'all' && person.edited.length === 0) return { mine: null, confirmable: 0 };
  const mine = sql`exists (select 1 from current_ownerships o where o.site_id = st.site_id
    and o.soft_sensor_id = st.soft_sensor_id and ${person.id} in (o.owner_id, o.deputy_id))`;
  const found = await db.execute<CountsByHealth & { confirmable: number }>(sql`
    select ${count(sql`not stopped`)} as total, ${count(sql`not stopped and health = 'fit'`)} as fit,
      ${count(sql`not stopped and health = 'watch'`)} as watch, ${count(sql`not stopped and health = 'unfit'`)} as unfit,
      ${count(sql`not stopped and health = 'unproven'`)} as unproven, ${count(sql`stopped`)} as stopped,
      ${count(sql`may_confirm`)} as confirmable
    from (
      select st.health, st.stopped_since is not null as stopped, ${confirmable(filter)} as may_confirm
      from soft_sensor_status st join sites on sites.id = st.site_id and sites.archived_at is null
      where st.in_service and ${siteFilter(filter, 'st.site_id')} and ${whose === 'mine' ? mine : sql`true`}
    ) listed`);
  const { confirmable: toConfirm, ...counts } = found.rows[0]!;
  return { mine: whose === 'mine' ? counts : null, confirmable: toConfirm };
}

const count = (which: ReturnType<typeof sql>) => sql`(count(*) filter (where ${which}))::int`;
