import { sql } from 'drizzle-orm';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { addJob } from '../../jobs/queue.ts';
import { notSent, refusedForGood } from './failures.ts';

const keepTryingDays = 30;

/** Queues the sending of a mail; asked again, the job that waits is moved to the new time. */
export const queueSending = (tx: Tx, mailId: number, delayMs = 0): Promise<void> =>
  addJob(tx, 'send-mail', { mailId }, { key: `mail:${mailId}`, delayMs, maxAttempts: 25 });

/** Gives unsent mails whose job is gone a new one, tries a new address at once, and ends what failed for a month. */
export async function requeueLostMails(context: Context): Promise<void> {
  const before = new Date(context.clock().getTime() - keepTryingDays * 86_400_000).toISOString();
  const open = sql`m.state <> 'sent' and (m.last_error is null or m.last_error not like ${`${notSent}%`})`;
  await context.db.transaction(async (tx) => {
    await tx.execute(sql`
      update mails m set state = 'failed',
        last_error = ${`${notSent}given up after ${keepTryingDays} days. `} || coalesce(m.last_error, '')
      where ${open} and m.created_at <= ${before}::timestamptz`);
    const lost = await tx.execute<{ id: number }>(sql`
      select m.id from mails m left join persons p on p.id = m.person_id where ${open} and (
        not exists (select 1 from graphile_worker.jobs j where j.key = 'mail:' || m.id and j.attempts < j.max_attempts)
        or (m.template = 'digest' and m.to_address <> p.email and m.last_error like ${`${refusedForGood}%`}))
      order by m.id for update of m skip locked`);
    for (const { id } of lost.rows) await queueSending(tx, id);
  });
}
