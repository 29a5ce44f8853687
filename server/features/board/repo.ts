import { sql } from 'drizzle-orm';
import type { Board, BoardRow } from '../../../shared/contracts/board.ts';
import { referencesToConfirm } from '../../../shared/rules/confirmation.ts';
import type { Queryable } from '../../db/client.ts';

export interface BoardFilter {
  siteIds: number[] | 'every';
  siteId?: number;
  health: 'all' | 'not-fit' | 'fit' | 'stopped' | 'confirmable';
  whose: 'all' | 'mine';
  changedSince?: string;
  limit: number;
  /** Who looks, with the sites where they are manager and engineer. */
  person: { id: number; managed: number[]; edited: number[] };
}

export const siteFilter = ({ siteIds, siteId }: BoardFilter, column: string) => {
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
export async function countBySite(
  db: Queryable,
  filter: BoardFilter,
  since: string,
  at: Date,
): Promise<SiteCounts[]> {
  const now = at.toISOString();
  const found = await db.execute<SiteCounts & Record<string, unknown>>(sql`
    select s.id as "siteId", s.name, s.zone,
      coalesce(c.total, 0) as total, coalesce(c.fit, 0) as fit, coalesce(c.watch, 0) as watch,
      coalesce(c.unfit, 0) as unfit, coalesce(c.unproven, 0) as unproven,
      coalesce(c.unfit_in_closed_loop, 0) as "unfitInClosedLoop", coalesce(c.not_in_service, 0) as "notInService",
      coalesce(c.stopped, 0) as stopped, coalesce(d.overdue, 0) as overdue, coalesce(d.unowned, 0) as unowned,
      coalesce(m.months, '[]') as months
    from sites s left join site_summaries c on c.site_id = s.id
    left join (
      select site_id, json_agg(json_build_object('month', month, 'unfit', unfit, 'unproven', unproven) order by month) as months
      from site_months where month >= ${since} group by site_id
    ) m on m.site_id = s.id
    left join (
      select d.site_id, count(*) filter (where d.kind <> 'ownership-gap')::int as overdue,
        count(*) filter (where d.kind = 'ownership-gap')::int as unowned
      from duties d join sites z on z.id = d.site_id
      where d.state = 'open' and d.due_on <= (${now}::timestamptz)::date + 1
        and (d.kind = 'ownership-gap' or d.due_on < (${now}::timestamptz at time zone z.zone)::date)
      group by d.site_id
    ) d on d.site_id = s.id
    where s.archived_at is null and ${siteFilter(filter, 's.id')}
    order by s.name`);
  return found.rows;
}

type Found = BoardRow &
  Record<'lastReferenceAt' | 'healthSince' | 'stoppedSince' | 'recalibratedAt', Date | string | null>;

/** The worst soft sensors in service, with what the board shows of each. */
export async function worstFirst(db: Queryable, filter: BoardFilter): Promise<BoardRow[]> {
  const { person, changedSince } = filter;
  const mine = sql`exists (select 1 from current_ownerships o where o.site_id = st.site_id
    and o.soft_sensor_id = st.soft_sensor_id and ${person.id} in (o.owner_id, o.deputy_id))`;
  // Roles are held at open sites only; an administrator sees archived ones too unless they are left out.
  const open =
    filter.siteIds === 'every'
      ? sql`exists (select 1 from sites where id = st.site_id and archived_at is null)`
      : sql`true`;
  const changed = sql`greatest(st.health_since, st.recalibrated_at) > ${changedSince ?? null}::timestamptz`;
  // Names come by subselects: planning a join of all of them takes longer than running it (measured).
  const found = await db.execute<Found & Record<string, unknown>>(sql`
    with worst as (
      select * from soft_sensor_status st
      where in_service and ${siteFilter(filter, 'st.site_id')} and ${healthFilter(filter)}
        and ${filter.whose === 'mine' ? mine : sql`true`} and ${changedSince ? changed : sql`true`}
        and ${open}
      order by rank desc nulls last limit ${filter.limit}
    )
    select st.soft_sensor_id as "softSensorId", st.site_id as "siteId", (select name from sites where id = st.site_id) as "siteName",
      (select name from units u where u.site_id = ss.site_id and u.id = ss.unit_id) as "unitName",
      ss.tag_name as "tagName", ss.name, ss.unit, ss.decimals, ss.importance_class as "importanceClass", ss.consumers,
      st.health, st.health_before as "healthBefore", st.health_since as "healthSince", st.stopped_since as "stoppedSince",
      st.reasons, st.bias, st.bias_low as "biasLow", st.bias_high as "biasHigh", st.counted,
      st.allowed_error as "allowedError", st.last_errors as "lastErrors", st.last_reference_at as "lastReferenceAt",
      (select json_build_object('kind', d.kind, 'dueOn', d.due_on) from duties d
        where d.site_id = st.site_id and d.soft_sensor_id = st.soft_sensor_id and d.state = 'open' and d.kind <> 'ownership-gap'
        order by d.due_on limit 1) as duty,
      (select name from persons where id = st.owner_id and deactivated_at is null) as owner, st.recalibrated_at as "recalibratedAt", st.references_since as "referencesSince",
      ${confirmable(filter)} as confirmable
    from worst st
    join soft_sensors ss on ss.site_id = st.site_id and ss.id = st.soft_sensor_id
    order by st.rank desc`);
  const instant = (at: Date | string | null) => (at === null ? null : new Date(at).toISOString());
  return found.rows.map((row) => ({
    ...row,
    lastReferenceAt: instant(row.lastReferenceAt),
    healthSince: instant(row.healthSince)!,
    stoppedSince: instant(row.stoppedSince),
    recalibratedAt: instant(row.recalibratedAt),
  }));
}

function healthFilter(filter: BoardFilter) {
  if (filter.health === 'stopped') return sql`stopped_since is not null`;
  if (filter.health === 'confirmable') return confirmable(filter);
  const health = { all: sql`true`, 'not-fit': sql`severity > 0`, fit: sql`severity = 0` }[filter.health];
  return sql`stopped_since is null and ${health}`;
}

/** As `calibrations.confirm` lets through: Fit, running, enough references (none of them already decided on), nothing
 * waiting, and an engineer of the site. */
export const confirmable = ({ person }: BoardFilter) => sql`(st.severity = 0 and st.stopped_since is null
  and st.references_since >= ${referencesToConfirm} and st.site_id = any(${sql.param(person.edited)}::int[])
  and not exists (select 1 from calibrations c where c.site_id = st.site_id
    and c.soft_sensor_id = st.soft_sensor_id and (c.decision is null
      or c.decision in ('approved', 'confirmed') and c.decided_at > st.judged_at)))`;
