import { sql } from 'drizzle-orm';
import { check, index, integer, jsonb, pgTable, text } from 'drizzle-orm/pg-core';
import { bytes, identity, instant } from './columns.ts';
import { persons } from './people.ts';

/**
 * The outbox. A row is written in the transaction that decided the message; a job renders and sends it. Only the
 * template and its figures are stored: a one-time link is made when the message is rendered, so no row holds one.
 */
export const mails = pgTable(
  'mails',
  {
    id: identity(),
    key: text('key').notNull().unique(),
    personId: integer('person_id').references(() => persons.id),
    toAddress: text('to_address').notNull(),
    template: text('template').notNull(),
    figures: jsonb('figures').$type<Record<string, unknown>>().notNull(),
    messageId: text('message_id').notNull().unique(),
    subject: text('subject'),
    state: text('state', { enum: ['waiting', 'sent', 'failed'] })
      .notNull()
      .default('waiting'),
    attempts: integer('attempts').notNull().default(0),
    lastError: text('last_error'),
    createdAt: instant('created_at').notNull(),
    sentAt: instant('sent_at'),
  },
  (t) => [
    index('mails_created').on(t.createdAt),
    check('mails_state', sql`${t.state} in ('waiting', 'sent', 'failed')`),
    check('mails_sent', sql`(${t.sentAt} is not null) = (${t.state} = 'sent')`),
  ],
);

/** What the local mail server took in, as it came. */
export const localMails = pgTable(
  'local_mails',
  {
    id: identity(),
    receivedAt: instant('received_at').notNull(),
    messageId: text('message_id').notNull(),
    fromAddress: text('from_address').notNull(),
    toAddress: text('to_address').notNull(),
    subject: text('subject').notNull(),
    raw: bytes('raw').notNull(),
  },
  (t) => [index('local_mails_received').on(t.receivedAt)],
);
