import { eq, sql } from 'drizzle-orm';
import type { Context } from '../../context.ts';
import type { Queryable } from '../../db/client.ts';
import { boardLooks } from '../../db/schema/index.ts';

/** Looks within this time are one: a page that is loaded again must not wipe out what was new. */
const oneLookMs = 3_600_000;

/** When a person looked last, before the look that goes on now. */
export async function lastLook(db: Queryable, personId: number, now: Date): Promise<Date | null> {
  const [row] = await db.select().from(boardLooks).where(eq(boardLooks.personId, personId));
  if (!row) return null;
  return now.getTime() - row.lookedAt.getTime() > oneLookMs ? row.lookedAt : row.previousAt;
}

/** Notes that the person looks now; what is told by nobody but the person needs no audit row. */
export async function noteLook(context: Context, personId: number): Promise<{ lookedAt: string | null }> {
  const now = context.clock();
  const last = await lastLook(context.db, personId, now);
  const old = new Date(now.getTime() - oneLookMs).toISOString();
  await context.db
    .insert(boardLooks)
    .values({ personId, lookedAt: now })
    .onConflictDoUpdate({
      target: boardLooks.personId,
      set: {
        previousAt: sql`case when ${boardLooks.lookedAt} < ${old}::timestamptz then ${boardLooks.lookedAt} else ${boardLooks.previousAt} end`,
        lookedAt: now,
      },
    });
  return { lookedAt: last?.toISOString() ?? null };
}
