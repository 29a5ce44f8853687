import { and, eq, sql } from 'drizzle-orm';
import type { Responsibility } from '../../../shared/contracts/ownership.ts';
import type { Queryable } from '../../db/client.ts';
import { duties } from '../../db/schema/index.ts';
import { findPerson } from '../people/repo.ts';

type Row = Omit<Responsibility, 'opensGap'> & Record<string, unknown>;

/**
 * What a person looks after at sites that are not archived, as owner, deputy or approver, without what is retired; and
 * how many open duties were given to them by name. Null where there is no such person.
 */
export async function responsibilitiesOf(
  db: Queryable,
  personId: number,
): Promise<{ rows: Responsibility[]; assignedDuties: number } | null> {
  if (!(await findPerson(db, personId))) return null;
  const found = await db.execute<Row>(sql`
    select s.id as "softSensorId", s.site_id as "siteId", t.name as "siteName", s.tag_name as "tagName", s.name,
      s.importance_class as "importanceClass", l.state as life, p.part
    from soft_sensors s
    join sites t on t.id = s.site_id and t.archived_at is null
    join lateral (select w.owner_id, w.deputy_id, w.approver_id from ownerships w
      where w.site_id = s.site_id and w.soft_sensor_id = s.id order by w.effective_from desc, w.id desc limit 1) o on true
    join lateral (select x.state from life_states x where x.site_id = s.site_id and x.soft_sensor_id = s.id
      order by x.effective_from desc, x.id desc limit 1) l on l.state <> 'retired'
    join lateral (values ('owner', o.owner_id), ('deputy', o.deputy_id), ('approver', o.approver_id)) as p(part, person_id)
      on p.person_id = ${personId}
    order by t.name, s.tag_name, p.part`);
  return {
    rows: found.rows.map((row) => ({ ...row, opensGap: opensGap(row) })),
    assignedDuties: await db.$count(duties, and(eq(duties.state, 'open'), eq(duties.assigneeId, personId))),
  };
}

const opensGap = ({ part, importanceClass, life }: Row): boolean =>
  (life === 'in-service' || life === 'suspended') &&
  (part === 'owner' || (part === 'deputy' && importanceClass !== 'C'));
