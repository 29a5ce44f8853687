import { eq, sql } from 'drizzle-orm';
import { simpleParser, type ParsedMail } from 'mailparser';
import { localMails } from '../../server/db/schema/index.ts';
import type { TestServer } from './server.ts';

/** Sends what waits and returns the letters that the mail server took in for an address, oldest first. */
export async function lettersTo(server: TestServer, email: string): Promise<ParsedMail[]> {
  await server.drainJobs();
  const rows = await server.context.db
    .select({ raw: localMails.raw })
    .from(localMails)
    .where(eq(sql`lower(${localMails.toAddress})`, email.toLowerCase()))
    .orderBy(localMails.id);
  return Promise.all(rows.map(({ raw }) => simpleParser(raw)));
}

/** The secret part of the one-time link in a letter. */
export function tokenIn(letter: ParsedMail): string {
  return /set-password#([\w-]+)/.exec(letter.text ?? '')![1]!;
}
