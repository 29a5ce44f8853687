import { and, eq, sql } from 'drizzle-orm';
import type { Problem } from '../../../shared/contracts/errors.ts';
import type { Queryable } from '../../db/client.ts';
import { runs } from '../../db/schema/index.ts';

export type RunRow = typeof runs.$inferSelect;
export type RunKind = RunRow['kind'];

export async function addRun(
  db: Queryable,
  row: {
    siteId: number;
    kind: RunKind;
    subjectId: number;
    createdBy: number | null;
    createdAt: Date;
    total?: number;
  },
): Promise<RunRow> {
  const [run] = await db.insert(runs).values(row).returning();
  return run!;
}

/** Tells how far a run is; returns true where somebody asked it to stop. */
export async function reportProgress(
  db: Queryable,
  id: number,
  done: number,
  total?: number,
): Promise<boolean> {
  const [row] = await db
    .update(runs)
    .set({ done, ...(total === undefined ? {} : { total }) })
    .where(eq(runs.id, id))
    .returning({ cancelRequested: runs.cancelRequested });
  return row?.cancelRequested ?? false;
}

export async function startRun(db: Queryable, id: number, now: Date): Promise<RunRow> {
  const [row] = await db
    .update(runs)
    .set({
      state: 'running',
      startedAt: sql`coalesce(${runs.startedAt}, ${now.toISOString()}::timestamptz)`,
      finishedAt: null,
      problem: null,
    })
    .where(eq(runs.id, id))
    .returning();
  return row!;
}

export async function finishRun(
  db: Queryable,
  id: number,
  now: Date,
  end:
    { state: 'done'; result: Record<string, unknown> } | { state: 'failed' | 'cancelled'; problem: Problem },
): Promise<void> {
  await db
    .update(runs)
    .set({ finishedAt: now, ...end })
    .where(eq(runs.id, id));
}

/** Asks a run that has not ended to stop; one that has not begun ends at once. */
export async function requestCancel(db: Queryable, siteId: number, id: number): Promise<RunRow> {
  const [row] = await db
    .update(runs)
    .set({ cancelRequested: true })
    .where(and(eq(runs.siteId, siteId), eq(runs.id, id)))
    .returning();
  return row!;
}
