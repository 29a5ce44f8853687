import { index, integer, jsonb, pgTable, text } from 'drizzle-orm/pg-core';
import { bigIdentity, instant } from './columns.ts';
import { persons } from './people.ts';
import { sites } from './sites.ts';

/** Who did what; written in the transaction of the change. A trigger refuses update, delete and truncate. */
export const auditEntries = pgTable(
  'audit_entries',
  {
    id: bigIdentity(),
    at: instant('at').notNull(),
    siteId: integer('site_id').references(() => sites.id),
    personId: integer('person_id').references(() => persons.id),
    personName: text('person_name').notNull(),
    fromAddress: text('from_address').notNull(),
    action: text('action').notNull(),
    entity: text('entity').notNull(),
    entityId: text('entity_id').notNull(),
    entityName: text('entity_name').notNull(),
    before: jsonb('before').$type<Record<string, unknown>>(),
    after: jsonb('after').$type<Record<string, unknown>>(),
    reason: text('reason').notNull().default(''),
    requestId: text('request_id').notNull(),
  },
  (t) => [
    index('audit_entries_site').on(t.siteId, t.at),
    index('audit_entries_entity').on(t.entity, t.entityId, t.at),
  ],
);
