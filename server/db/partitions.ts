import { sql } from 'drizzle-orm';
import type { Db } from './client.ts';

const known = new WeakMap<Db, Set<string>>();

/**
 * Makes the monthly partitions that readings from `fromMs` to `toMs` need, each in a short transaction of its own:
 * call it before the transaction that inserts, never inside.
 */
export async function ensurePartitions(db: Db, fromMs: number, toMs: number): Promise<void> {
  const made = known.get(db) ?? new Set<string>();
  known.set(db, made);
  for (const month of monthsBetween(fromMs, toMs)) {
    if (made.has(month)) continue;
    await db.transaction(async (tx) => {
      await tx.execute(sql`select pg_advisory_xact_lock(hashtext('cupel-partitions'))`);
      await tx.execute(sql`select ensure_month_partition(${month}::date)`);
    });
    made.add(month);
  }
}

/** First days of the months (UTC) that hold any instant of the period. */
export function monthsBetween(fromMs: number, toMs: number): string[] {
  const months: string[] = [];
  const from = new Date(fromMs);
  let month = Date.UTC(from.getUTCFullYear(), from.getUTCMonth());
  while (month <= toMs) {
    const at = new Date(month);
    months.push(at.toISOString().slice(0, 10));
    month = Date.UTC(at.getUTCFullYear(), at.getUTCMonth() + 1);
  }
  return months;
}
