import { randomUUID } from 'node:crypto';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { mails } from '../../db/schema/index.ts';
import { queueSending } from './requeue.ts';

export interface MailOrder {
  /** Says what the mail is about; the same key is never queued twice. */
  key: string;
  personId: number | null;
  toAddress: string;
  template: string;
  figures: Record<string, unknown>;
}

/**
 * Puts a mail into the outbox and its sending into the queue, in the transaction that decided it. Returns its id; null
 * where one with this key was queued before.
 */
export async function queueMail(context: Context, tx: Tx, order: MailOrder): Promise<number | null> {
  const host = new URL(context.config.publicUrl).hostname;
  const [mail] = await tx
    .insert(mails)
    .values({ ...order, messageId: `<${randomUUID()}@${host}>`, createdAt: context.clock() })
    .onConflictDoNothing({ target: mails.key })
    .returning({ id: mails.id });
  if (!mail) return null;
  await queueSending(tx, mail.id);
  return mail.id;
}
