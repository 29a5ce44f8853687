import { sql } from 'drizzle-orm';
import type { Context } from '../context.ts';
import { lifeLock } from './life.ts';

/**
 * A killed worker leaves its jobs locked for hours. A living one holds an advisory lock, so whoever's lock can be had
 * is dead: its jobs are given back.
 */
export async function unlockDeadWorkers(context: Context): Promise<void> {
  await context.db.transaction(async (tx) => {
    const locked = await tx.execute<{ worker: string }>(
      sql`select distinct locked_by as worker from graphile_worker._private_jobs where locked_by is not null`,
    );
    const dead: string[] = [];
    for (const { worker } of locked.rows) {
      const got = await tx.execute<{ free: boolean }>(
        sql`select pg_try_advisory_xact_lock(${lifeLock}::int, hashtext(${worker})) as free`,
      );
      if (got.rows[0]?.free) dead.push(worker);
    }
    if (dead.length === 0) return;
    await tx.execute(sql`select graphile_worker.force_unlock_workers(${sql.param(dead)}::text[])`);
    context.log.warn({ dead }, 'jobs of dead workers were given back');
  });
}
