import { sql } from 'drizzle-orm';
import type { Queryable } from '../db/client.ts';

/** Every kind of job with what it takes; `server/jobs/tasks.ts` holds one function for each. */
export interface Jobs {
  'send-mail': { mailId: number };
  'import-history': { siteId: number; historyImportId: number; runId: number };
  'roll-up': { siteId: number };
  estimate: { siteId: number; softSensorId: number };
  judge: { siteId: number; softSensorId: number };
  'judge-all': Record<string, never>;
  fit: { siteId: number; softSensorId: number; runId: number; from: string; to: string; version: number };
  replay: { siteId: number; replayId: number; runId: number };
  'unlock-dead-workers': Record<string, never>;
  'clean-up': Record<string, never>;
  remind: Record<string, never>;
}
export type JobName = keyof Jobs;

export interface JobOptions {
  /** While a job with this key waits, another takes its place. */
  key?: string;
  /** Jobs of one queue run one after the other. */
  queue?: string;
  maxAttempts?: number;
  /** Not before this long from now, by the database’s clock. */
  delayMs?: number;
}

/** Adds a job in the caller's transaction: rolled back with it, seen by workers when it commits. */
export async function addJob<N extends JobName>(
  db: Queryable,
  name: N,
  payload: Jobs[N],
  options: JobOptions = {},
): Promise<void> {
  await db.execute(sql`select graphile_worker.add_job(
    ${name},
    ${JSON.stringify(payload)}::json,
    queue_name := ${options.queue ?? null}::text,
    run_at := now() + ${options.delayMs ?? 0}::float8 * interval '1 millisecond',
    max_attempts := ${options.maxAttempts ?? 5}::int,
    job_key := ${options.key ?? null}::text
  )`);
}
