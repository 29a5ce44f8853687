import { desc, eq, sql } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';
import { localMails, mails } from '../../db/schema/index.ts';

export async function listMails(db: Queryable, page: { page: number; perPage: number }) {
  const rows = await db
    .select({
      id: mails.id,
      to: mails.toAddress,
      template: mails.template,
      subject: mails.subject,
      state: mails.state,
      attempts: mails.attempts,
      lastError: mails.lastError,
      createdAt: mails.createdAt,
      sentAt: mails.sentAt,
      // Named in full: unqualified, the column would be the inner table's own. A message sent twice counts once.
      localMailId: sql<
        number | null
      >`(select max(l.id) from local_mails l where l.message_id = mails.message_id)`,
    })
    .from(mails)
    .orderBy(desc(mails.createdAt), desc(mails.id))
    .limit(page.perPage)
    .offset((page.page - 1) * page.perPage);
  return { rows, total: await db.$count(mails) };
}

export async function findLocalMail(db: Queryable, id: number) {
  const [row] = await db.select().from(localMails).where(eq(localMails.id, id));
  return row ?? null;
}
