import { type SQL, sql } from 'drizzle-orm';
import type { Duty, DutyKind, GapCode, LastDecision } from '../../../shared/contracts/duties.ts';
import { dateAt, daysBetween } from '../../../shared/rules/due-dates.ts';
import { type Named, ownershipGaps } from '../../../shared/rules/duty-plan.ts';
import { dutyRights } from '../../../shared/rules/duty-rights.ts';
import type { RoleHolder } from '../../../shared/rules/permissions.ts';
import type { Queryable } from '../../db/client.ts';
import { refusedForGood } from '../mail/failures.ts';
import { managersOfSites, peopleOfDuties, standingStops } from './people.ts';

export interface DutyFilter {
  actor: RoleHolder;
  now: Date;
  siteIds: number[] | 'every';
  whose: 'mine' | 'sites';
  state: 'open' | 'closed';
  kind?: DutyKind | undefined;
  siteId?: number | undefined;
  softSensorId?: number | undefined;
  page: number;
  perPage: number;
}

interface NamedPerson {
  id: number;
  name: string;
}

interface Row extends Record<string, unknown> {
  duty: Pick<
    Duty,
    | 'id'
    | 'kind'
    | 'state'
    | 'siteId'
    | 'siteName'
    | 'siteZone'
    | 'unitName'
    | 'softSensorId'
    | 'tagName'
    | 'name'
    | 'importanceClass'
    | 'life'
    | 'health'
    | 'dueOn'
    | 'openedOn'
    | 'assignees'
    | 'closedBy'
    | 'reason'
    | 'version'
    | 'unreachable'
  >;
  stoppedSince: string | null;
  closedAt: string | null;
  recorded: boolean;
  owner: (NamedPerson & Named) | null;
  deputy: (NamedPerson & Named) | null;
  approverId: number | null;
  assigneeId: number | null;
  decisions: LastDecision[];
}

/** The duties of a filter, a page of them, as the person who asks may see them. */
export async function listDuties(
  db: Queryable,
  filter: DutyFilter,
): Promise<{ rows: Duty[]; total: number }> {
  const order = filter.state === 'open' ? sql`d.due_on, s.tag_name, d.id` : sql`d.closed_at desc, d.id desc`;
  const page = sql`order by ${order} limit ${filter.perPage} offset ${(filter.page - 1) * filter.perPage}`;
  const found = await db.execute<Row>(
    sql`with ${managersOfSites}, ${standingStops(filter.now)} ${details} ${joins} where ${conditions(filter)} ${page}`,
  );
  const counted = await db.execute<{ n: number }>(
    sql`with ${managersOfSites} select count(*)::int as n ${joinsWithoutStops} where ${conditions(filter)}`,
  );
  return { rows: found.rows.map((row) => toDuty(row, filter)), total: counted.rows[0]!.n };
}

/** How many open duties of a filter are late, due today, and due within 30 days, by each site's own day. */
export async function countOpenDuties(db: Queryable, filter: DutyFilter) {
  const late = sql`((${filter.now.toISOString()}::timestamptz at time zone t.zone)::date - d.due_on)`;
  const found = await db.execute<{ late: number; dueToday: number; dueSoon: number }>(sql`
    with ${managersOfSites} select count(*) filter (where ${late} > 0)::int as late,
      count(*) filter (where ${late} = 0)::int as "dueToday",
      count(*) filter (where ${late} between -30 and -1)::int as "dueSoon"
    ${joinsWithoutStops} where ${conditions({ ...filter, state: 'open' })}`);
  return found.rows[0]!;
}

/** Duties of these ids as the person who asks may see them, by due date. */
export async function readDuties(
  db: Queryable,
  actor: RoleHolder,
  now: Date,
  ids: readonly number[],
): Promise<Duty[]> {
  const found = await db.execute<Row>(
    sql`with ${managersOfSites}, ${standingStops(now)} ${details} ${joins}
      where d.id = any(${sql.param([...ids])}::int[]) order by d.due_on, s.tag_name, d.id`,
  );
  return found.rows.map((row) => toDuty(row, { actor, now }));
}

function conditions(filter: DutyFilter): SQL {
  const { siteIds, actor } = filter;
  const all: SQL[] = [sql`t.archived_at is null`];
  if (siteIds !== 'every') all.push(sql`d.site_id = any(${sql.param(siteIds)}::int[])`);
  all.push(filter.state === 'open' ? sql`d.state = 'open'` : sql`d.state <> 'open'`);
  if (filter.kind) all.push(sql`d.kind = ${filter.kind}`);
  if (filter.siteId) all.push(sql`d.site_id = ${filter.siteId}`);
  if (filter.softSensorId) all.push(sql`d.soft_sensor_id = ${filter.softSensorId}`);
  if (filter.whose === 'mine') {
    all.push(
      filter.state === 'open'
        ? sql`${actor.id} = any(h.attendants)`
        : sql`(${actor.id} = any(h.attendants) or d.closed_by = ${actor.id})`,
    );
  }
  return sql.join(all, sql` and `);
}

const person = (column: string) =>
  sql.raw(`(select json_build_object('id', p.id, 'name', p.name) from persons p where p.id = ${column})`);

const namedAtSite = (column: string) =>
  sql.raw(`(select json_build_object('id', p.id, 'name', p.name, 'active', p.deactivated_at is null,
    'engineer', exists (select 1 from site_roles r where r.person_id = p.id and r.site_id = d.site_id and r.role = 'engineer'))
  from persons p where p.id = ${column})`);

