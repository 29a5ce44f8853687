import { sql } from 'drizzle-orm';

const activeEngineer = (column: string) =>
  sql.raw(`(select p.id from persons p
  join site_roles r on r.person_id = p.id and r.site_id = d.site_id and r.role = 'engineer'
  where p.id = ${column} and p.deactivated_at is null)`);

/** Active managers of each site, in a WITH; administrators stand in where a site has none. */
export const managersOfSites = sql`managers as materialized (
  select t.id as site_id, coalesce(
    (select array_agg(p.id order by p.id) from site_roles r join persons p on p.id = r.person_id
      where r.site_id = t.id and r.role = 'manager' and p.deactivated_at is null),
    (select array_agg(p.id order by p.id) from persons p where p.administrator and p.deactivated_at is null),
    '{}') as ids
  from sites t)`;

/** Stops that stand at an instant, in a WITH. */
export const standingStops = (now: Date) => sql`standing as materialized (
  select site_id, unit_id, soft_sensor_id, min(stopped_at) as since from stoppages
  where stopped_at <= ${now.toISOString()}::timestamptz and (started_at is null or started_at > ${now.toISOString()}::timestamptz)
  group by site_id, unit_id, soft_sensor_id)`;

/**
 * Joins to duties `d` and managers `m`: the newest ownership `o`, and in `h` whom it concerns, none but active engineers
 * of the site: assignee, owner, deputy, and who must attend to it.
 */
export const peopleOfDuties = sql`
  join managers m on m.site_id = d.site_id
  left join lateral (select w.owner_id, w.deputy_id, w.approver_id from ownerships w
    where w.site_id = d.site_id and w.soft_sensor_id = d.soft_sensor_id
    order by w.effective_from desc, w.id desc limit 1) o on true
  cross join lateral (select ${activeEngineer('d.assignee_id')} as assignee_id,
    ${activeEngineer('o.owner_id')} as owner_id, ${activeEngineer('o.deputy_id')} as deputy_id) e
  cross join lateral (select case
    when d.kind = 'ownership-gap' then m.ids
    when coalesce(e.assignee_id, e.owner_id, e.deputy_id) is null then m.ids
    else array[coalesce(e.assignee_id, e.owner_id, e.deputy_id)] end as attendants) h`;
