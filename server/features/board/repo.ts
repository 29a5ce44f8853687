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

/** Counts of every site's soft sensors by health; the board's headline and the sites' totals. */
export async function countBySite(db: Queryable, filter: BoardFilter) {
  const found = await db.execute<{
    siteId: number;
    name: string;
    zone: string;
    total: number;
    fit: number;
    watch: number;
    unfit: number;
    unproven: number;
    unfitInClosedLoop: number;
    notInService: number;
  }>(sql`
    select s.id as "siteId", s.name, s.zone,
      count(*) filter (where l.state = 'in-service')::int as total,
      count(*) filter (where l.state = 'in-service' and st.health = 'fit')::int as fit,
      count(*) filter (where l.state = 'in-service' and st.health = 'watch')::int as watch,
      count(*) filter (where l.state = 'in-service' and st.health = 'unfit')::int as unfit,
      count(*) filter (where l.state = 'in-service' and coalesce(st.health, 'unproven') = 'unproven')::int as unproven,
      count(*) filter (where l.state = 'in-service' and st.health = 'unfit'
        and ss.consumers @> '[{"kind":"closed-loop"}]')::int as "unfitInClosedLoop",
      count(*) filter (where l.state in ('draft', 'in-validation', 'suspended'))::int as "notInService"
    from sites s
    left join soft_sensors ss on ss.site_id = s.id
    left join current_life_states l on l.site_id = ss.site_id and l.soft_sensor_id = ss.id
    left join soft_sensor_status st on st.site_id = ss.site_id and st.soft_sensor_id = ss.id
    where s.archived_at is null and ${siteFilter(filter, 's.id')}
    group by s.id order by s.name`);
  return found.rows;
}

/** The worst soft sensors in service, with what the board shows of each. */
export async function worstFirst(db: Queryable, filter: BoardFilter): Promise<BoardRow[]> {
  const health = {
    all: sql`true`,
    'not-fit': sql`coalesce(st.severity, 2) > 0`,
    fit: sql`st.severity = 0`,
  }[filter.health];
  const found = await db.execute<BoardRow & { lastReferenceAt: Date | string | null } & Record<string, unknown>>(sql`
    select ss.id as "softSensorId", s.id as "siteId", s.name as "siteName", u.name as "unitName", ss.tag_name as "tagName",
      ss.name, ss.unit, ss.decimals, ss.importance_class as "importanceClass", ss.consumers,
      coalesce(st.health, 'unproven') as health,
      coalesce(st.reasons, '[{"code":"no-reference","health":"unproven","figures":{}}]'::jsonb) as reasons,
      st.bias, st.bias_low as "biasLow", st.bias_high as "biasHigh", coalesce(st.counted, 0) as counted,
      st.allowed_error as "allowedError", coalesce(st.last_errors, '[]'::jsonb) as "lastErrors",
      st.last_reference_at as "lastReferenceAt", p.name as owner
    from soft_sensors ss
    join sites s on s.id = ss.site_id and s.archived_at is null
    join units u on u.site_id = ss.site_id and u.id = ss.unit_id
    join current_life_states l on l.site_id = ss.site_id and l.soft_sensor_id = ss.id and l.state = 'in-service'
    left join soft_sensor_status st on st.site_id = ss.site_id and st.soft_sensor_id = ss.id
    left join current_ownerships o on o.site_id = ss.site_id and o.soft_sensor_id = ss.id
    left join persons p on p.id = o.owner_id and p.deactivated_at is null
    where ${siteFilter(filter, 'ss.site_id')} and ${health}
    order by coalesce(st.severity, 2) desc, ss.importance_class, abs(st.bias) / nullif(st.allowed_error, 0) desc nulls last, ss.id
    limit ${filter.limit}`);
  return found.rows.map((row) => ({
    ...row,
    lastReferenceAt: row.lastReferenceAt === null ? null : new Date(row.lastReferenceAt).toISOString(),
  }));
}

/** Unfit and unproven at the last known day of each of the last twelve months, by site. */
export async function monthsBySite(db: Queryable, filter: BoardFilter, since: string) {
  const found = await db.execute<{ siteId: number; month: string; unfit: number; unproven: number }>(sql`
    select site_id as "siteId", left(day, 7) as month,
      count(*) filter (where health = 'unfit')::int as unfit,
      count(*) filter (where health = 'unproven')::int as unproven
    from (
      select distinct on (site_id, soft_sensor_id, left(day, 7)) site_id, day, health
      from health_days where ${siteFilter(filter, 'site_id')} and day >= ${since}
      order by site_id, soft_sensor_id, left(day, 7), day desc
    ) ends
    group by 1, 2 order by 1, 2`);
  return found.rows;
}

/** What waits for this person: revisions they may decide, and soft sensors without an owner at sites they manage. */
export async function waitingFor(
  db: Queryable,
  person: { id: number; managed: number[] },
  filter: BoardFilter,
): Promise<Board['waiting']> {
  const managed = sql`${sql.param(person.managed)}::int[]`;
  const found = await db.execute<Board['waiting'][number] & Record<string, unknown>>(sql`
    select 'decide-revision' as kind, ss.id as "softSensorId", ss.tag_name as "tagName", ss.name,
      r.number as "revisionNumber", p.name as "proposedBy"
    from revisions r
    join soft_sensors ss on ss.site_id = r.site_id and ss.id = r.soft_sensor_id
    join persons p on p.id = r.proposed_by
    left join current_ownerships o on o.site_id = ss.site_id and o.soft_sensor_id = ss.id
    where r.decision is null and ${siteFilter(filter, 'r.site_id')}
      and (r.site_id = any(${managed}) or o.approver_id = ${person.id})
      and r.proposed_by <> ${person.id} and not (${person.id} = any(r.edited_by))
    union all
    select 'name-owner', ss.id, ss.tag_name, ss.name, null, null
    from soft_sensors ss
    join current_life_states l on l.site_id = ss.site_id and l.soft_sensor_id = ss.id and l.state = 'in-service'
    left join current_ownerships o on o.site_id = ss.site_id and o.soft_sensor_id = ss.id
    left join persons p on p.id = o.owner_id and p.deactivated_at is null
    where p.id is null and ss.site_id = any(${managed}) and ${siteFilter(filter, 'ss.site_id')}
    limit 20`);
  return found.rows;
}
