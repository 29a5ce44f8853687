import { sql } from 'drizzle-orm';
import type { DutyKind } from '../../../shared/contracts/duties.ts';
import { dateAt } from '../../../shared/rules/due-dates.ts';
import { stagesReached, toldAt } from '../../../shared/rules/reminder-stages.ts';
import type { Queryable } from '../../db/client.ts';
import { managersOfSites, peopleOfDuties, standingStops } from './people.ts';

/** What a notice is about; exactly one of them. */
export type Subject = 'duty' | 'calibration' | 'revision' | 'handover';

/** Something open with whom it concerns at present; for a duty each stage that is reached. */
export interface Concern {
  siteId: number;
  subject: Subject;
  id: number;
  /** Its unit, or the soft sensor alone, is stopped: nobody is told meanwhile. */
  stopped: boolean;
  stages: { stage: number; personIds: number[] }[];
}

/** All that is open and may have to be told, with whom it concerns now. */
export async function openConcerns(db: Queryable, now: Date): Promise<Concern[]> {
  return [...(await dutyConcerns(db, now)), ...(await decisionConcerns(db, now))];
}

interface DutyRow extends Record<string, unknown> {
  id: number;
  siteId: number;
  kind: DutyKind;
  dueOn: string;
  openedOn: string;
  zone: string;
  stopped: boolean;
  ownerId: number | null;
  deputyId: number | null;
  attendants: number[];
  managers: number[];
}

const stopped = sql`exists (select 1 from standing z where z.site_id = s.site_id
  and (z.unit_id = s.unit_id or z.soft_sensor_id = s.id))`;

async function dutyConcerns(db: Queryable, now: Date): Promise<Concern[]> {
  const found = await db.execute<DutyRow>(sql`
    with ${managersOfSites}, ${standingStops(now)}
    select d.id, d.site_id as "siteId", d.kind, d.due_on as "dueOn", d.opened_on as "openedOn", t.zone,
      ${stopped} as stopped, e.owner_id as "ownerId", e.deputy_id as "deputyId",
      to_json(h.attendants) as attendants, to_json(m.ids) as managers
    from duties d
    join sites t on t.id = d.site_id and t.archived_at is null
    join soft_sensors s on s.site_id = d.site_id and s.id = d.soft_sensor_id
    ${peopleOfDuties}
    where d.state = 'open' and d.due_on <= (${now.toISOString()}::timestamptz)::date + 32`);
  return found.rows.map((duty) => ({
    siteId: duty.siteId,
    subject: 'duty',
    id: duty.id,
    stopped: duty.stopped,
    stages: stagesReached(duty, dateAt(now, duty.zone)).map((stage) => ({
      stage,
      personIds: toldAt(duty.kind, stage, duty),
    })),
  }));
}

interface DecisionRow extends Record<string, unknown> {
  id: number;
  siteId: number;
  subject: Subject;
  stopped: boolean;
  personIds: number[];
}

/** The named approver where they may decide, else the managers of the site; never who proposed or edited it. */
const deciders = (proposed: string, edited: string) =>
  sql.raw(`coalesce(
    (select json_agg(p.id) from persons p where p.id = o.approver_id and p.deactivated_at is null
      and p.id <> ${proposed} and not p.id = any(${edited}) and exists (select 1 from site_roles r
        where r.person_id = p.id and r.site_id = x.site_id and r.role in ('engineer', 'manager'))),
    (select json_agg(p.id) from persons p join site_roles r on r.person_id = p.id and r.site_id = x.site_id
      and r.role = 'manager' where p.deactivated_at is null and p.id <> ${proposed} and not p.id = any(${edited})),
    '[]')`);

const approverOf = sql`
  join sites t on t.id = x.site_id and t.archived_at is null
  join soft_sensors s on s.site_id = x.site_id and s.id = x.soft_sensor_id
  left join lateral (select w.approver_id from ownerships w where w.site_id = s.site_id and w.soft_sensor_id = s.id
    order by w.effective_from desc, w.id desc limit 1) o on true`;

async function decisionConcerns(db: Queryable, now: Date): Promise<Concern[]> {
  const found = await db.execute<DecisionRow>(sql`
    with ${standingStops(now)}
    select 'calibration' as subject, x.id, x.site_id as "siteId", ${stopped} as stopped,
      ${deciders('x.proposed_by', `'{}'::int[]`)} as "personIds"
    from calibrations x ${approverOf} where x.decision is null
    union all
    select 'revision', x.id, x.site_id, ${stopped}, ${deciders('x.proposed_by', 'x.edited_by')}
    from revisions x ${approverOf} where x.decision is null
    union all
    select 'handover', x.id, x.site_id, false, coalesce((select json_agg(p.id) from persons p
      where p.id = x.to_id and p.deactivated_at is null and exists (select 1 from site_roles r
        where r.person_id = p.id and r.site_id = x.site_id)), '[]')
    from handovers x join sites t on t.id = x.site_id and t.archived_at is null where x.answer is null`);
  return found.rows.map(({ personIds, ...row }) => ({ ...row, stages: [{ stage: 0, personIds }] }));
}
