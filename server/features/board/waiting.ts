import { sql } from 'drizzle-orm';
import type { Board } from '../../../shared/contracts/board.ts';
import type { Queryable } from '../../db/client.ts';
import { type BoardFilter, siteFilter } from './repo.ts';

type Waiting = Board['waiting'][number];

const mostShown = 30;

/**
 * What waits for this person: proposals they may decide, corrections that somebody must enter, handovers offered to them,
 * ownership gaps at sites that they manage, and late duties of their own.
 */
export async function waitingFor(db: Queryable, filter: BoardFilter, now: Date): Promise<Waiting[]> {
  const { person } = filter;
  const managed = sql`${sql.param(person.managed)}::int[]`;
  const found = await db.execute<Waiting & Record<string, unknown>>(sql`
    with waiting as (
      select 1 as place, 'decide-calibration' as kind, c.site_id, c.soft_sensor_id, c.id as subject_id, c.number,
        c.proposed_by as by_id, c.proposed_at as at
      from calibrations c where c.decision is null and c.proposed_by <> ${person.id}
        and (c.site_id = any(${managed}) or ${approverIs(person.id, 'c')})
      union all
      select 2, 'decide-revision', r.site_id, r.soft_sensor_id, r.id, r.number, r.proposed_by, r.proposed_at
      from revisions r where r.decision is null and r.proposed_by <> ${person.id} and not (${person.id} = any(r.edited_by))
        and (r.site_id = any(${managed}) or ${approverIs(person.id, 'r')})
      union all
      select 3, 'answer-handover', h.site_id, h.soft_sensor_id, h.id, null, h.proposed_by, h.proposed_at
      from handovers h where h.answer is null and h.to_id = ${person.id}
      union all
      select 4, 'enter-calibration', c.site_id, c.soft_sensor_id, c.id, c.number, c.decided_by, c.decided_at
      from calibrations c join soft_sensor_status st on st.site_id = c.site_id and st.soft_sensor_id = c.soft_sensor_id
      where c.decision = 'approved' and c.to_be_entered and c.entered_at is null and st.owner_id = ${person.id}
      union all
      select 5, case d.kind when 'ownership-gap' then 'name-owner' else d.kind || '-late' end, d.site_id, d.soft_sensor_id,
        d.id, null, null, d.due_on::timestamp at time zone s.zone
      from duties d join sites s on s.id = d.site_id
      where d.state = 'open' and d.due_on <= (${now.toISOString()}::timestamptz)::date + 1 and case when d.kind = 'ownership-gap' then d.site_id = any(${managed})
        else coalesce(d.assignee_id, (select o.owner_id from soft_sensor_status o
          where o.site_id = d.site_id and o.soft_sensor_id = d.soft_sensor_id)) = ${person.id} and d.due_on < (${now.toISOString()}::timestamptz at time zone s.zone)::date end
    )
    select w.kind, w.soft_sensor_id as "softSensorId", ss.tag_name as "tagName", ss.name, w.subject_id as "subjectId",
      w.number, (select name from persons where id = w.by_id) as by, w.at as since
    from (
      select w.* from waiting w where ${siteFilter(filter, 'w.site_id')}
        and exists (select 1 from sites st where st.id = w.site_id and st.archived_at is null)
      order by w.place, w.at limit ${mostShown}
    ) w
    join soft_sensors ss on ss.site_id = w.site_id and ss.id = w.soft_sensor_id
    order by w.place, w.at`);
  return found.rows.map((row) => ({ ...row, since: new Date(row.since).toISOString() }));
}

/** Is this person the approver named now on the soft sensor of a proposal? */
const approverIs = (personId: number, proposal: 'c' | 'r') => {
  const of = sql.raw(proposal);
  return sql`(select o.approver_id from ownerships o where o.site_id = ${of}.site_id
    and o.soft_sensor_id = ${of}.soft_sensor_id order by o.effective_from desc, o.id desc limit 1) = ${personId}`;
};
