import { sql } from 'drizzle-orm';
import {
  bigint,
  boolean,
  check,
  foreignKey,
  index,
  integer,
  jsonb,
  pgTable,
  primaryKey,
  text,
  unique,
} from 'drizzle-orm/pg-core';
import type { HistoryLayout } from '../../../shared/contracts/history.ts';
import { identity, instant } from './columns.ts';
import { files } from './files.ts';
import { persons } from './people.ts';
import { runs } from './runs.ts';
import { sites } from './sites.ts';

/**
 * One uploaded file of tag history. It is read in chunks, each in one transaction with `lineDone`, so that a killed
 * import goes on where it stopped. The file itself is dropped a week later; its name, hash and counts stay.
 */
export const historyImports = pgTable(
  'history_imports',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    fileId: integer('file_id'),
    fileName: text('file_name').notNull(),
    fileSize: bigint('file_size', { mode: 'number' }).notNull(),
    sha256: text('sha256').notNull(),
    layout: jsonb('layout').$type<HistoryLayout>(),
    replaceExisting: boolean('replace_existing').notNull().default(false),
    state: text('state', { enum: ['uploaded', 'waiting', 'running', 'done', 'failed', 'cancelled'] })
      .notNull()
      .default('uploaded'),
    lineDone: bigint('line_done', { mode: 'number' }).notNull().default(0),
    added: bigint('added', { mode: 'number' }).notNull().default(0),
    unchanged: bigint('unchanged', { mode: 'number' }).notNull().default(0),
    replaced: bigint('replaced', { mode: 'number' }).notNull().default(0),
    keptDifferent: bigint('kept_different', { mode: 'number' }).notNull().default(0),
    refused: bigint('refused', { mode: 'number' }).notNull().default(0),
    firstAt: instant('first_at'),
    lastAt: instant('last_at'),
    runId: integer('run_id'),
    createdBy: integer('created_by')
      .notNull()
      .references(() => persons.id),
    createdAt: instant('created_at').notNull(),
    finishedAt: instant('finished_at'),
  },
  (t) => [
    unique('history_imports_site_id_key').on(t.siteId, t.id),
    index('history_imports_sha').on(t.siteId, t.sha256),
    foreignKey({
      name: 'history_imports_file_fk',
      columns: [t.siteId, t.fileId],
      foreignColumns: [files.siteId, files.id],
    }),
    foreignKey({
      name: 'history_imports_run_fk',
      columns: [t.siteId, t.runId],
      foreignColumns: [runs.siteId, runs.id],
    }),
    check(
      'history_imports_state',
      sql`${t.state} in ('uploaded', 'waiting', 'running', 'done', 'failed', 'cancelled')`,
    ),
  ],
);

/** Refused values of an import: the first thousand, each with its line, column, reason code and the text found there. */
export const historyRefusals = pgTable(
  'history_refusals',
  {
    siteId: integer('site_id').notNull(),
    importId: integer('import_id').notNull(),
    line: bigint('line', { mode: 'number' }).notNull(),
    column: integer('column').notNull(),
    code: text('code').notNull(),
    found: text('found').notNull(),
  },
  (t) => [
    primaryKey({ name: 'history_refusals_pkey', columns: [t.siteId, t.importId, t.line, t.column] }),
    foreignKey({
      name: 'history_refusals_import_fk',
      columns: [t.siteId, t.importId],
      foreignColumns: [historyImports.siteId, historyImports.id],
    }),
  ],
);
