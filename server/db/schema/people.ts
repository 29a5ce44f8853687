import { sql } from 'drizzle-orm';
import { boolean, check, integer, pgTable, primaryKey, text, uniqueIndex } from 'drizzle-orm/pg-core';
import { roles } from '../../../shared/contracts/access.ts';
import { identity, instant } from './columns.ts';
import { sites } from './sites.ts';

export const persons = pgTable(
  'persons',
  {
    id: identity(),
    name: text('name').notNull(),
    email: text('email').notNull(),
    passwordHash: text('password_hash'),
    administrator: boolean('administrator').notNull().default(false),
    deactivatedAt: instant('deactivated_at'),
    version: integer('version').notNull().default(1),
    createdAt: instant('created_at').notNull().defaultNow(),
  },
  (t) => [uniqueIndex('persons_email_key').on(sql`lower(${t.email})`)],
);

/** Roles are held per site and are no ladder: one person may hold several at one site. */
export const siteRoles = pgTable(
  'site_roles',
  {
    personId: integer('person_id')
      .notNull()
      .references(() => persons.id),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    role: text('role', { enum: roles }).notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.personId, t.siteId, t.role] }),
    check('site_roles_role', sql`${t.role} in ('engineer', 'technician', 'manager', 'reader')`),
  ],
);

/** `id` is the SHA-256 of the session id that the browser holds: a dump of this table opens no session. */
export const sessions = pgTable('sessions', {
  id: text('id').primaryKey(),
  userId: integer('person_id')
    .notNull()
    .references(() => persons.id),
  expiresAt: instant('expires_at').notNull(),
});

/** One-time links to set or reset a password; a link without a person makes the first administrator. */
export const oneTimeLinks = pgTable(
  'one_time_links',
  {
    id: identity(),
    personId: integer('person_id').references(() => persons.id),
    tokenHash: text('token_hash').notNull().unique(),
    purpose: text('purpose', { enum: ['set-password', 'reset-password', 'first-administrator'] }).notNull(),
    expiresAt: instant('expires_at').notNull(),
    usedAt: instant('used_at'),
    createdAt: instant('created_at').notNull().defaultNow(),
  },
  (t) => [
    check(
      'one_time_links_purpose',
      sql`${t.purpose} in ('set-password', 'reset-password', 'first-administrator')`,
    ),
    check('one_time_links_person', sql`(${t.personId} is null) = (${t.purpose} = 'first-administrator')`),
  ],
);
