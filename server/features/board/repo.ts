import { sql } from 'drizzle-orm';
import type { Board, BoardRow } from '../../../shared/contracts/board.ts';
import type { Queryable } from '../../db/client.ts';

export interface BoardFilter {
  siteIds: number[] | 'every';
  siteId?: number;
  health: 'all' | 'not-fit' | 'fit';
  limit: number;
}

const siteFilter = ({ siteIds, siteId }: BoardFilter, column: string) => {
  const at = sql.raw(column);
  const every = siteIds === 'every' ? sql`true` : sql`${at} = any(${sql.param(siteIds)}::int[])`;
  return siteId === undefined ? every : sql`${every} and ${at} = ${siteId}`;
};

type SiteCounts = Board['counts'] & {
  siteId: number;
  name: string;
  zone: string;
  months: Board['sites'][number]['months'];
};

/** Counts of every site's soft sensors by health with its months since `since`, as the last recount left them. */
export async function countBySite(db: Queryable, filter: BoardFilter, since: string): Promise<SiteCounts[]> {
  const found = await db.execute<SiteCounts & Record<string, unknown>>(sql`
    select s.id as "siteId", s.name, s.zone,
      coalesce(c.total, 0) as total, coalesce(c.fit, 0) as fit, coalesce(c.watch, 0) as watch,
      coalesce(c.unfit, 0) as unfit, coalesce(c.unproven, 0) as unproven,
      coalesce(c.unfit_in_closed_loop, 0) as "unfitInClosedLoop", coalesce(c.not_in_service, 0) as "notInService",
      coalesce((select json_agg(json_build_object('month', m.month, 'unfit', m.unfit, 'unproven', m.unproven) order by m.month)
        from site_months m where m.site_id = s.id and m.month >= ${since}), '[]') as months
    from sites s left join site_summaries c on c.site_id = s.id
    where s.archived_at is null and ${siteFilter(filter, 's.id')}
    order by s.name`);
  return found.rows;
}

/** The worst soft sensors in service, with what the board shows of each. */
export async function worstFirst(db: Queryable, filter: BoardFilter): Promise<BoardRow[]> {
  const health = { all: sql`true`, 'not-fit': sql`severity > 0`, fit: sql`severity = 0` }[filter.health];
  const found = await db.execute<
    BoardRow & { lastReferenceAt: Date | string | null } & Record<string, unknown>
  >(sql`
    with worst as (
      select * from soft_sensor_status
      where in_service and ${siteFilter(filter, 'site_id')} and ${health}
        and exists (select 1 from sites where id = site_id and archived_at is null)
      order by rank desc limit ${filter.limit}
    )
    select st.soft_sensor_id as "softSensorId", st.site_id as "siteId", s.name as "siteName", u.name as "unitName",
      ss.tag_name as "tagName", ss.name, ss.unit, ss.decimals, ss.importance_class as "importanceClass", ss.consumers,
      st.health, st.reasons, st.bias, st.bias_low as "biasLow", st.bias_high as "biasHigh", st.counted,
      st.allowed_error as "allowedError", st.last_errors as "lastErrors", st.last_reference_at as "lastReferenceAt",
      p.name as owner
    from worst st
    join soft_sensors ss on ss.site_id = st.site_id and ss.id = st.soft_sensor_id
    join sites s on s.id = st.site_id
    join units u on u.site_id = ss.site_id and u.id = ss.unit_id
    left join persons p on p.id = st.owner_id and p.deactivated_at is null
    order by st.rank desc`);
  return found.rows.map((row) => ({
    ...row,
    lastReferenceAt: row.lastReferenceAt === null ? null : new Date(row.lastReferenceAt).toISOString(),
  }));
}

/** What waits for this person: revisions they may decide, and soft sensors without an owner where they may name one. */
export async function waitingFor(
  db: Queryable,
  person: { id: number; managed: number[]; edited: number[] },
  filter: BoardFilter,
): Promise<Board['waiting']> {
  const managed = sql`${sql.param(person.managed)}::int[]`;
  const edited = sql`${sql.param(person.edited)}::int[]`;
  const found = await db.execute<Board['waiting'][number] & Record<string, unknown>>(sql`
    select 'decide-revision' as kind, ss.id as "softSensorId", ss.tag_name as "tagName", ss.name,
      r.number as "revisionNumber", p.name as "proposedBy"
    from revisions r
    join soft_sensors ss on ss.site_id = r.site_id and ss.id = r.soft_sensor_id
    join persons p on p.id = r.proposed_by
    left join lateral (
      select approver_id from ownerships o where o.site_id = ss.site_id and o.soft_sensor_id = ss.id
      order by effective_from desc, id desc limit 1
    ) o on true
    where r.decision is null and ${siteFilter(filter, 'r.site_id')}
      and (r.site_id = any(${managed}) or o.approver_id = ${person.id})
      and r.proposed_by <> ${person.id} and not (${person.id} = any(r.edited_by))
    union all
    select 'name-owner', ss.id, ss.tag_name, ss.name, null, null
    from (
      select site_id, soft_sensor_id from soft_sensor_status where in_service and owner_id is null
      union all
      select st.site_id, st.soft_sensor_id from persons p join soft_sensor_status st on st.owner_id = p.id
      where p.deactivated_at is not null and st.in_service
    ) gap
    join soft_sensors ss on ss.site_id = gap.site_id and ss.id = gap.soft_sensor_id
    where gap.site_id = any(${edited}) and ${siteFilter(filter, 'gap.site_id')}
    limit 20`);
  return found.rows;
}
