import { bigint, foreignKey, integer, pgTable, primaryKey, text, unique } from 'drizzle-orm/pg-core';
import { bytes, identity, instant } from './columns.ts';
import { persons } from './people.ts';
import { sites } from './sites.ts';

/** Files live in the database: one transaction, one backup, every server sees them. */
export const files = pgTable(
  'files',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    name: text('name').notNull(),
    size: bigint('size', { mode: 'number' }).notNull(),
    sha256: text('sha256').notNull(),
    createdAt: instant('created_at').notNull(),
    createdBy: integer('created_by')
      .notNull()
      .references(() => persons.id),
  },
  (t) => [unique('files_site_id_key').on(t.siteId, t.id)],
);

export const fileChunks = pgTable(
  'file_chunks',
  {
    siteId: integer('site_id').notNull(),
    fileId: integer('file_id').notNull(),
    chunk: integer('chunk').notNull(),
    bytes: bytes('bytes').notNull(),
  },
  (t) => [
    primaryKey({ name: 'file_chunks_pkey', columns: [t.siteId, t.fileId, t.chunk] }),
    foreignKey({
      name: 'file_chunks_file_fk',
      columns: [t.siteId, t.fileId],
      foreignColumns: [files.siteId, files.id],
    }).onDelete('cascade'),
  ],
);
