import { sql } from 'drizzle-orm';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { type Concern, type Subject, openConcerns } from './concerns.ts';

interface Notice {
  siteId: number;
  subject: Subject;
  id: number;
  stage: number;
  personId: number;
}

interface WaitingRow extends Record<string, unknown> {
  noticeId: number;
  subject: Subject;
  id: number;
  stage: number;
  personId: number;
}

const thing = (subject: Subject, id: number): string => `${subject} ${id}`;

/**
 * Decides who must be told of what, and drops what went stale before a digest could carry it. One at a time, so that
 * what one scan decided is seen by the next; the unique key makes any number of scans decide it once all the same.
 */
export async function decideNotices(context: Context): Promise<void> {
  const now = context.clock();
  await context.db.transaction(async (tx) => {
    await tx.execute(sql`select pg_advisory_xact_lock(hashtext('cupel-reminders'))`);
    const concerns = await openConcerns(tx, now);
    const known = await knownStages(tx);
    await insertNotices(
      tx,
      concerns.flatMap((concern) => missingNotices(concern, known)),
      now,
    );
    await dropStale(tx, concerns, now);
  });
}

/** Stages of open duties that somebody was, or is about to be, told of. */
async function knownStages(tx: Tx): Promise<Set<string>> {
  const found = await tx.execute<{ id: number; stage: number }>(sql`
    select distinct n.duty_id as id, n.stage from notices n
    join duties d on d.site_id = n.site_id and d.id = n.duty_id and d.state = 'open'`);
  return new Set(found.rows.map(({ id, stage }) => `${id} ${stage}`));
}

/** The latest stage for all whom it concerns now, a new owner too; the ones before only where nobody was told. */
function missingNotices(concern: Concern, known: ReadonlySet<string>): Notice[] {
  const { siteId, subject, id } = concern;
  if (concern.stopped) return [];
  const latest = concern.stages.at(-1);
  return concern.stages
    .filter((one) => one === latest || !known.has(`${id} ${one.stage}`))
    .flatMap(({ stage, personIds }) =>
      personIds.map((personId) => ({ siteId, subject, id, stage, personId })),
    );
}

async function insertNotices(tx: Tx, notices: Notice[], now: Date): Promise<void> {
  if (notices.length === 0) return;
  const only = (subject: Subject) => (one: Notice) => (one.subject === subject ? one.id : null);
  const list = (values: (number | null)[]) => sql`${sql.param(values)}::int[]`;
  // Dropped because it concerned somebody else for a while: it is told after all.
  await tx.execute(sql`
    insert into notices (site_id, duty_id, calibration_id, revision_id, handover_id, stage, person_id, decided_at)
    select *, ${now.toISOString()}::timestamptz from unnest(${list(notices.map((one) => one.siteId))},
      ${list(notices.map(only('duty')))}, ${list(notices.map(only('calibration')))},
      ${list(notices.map(only('revision')))}, ${list(notices.map(only('handover')))},
      ${list(notices.map((one) => one.stage))}, ${list(notices.map((one) => one.personId))})
    on conflict on constraint notices_once do update set dropped_at = null
      where notices.dropped_at is not null and notices.digest_id is null`);
}

/** What was settled, or concerns somebody else by now, is not told any more. */
async function dropStale(tx: Tx, concerns: readonly Concern[], now: Date): Promise<void> {
  const open = new Map(concerns.map((concern) => [thing(concern.subject, concern.id), concern]));
  const waiting = await tx.execute<WaitingRow>(sql`
    select n.id as "noticeId", n.stage, n.person_id as "personId",
      case when n.duty_id is not null then 'duty' when n.calibration_id is not null then 'calibration'
        when n.revision_id is not null then 'revision' else 'handover' end as subject,
      coalesce(n.duty_id, n.calibration_id, n.revision_id, n.handover_id) as id
    from notices n where n.digest_id is null and n.dropped_at is null`);
  const stale = waiting.rows.filter(({ subject, id, stage, personId }) => {
    const found = open.get(thing(subject, id))?.stages.find((one) => one.stage === stage);
    return !found?.personIds.includes(personId);
  });
  if (stale.length === 0) return;
  await tx.execute(sql`update notices set dropped_at = ${now.toISOString()}::timestamptz
    where id = any(${sql.param(stale.map(({ noticeId }) => noticeId))}::int[])`);
}
