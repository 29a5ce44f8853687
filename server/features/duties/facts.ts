import { type SQL, sql } from 'drizzle-orm';
import type { Interval } from '../../../shared/contracts/interval.ts';
import { dateAt } from '../../../shared/rules/due-dates.ts';
import {
  type DutyFacts,
  type LastDone,
  type OpenDuty,
  type Recurring,
  ownershipGaps,
} from '../../../shared/rules/duty-plan.ts';
import type { Queryable } from '../../db/client.ts';

interface OpenRow {
  id: number;
  kind: 'recalibration' | 'review' | 'ownership-gap';
  openedAt: string;
  dueOn: string;
  assigneeId: number | null;
  dateStands: boolean;
  told: boolean;
}
interface LastRow {
  recordId: number;
  at: string;
  by: number | null;
  dueOn: string | null;
}
interface PersonRow {
  active: boolean;
  engineer: boolean;
}
interface FactRow extends Record<string, unknown> {
  id: number;
  siteId: number;
  zone: string;
  importanceClass: 'A' | 'B' | 'C';
  recalibrationInterval: Interval;
  reviewInterval: Interval;
  life: string;
  inServiceSince: string | null;
  calibration: LastRow | null;
  review: LastRow | null;
  owner: PersonRow | null;
  deputy: PersonRow | null;
  open: OpenRow[];
}

export interface SensorFacts extends DutyFacts {
  siteId: number;
  softSensorId: number;
}

const named = (column: SQL) => sql`(select json_build_object(
    'active', p.deactivated_at is null,
    'engineer', exists (select 1 from site_roles r where r.person_id = p.id and r.site_id = s.site_id and r.role = 'engineer'))
  from persons p where p.id = ${column})`;

const factsOf = (which: SQL) => sql`
  select s.id, s.site_id as "siteId", t.zone, s.importance_class as "importanceClass",
    s.recalibration_interval as "recalibrationInterval", s.review_interval as "reviewInterval",
    (select l.state from life_states l where l.site_id = s.site_id and l.soft_sensor_id = s.id
      order by l.effective_from desc, l.id desc limit 1) as life,
    (select min(l.effective_from) from life_states l where l.site_id = s.site_id and l.soft_sensor_id = s.id
      and l.state = 'in-service') as "inServiceSince",
    (select json_build_object('recordId', c.id, 'at', c.decided_at, 'by', c.decided_by,
        'dueOn', (select d.due_on from duties d where d.site_id = c.site_id and d.calibration_id = c.id limit 1))
      from calibrations c where c.site_id = s.site_id and c.soft_sensor_id = s.id and c.decision in ('approved', 'confirmed')
      order by c.decided_at desc, c.id desc limit 1) as calibration,
    (select json_build_object('recordId', v.id, 'at', v.done_at, 'by', v.done_by,
        'dueOn', (select d.due_on from duties d where d.site_id = v.site_id and d.review_id = v.id limit 1))
      from reviews v where v.site_id = s.site_id and v.soft_sensor_id = s.id
      order by v.done_at desc, v.id desc limit 1) as review,
    ${named(sql`o.owner_id`)} as owner, ${named(sql`o.deputy_id`)} as deputy,
    coalesce((select json_agg(json_build_object('id', d.id, 'kind', d.kind, 'openedAt', d.opened_at, 'dueOn', d.due_on,
        'assigneeId', d.assignee_id,
        'dateStands', coalesce((select b.state = 'waived' from duties b where b.site_id = d.site_id
          and b.soft_sensor_id = d.soft_sensor_id and b.kind = d.kind and b.id < d.id order by b.id desc limit 1), false),
        'told', exists (select 1 from notices n where n.site_id = d.site_id and n.duty_id = d.id)))
      from duties d where d.site_id = s.site_id and d.soft_sensor_id = s.id and d.state = 'open'), '[]') as open
  from soft_sensors s
  join sites t on t.id = s.site_id and t.archived_at is null
  left join lateral (select w.owner_id, w.deputy_id from ownerships w where w.site_id = s.site_id and w.soft_sensor_id = s.id
    order by w.effective_from desc, w.id desc limit 1) o on true
  where ${which}`;

/** What decides on the duties of soft sensors: of one, of those that a person looks after, or of all. */
export async function dutyFacts(
  db: Queryable,
  now: Date,
  which: { siteId: number; softSensorId: number } | 'all',
): Promise<SensorFacts[]> {
  const where =
    which === 'all' ? sql`true` : sql`s.site_id = ${which.siteId} and s.id = ${which.softSensorId}`;
  const found = await db.execute<FactRow>(factsOf(where));
  return found.rows.map((row) => toFacts(row, now));
}

function toFacts(row: FactRow, now: Date): SensorFacts {
  const open = (kind: OpenRow['kind']): OpenDuty | null => {
    const duty = row.open.find((one) => one.kind === kind);
    return duty ? { ...duty, openedAt: new Date(duty.openedAt) } : null;
  };
  const recurring = (
    kind: 'recalibration' | 'review',
    interval: Interval,
    last: LastRow | null,
  ): Recurring => ({ interval, last: last && lastDone(last, row.zone), open: open(kind) });
  return {
    siteId: row.siteId,
    softSensorId: row.id,
    today: dateAt(now, row.zone),
    kept: row.life === 'in-service' || row.life === 'suspended',
    inServiceOn: row.inServiceSince === null ? null : dateAt(new Date(row.inServiceSince), row.zone),
    recalibration: recurring('recalibration', row.recalibrationInterval, row.calibration),
    review: recurring('review', row.reviewInterval, row.review),
    gap: { codes: ownershipGaps(row.importanceClass, row.owner, row.deputy), open: open('ownership-gap') },
  };
}

const lastDone = ({ at, ...last }: LastRow, zone: string): LastDone => ({
  ...last,
  at: new Date(at),
  on: dateAt(new Date(at), zone),
});
