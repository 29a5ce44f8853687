import { and, eq, ne } from 'drizzle-orm';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { mails } from '../../db/schema/index.ts';
import { type LinkFigures, linkLetter } from '../../mail/templates.ts';
import { sendLetter } from '../../mail/transport.ts';
import { findPerson } from '../people/repo.ts';
import { makeLink } from '../people/sign-in.ts';

type MailRow = typeof mails.$inferSelect;

/** Renders and sends one queued mail. The row stays locked until the server has it, so that no second worker sends it. */
export async function sendQueuedMail(context: Context, { mailId }: { mailId: number }): Promise<void> {
  const failure = await context.db.transaction(async (tx) => {
    const [mail] = await tx
      .select()
      .from(mails)
      .where(and(eq(mails.id, mailId), ne(mails.state, 'sent')))
      .for('update', { skipLocked: true });
    if (!mail) return null;
    const reason = await overtaken(tx, mail);
    if (reason) {
      await tx.update(mails).set({ state: 'failed', lastError: reason }).where(eq(mails.id, mailId));
      return null;
    }
    try {
      const body = await render(context, mail);
      await sendLetter(context.config, context.config.smtpUrl!, {
        to: mail.toAddress,
        messageId: mail.messageId,
        ...body,
      });
      await tx
        .update(mails)
        .set({
          state: 'sent',
          subject: body.subject,
          sentAt: context.clock(),
          attempts: mail.attempts + 1,
          lastError: null,
        })
        .where(eq(mails.id, mailId));
      return null;
    } catch (error) {
      await tx
        .update(mails)
        .set({ state: 'failed', attempts: mail.attempts + 1, lastError: (error as Error).message })
        .where(eq(mails.id, mailId));
      return error as Error;
    }
  });
  // Thrown after the commit, so that the queue tries again later and the row keeps what went wrong.
  if (failure) throw failure;
}

/** Why a waiting mail must no longer go out: a one-time link belongs to its person at the address they have now. */
async function overtaken(tx: Tx, mail: MailRow): Promise<string | null> {
  if (mail.personId === null) return null;
  const person = await findPerson(tx, mail.personId);
  if (!person || person.deactivatedAt) return 'Not sent: the person was deactivated meanwhile.';
  return person.email === mail.toAddress ? null : 'Not sent: the person has another address now.';
}

async function render(context: Context, mail: MailRow) {
  switch (mail.template) {
    case 'set-password':
    case 'reset-password': {
      const link = await makeLink(context, context.db, mail.template, mail.personId);
      return linkLetter(mail.template, mail.figures as unknown as LinkFigures, link);
    }
    default:
      throw new Error(`There is no mail template called ${mail.template}.`);
  }
}
