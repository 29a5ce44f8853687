import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { mkdtempSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import type { Context } from '../../server/context.ts';
import { unlockDeadWorkers } from '../../server/jobs/unlock-dead-workers.ts';

/** Worker processes that share a simulated clock and are killed as a power cut would. */
export interface WorkerCrew {
  setClock(ms: number): void;
  /** Kills one of them with SIGKILL; another takes its place. */
  killOne(which: number): void;
  kills(): number;
  /** Waits until every job that may run now has run, giving back what dead workers held. */
  settled(): Promise<void>;
  stop(): Promise<void>;
}

const pause = (ms: number) => new Promise((resolve) => setTimeout(resolve, ms));

export async function startCrew(context: Context, size: number, startMs: number): Promise<WorkerCrew> {
  const folder = mkdtempSync(path.join(tmpdir(), 'cupel-clock-'));
  const clockFile = path.join(folder, 'now');
  const setClock = (ms: number) => {
    // Moved into place whole: a worker must never read half a number.
    writeFileSync(`${clockFile}.next`, String(ms));
    renameSync(`${clockFile}.next`, clockFile);
  };
  setClock(startMs);
  const env = {
    ...process.env,
    NODE_ENV: 'test',
    DATABASE_URL: context.config.databaseUrl,
    SMTP_URL: context.config.smtpUrl,
    CLOCK_FILE: clockFile,
  };
  const hire = (): ChildProcess =>
    spawn(process.execPath, ['--import', 'tsx', path.resolve('tests/support/reminder-worker.ts')], {
      env,
      stdio: ['ignore', 'pipe', 'inherit'],
    });
  const crew = Array.from({ length: size }, hire);
  await Promise.all(crew.map((one) => once(one.stdout!, 'data')));
  let kills = 0;
  return {
    setClock,
    killOne(which) {
      crew[which % size]!.kill('SIGKILL');
      crew[which % size] = hire();
      kills++;
    },
    kills: () => kills,
    async settled() {
      for (let looks = 1; (await waitingJobs(context)) > 0; looks++) {
        if (looks % 10 === 0) await unlockDeadWorkers(context);
        await pause(10);
      }
    },
    async stop() {
      const gone = crew.map((one) => once(one, 'exit'));
      for (const one of crew) one.kill('SIGKILL');
      await Promise.all(gone);
      rmSync(folder, { recursive: true });
    },
  };
}

/** Scans at any time and sendings whose time has come; a scan that failed is made to run at once. */
async function waitingJobs(context: Context): Promise<number> {
  const found = await context.pool.query<{ n: number }>(`
    with woken as (update graphile_worker._private_jobs j set run_at = now() from graphile_worker._private_tasks t
      where t.id = j.task_id and t.identifier = 'remind' and j.run_at > now() and j.locked_at is null)
    select count(*)::int as n from graphile_worker.jobs
    where task_identifier in ('remind', 'send-mail') and run_at <= now() and attempts < max_attempts`);
  return found.rows[0]!.n;
}
