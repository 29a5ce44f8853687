import { and, eq, ne } from 'drizzle-orm';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { mails } from '../../db/schema/index.ts';
import type { Body } from '../../mail/letter.ts';
import { type LinkFigures, linkLetter } from '../../mail/templates.ts';
import { sendLetter } from '../../mail/transport.ts';
import { renderDigest } from '../duties/render-digest.ts';
import { type PersonRow, findPerson } from '../people/repo.ts';
import { makeLink } from '../people/sign-in.ts';
import { notSent, refusedForGood } from './failures.ts';
import { queueSending } from './requeue.ts';

type MailRow = typeof mails.$inferSelect;

const dayMs = 86_400_000;
const hourMs = 3_600_000;
const firstPauseMs = 30_000;

/**
 * Renders and sends one queued mail. The row stays locked until the server has it, so that no second worker sends it;
 * one that failed is queued again in the transaction that keeps what went wrong.
 */
export async function sendQueuedMail(context: Context, { mailId }: { mailId: number }): Promise<void> {
  await context.db.transaction(async (tx) => {
    const [mail] = await tx
      .select()
      .from(mails)
      .where(and(eq(mails.id, mailId), ne(mails.state, 'sent')))
      .for('update', { skipLocked: true });
    if (!mail || mail.lastError?.startsWith(notSent)) return;
    const set = (values: Partial<MailRow>) => tx.update(mails).set(values).where(eq(mails.id, mailId));
    const person = mail.personId === null ? null : await findPerson(tx, mail.personId);
    const reason = overtaken(mail, person);
    if (reason) return void (await set({ state: 'failed', lastError: notSent + reason }));
    // What a digest says is the person's own, wherever they read it now.
    const toAddress = mail.template === 'digest' && person ? person.email : mail.toAddress;
    const attempts = mail.attempts + 1;
    const body = await render(context, tx, mail);
    if (!body) {
      return void (await set({ state: 'failed', lastError: `${notSent}all of it was settled meanwhile.` }));
    }
    try {
      const letter = { to: toAddress, messageId: mail.messageId, ...body };
      await sendLetter(context.config, context.config.smtpUrl!, letter);
    } catch (error) {
      const { lastError, delayMs } = failureOf(error as Error, attempts);
      context.log.warn({ mailId, attempts, lastError }, 'a mail could not be sent');
      await set({ state: 'failed', toAddress, attempts, lastError });
      return queueSending(tx, mailId, delayMs);
    }
    const sent = { sentAt: context.clock(), subject: body.subject, lastError: null };
    await set({ state: 'sent', toAddress, attempts, ...sent });
  });
}

/** Why a waiting mail must no longer go out: a one-time link belongs to its person at the address they had. */
function overtaken(mail: MailRow, person: PersonRow | null): string | null {
  if (mail.personId === null) return null;
  if (!person || person.deactivatedAt) return 'the person was deactivated meanwhile.';
  return person.email === mail.toAddress || mail.template === 'digest'
    ? null
    : 'the person has another address now.';
}

/** A server that refuses for good (RFC 5321, replies 5yz) is asked once a day; any other trouble soon, at most hourly. */
function failureOf(error: Error & { responseCode?: number }, attempts: number) {
  const forGood = (error.responseCode ?? 0) >= 500;
  return {
    lastError: forGood ? refusedForGood + error.message : error.message,
    delayMs: forGood ? dayMs : Math.min(hourMs, firstPauseMs * 2 ** Math.min(attempts - 1, 10)),
  };
}

async function render(context: Context, tx: Tx, mail: MailRow): Promise<Body | null> {
  switch (mail.template) {
    case 'set-password':
    case 'reset-password': {
      const link = await makeLink(context, context.db, mail.template, mail.personId);
      return linkLetter(mail.template, mail.figures as unknown as LinkFigures, link);
    }
    case 'digest':
      return renderDigest(context, tx, mail.id);
    default:
      throw new Error(`There is no mail template called ${mail.template}.`);
  }
}
