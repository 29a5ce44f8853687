import { and, eq, isNull, sql } from 'drizzle-orm';
import { digestDay } from '../../../shared/rules/digest-time.ts';
import type { Context } from '../../context.ts';
import type { Queryable, Tx } from '../../db/client.ts';
import { digests, mails, notices } from '../../db/schema/index.ts';
import { notSent } from '../mail/failures.ts';
import { queueMail } from '../mail/service.ts';
import { standingStops } from './people.ts';

interface Candidate extends Record<string, unknown> {
  personId: number;
  email: string;
  zone: string;
  oldestAt: string;
  lastDay: string | null;
  /** null while the last digest is still to be sent. */
  lastSentAt: string | null;
}

/** Writes each person's digest whose time has come, with all that waits to be told. */
export async function composeDigests(context: Context): Promise<void> {
  const now = context.clock();
  for (const candidate of await candidates(context.db, now)) {
    const { lastDay, lastSentAt, oldestAt, zone } = candidate;
    const day = digestDay({
      now,
      zone,
      oldestAt: new Date(oldestAt),
      last:
        lastDay === null ? null : { day: lastDay, sentAt: lastSentAt === null ? null : new Date(lastSentAt) },
    });
    if (day) await context.db.transaction((tx) => composeDigest(context, tx, candidate, day));
  }
}

/** What waits, of soft sensors that run: a stopped one tells nothing until it runs again. */
const waitingNow = sql`n.digest_id is null and n.dropped_at is null and not exists (
  select 1 from soft_sensors s join standing z on z.site_id = s.site_id and (z.unit_id = s.unit_id or z.soft_sensor_id = s.id)
  where s.site_id = n.site_id and n.handover_id is null and s.id = coalesce(
    (select d.soft_sensor_id from duties d where d.site_id = n.site_id and d.id = n.duty_id),
    (select c.soft_sensor_id from calibrations c where c.site_id = n.site_id and c.id = n.calibration_id),
    (select v.soft_sensor_id from revisions v where v.site_id = n.site_id and v.id = n.revision_id)))`;

/** Active people for whom something waits. Home is the lowest site where they hold a role, or the first of all. */
async function candidates(db: Queryable, now: Date): Promise<Candidate[]> {
  const found = await db.execute<Candidate>(sql`
    with ${standingStops(now)}, waiting as materialized (
      select n.person_id, min(n.decided_at) as oldest_at from notices n where ${waitingNow} group by n.person_id)
    select p.id as "personId", p.email, w.oldest_at as "oldestAt", l.day as "lastDay",
      case when m.state = 'sent' then m.sent_at when m.last_error like ${`${notSent}%`} then l.composed_at end as "lastSentAt",
      (select t.zone from sites t left join site_roles r on r.site_id = t.id and r.person_id = p.id
        where t.archived_at is null order by r.person_id is null, t.id limit 1) as zone
    from waiting w join persons p on p.id = w.person_id and p.deactivated_at is null
    left join lateral (select g.day, g.mail_id, g.composed_at from digests g where g.person_id = p.id order by g.day desc limit 1) l on true
    left join mails m on m.id = l.mail_id
    order by p.id`);
  return found.rows.filter(({ zone }) => zone !== null);
}

async function composeDigest(
  context: Context,
  tx: Tx,
  { personId, email }: Candidate,
  day: string,
): Promise<void> {
  const now = context.clock();
  const mailId = await queueMail(context, tx, {
    key: `digest:${personId}:${day}`,
    personId,
    toAddress: email,
    template: 'digest',
    figures: { day },
  });
  // Another worker wrote this digest first.
  if (mailId === null) return;
  const [digest] = await tx
    .insert(digests)
    .values({ personId, day, mailId, composedAt: now })
    .returning({ id: digests.id });
  await tx.execute(sql`
    with ${standingStops(now)}
    update notices n set digest_id = ${digest!.id} where n.person_id = ${personId} and ${waitingNow}`);
}

/** The digest that a mail carries. */
export async function digestOf(
  db: Queryable,
  mailId: number,
): Promise<{ id: number; personId: number } | null> {
  const [row] = await db
    .select({ id: digests.id, personId: digests.personId })
    .from(digests)
    .innerJoin(mails, eq(mails.id, digests.mailId))
    .where(eq(digests.mailId, mailId));
  return row ?? null;
}

/** What was in a digest but settled before it went out was not told. */
export async function dropFromDigest(
  tx: Tx,
  digestId: number,
  noticeIds: readonly number[],
  now: Date,
): Promise<void> {
  if (noticeIds.length === 0) return;
  await tx
    .update(notices)
    .set({ droppedAt: now })
    .where(
      and(
        eq(notices.digestId, digestId),
        isNull(notices.droppedAt),
        sql`${notices.id} = any(${sql.param([...noticeIds])}::int[])`,
      ),
    );
}
