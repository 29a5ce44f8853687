import { sql } from 'drizzle-orm';
import { bigint, boolean, check, index, integer, jsonb, pgTable, text, unique } from 'drizzle-orm/pg-core';
import type { Problem } from '../../../shared/contracts/errors.ts';
import { identity, instant } from './columns.ts';
import { persons } from './people.ts';
import { sites } from './sites.ts';

/** Long work that a person waits for: its progress, its error and its result outlive the job queue's own row. */
export const runs = pgTable(
  'runs',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    kind: text('kind', { enum: ['history-import', 'fit', 'replay', 'estimate'] }).notNull(),
    subjectId: integer('subject_id'),
    state: text('state', { enum: ['waiting', 'running', 'done', 'failed', 'cancelled'] })
      .notNull()
      .default('waiting'),
    done: bigint('done', { mode: 'number' }).notNull().default(0),
    total: bigint('total', { mode: 'number' }),
    cancelRequested: boolean('cancel_requested').notNull().default(false),
    problem: jsonb('problem').$type<Problem>(),
    result: jsonb('result').$type<Record<string, unknown>>(),
    createdBy: integer('created_by').references(() => persons.id),
    createdAt: instant('created_at').notNull().defaultNow(),
    startedAt: instant('started_at'),
    finishedAt: instant('finished_at'),
  },
  (t) => [
    unique('runs_site_id_key').on(t.siteId, t.id),
    index('runs_subject').on(t.siteId, t.kind, t.subjectId),
    check('runs_kind', sql`${t.kind} in ('history-import', 'fit', 'replay', 'estimate')`),
    check('runs_state', sql`${t.state} in ('waiting', 'running', 'done', 'failed', 'cancelled')`),
    check(
      'runs_finished',
      sql`(${t.finishedAt} is not null) = (${t.state} in ('done', 'failed', 'cancelled'))`,
    ),
  ],
);