const joinsWithoutStops = sql`
  from duties d
  join sites t on t.id = d.site_id
  join soft_sensors s on s.site_id = d.site_id and s.id = d.soft_sensor_id
  ${peopleOfDuties}`;

const joins = sql`${joinsWithoutStops}
  join units u on u.site_id = s.site_id and u.id = s.unit_id
  left join soft_sensor_status c on c.site_id = s.site_id and c.soft_sensor_id = s.id`;

/** Of whom the last mail was refused by their own server. */
const unreachable = sql`(select coalesce(json_agg(json_build_object('name', p.name, 'why', l.last_error)), '[]')
  from persons p cross join lateral (select x.state, x.last_error from mails x where x.person_id = p.id
    order by x.created_at desc, x.id desc limit 1) l
  where p.id = any(h.attendants) and l.state = 'failed' and l.last_error like ${`${refusedForGood}%`})`;

const decisions = sql`(select coalesce(json_agg(x.one order by x.at desc), '[]') from (
  (select c.decided_at as at, json_build_object('what', 'calibration', 'calibrationId', c.id, 'kind', c.kind,
      'at', c.decided_at, 'by', ${person('c.decided_by')}) as one
    from calibrations c where d.kind = 'recalibration' and c.site_id = d.site_id and c.soft_sensor_id = d.soft_sensor_id
      and c.decision in ('approved', 'confirmed') order by c.decided_at desc limit 1)
  union all (select v.done_at, json_build_object('what', 'review', 'reviewId', v.id, 'conclusion', v.conclusion,
      'at', v.done_at, 'by', ${person('v.done_by')})
    from reviews v where d.kind = 'review' and v.site_id = d.site_id and v.soft_sensor_id = d.soft_sensor_id
      order by v.done_at desc limit 1)
  union all (select w.closed_at, json_build_object('what', 'waiver', 'reason', w.reason,
      'at', w.closed_at, 'by', ${person('w.closed_by')})
    from duties w where w.site_id = d.site_id and w.soft_sensor_id = d.soft_sensor_id and w.kind = d.kind
      and w.state = 'waived' order by w.closed_at desc limit 1)) x)`;

const details = sql`select json_build_object('id', d.id, 'kind', d.kind, 'state', d.state, 'siteId', d.site_id,
    'siteName', t.name, 'siteZone', t.zone, 'unitName', u.name, 'softSensorId', s.id, 'tagName', s.tag_name,
    'name', s.name, 'importanceClass', s.importance_class, 'health', c.health, 'dueOn', d.due_on, 'openedOn', d.opened_on,
    'life', (select l.state from life_states l where l.site_id = s.site_id and l.soft_sensor_id = s.id
      order by l.effective_from desc, l.id desc limit 1),
    'assignees', (select coalesce(json_agg(json_build_object('id', p.id, 'name', p.name) order by p.name), '[]')
      from persons p where p.id = any(h.attendants)),
    'closedBy', ${person('d.closed_by')}, 'reason', d.reason, 'version', d.version,
    'unreachable', ${unreachable}) as duty,
  (select min(z.since) from standing z where z.site_id = s.site_id
    and (z.unit_id = s.unit_id or z.soft_sensor_id = s.id)) as "stoppedSince",
  d.closed_at as "closedAt", coalesce(d.calibration_id, d.review_id) is not null as recorded,
  ${namedAtSite('o.owner_id')} as owner, ${namedAtSite('o.deputy_id')} as deputy, o.approver_id as "approverId",
  e.assignee_id as "assigneeId", ${decisions} as decisions`;

function toDuty(row: Row, { actor, now }: { actor: RoleHolder; now: Date }): Duty {
  const { duty } = row;
  const today = dateAt(now, duty.siteZone);
  const rights = dutyRights(actor, {
    kind: duty.kind,
    siteId: duty.siteId,
    open: duty.state === 'open',
    ownerId: row.owner?.id ?? null,
    deputyId: row.deputy?.id ?? null,
    approverId: row.approverId,
    assigneeId: row.assigneeId,
  });
  return {
    ...duty,
    ...rights,
    stoppedSince: instantOf(row.stoppedSince),
    today,
    daysLate: daysBetween(duty.dueOn, today),
    owner: named(row.owner),
    deputy: named(row.deputy),
    reassigned: row.assigneeId !== null,
    gaps: gapsOf(row),
    lastDecision: lastDecision(row.decisions),
    closedAt: instantOf(row.closedAt),
    closedAs: closedAs(row),
  };
}

const instantOf = (text: string | null): string | null =>
  text === null ? null : new Date(text).toISOString();

const named = (person: NamedPerson | null) => person && { id: person.id, name: person.name };

const gapsOf = ({ duty, owner, deputy }: Row): GapCode[] =>
  duty.kind === 'ownership-gap' && duty.state === 'open'
    ? ownershipGaps(duty.importanceClass, owner, deputy)
    : [];

function lastDecision([newest]: LastDecision[]): LastDecision | null {
  return newest ? { ...newest, at: new Date(newest.at).toISOString() } : null;
}

function closedAs({ duty, recorded }: Row): Duty['closedAs'] {
  if (duty.state === 'open') return null;
  if (duty.state === 'waived') return 'waived';
  if (recorded) return 'done';
  return duty.kind === 'ownership-gap' && duty.reason === '' ? 'filled' : 'dropped';
}
