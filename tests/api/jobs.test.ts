import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import path from 'node:path';
import { sql } from 'drizzle-orm';
import { afterEach, describe, expect, it, vi } from 'vitest';
import { queueJudging } from '../../server/features/judging/changed.ts';
import { unlockDeadWorkers } from '../../server/jobs/unlock-dead-workers.ts';
import { findStatus } from '../../server/features/judging/repo.ts';
import { at, makePlant, modelOf, putInService, writeInputs } from '../support/plant.ts';
import { useServer } from '../support/server.ts';

const server = useServer();
const children: ChildProcess[] = [];
afterEach(() => {
  for (const child of children.splice(0)) child.kill('SIGKILL');
});

async function startWorkerProcess(): Promise<ChildProcess> {
  const child = spawn(
    process.execPath,
    ['--import', 'tsx', path.resolve('tests/support/worker-process.ts')],
    {
      env: { ...process.env, DATABASE_URL: server.context.config.databaseUrl },
      stdio: ['ignore', 'pipe', 'inherit'],
    },
  );
  children.push(child);
  await once(child.stdout!, 'data');
  return child;
}

const lockedJobs = async () =>
  (
    await server.context.db.execute<{ count: number }>(
      sql`select count(*)::int as count from graphile_worker._private_jobs where locked_by is not null`,
    )
  ).rows[0]!.count;

const runningDry = (want: number) =>
  vi.waitFor(async () => expect(await lockedJobs()).toBe(want), { timeout: 20_000, interval: 50 });

describe('jobs of a killed worker', () => {
  it('are given back once it is dead, and left alone while it lives', async () => {
    const plant = await makePlant(server);
    server.now.value = at(60);
    await writeInputs(plant, 0, 50);
    const sensor = await putInService(plant, modelOf(plant));
    await server.drainJobs();
    const before = (await findStatus(server.context.db, plant.siteId, sensor.id))!;

    // The lock of the computation is held here, so that the worker is caught in the middle of its job.
    const holder = await server.context.pool.connect();
    await holder.query(`select pg_advisory_lock(hashtext('cupel-estimate'), ${sensor.id})`);
    const worker = await startWorkerProcess();
    await queueJudging(server.context.db, plant.siteId, sensor.id);
    await runningDry(1);
    await unlockDeadWorkers(server.context);
    expect(await lockedJobs()).toBe(1);

    worker.kill('SIGKILL');
    await once(worker, 'exit');
    await holder.query(`select pg_advisory_unlock(hashtext('cupel-estimate'), ${sensor.id})`);
    holder.release();
    await vi.waitFor(
      async () => {
        await unlockDeadWorkers(server.context);
        expect(await lockedJobs()).toBe(0);
      },
      { timeout: 20_000, interval: 100 },
    );
    server.now.value = at(61);
    await server.drainJobs();
    const after = (await findStatus(server.context.db, plant.siteId, sensor.id))!;
    expect(after.judgedAt.getTime()).toBeGreaterThan(before.judgedAt.getTime());
  });
});

describe('a job', () => {
  it('is not queued where its transaction is rolled back', async () => {
    const plant = await makePlant(server);
    server.now.value = at(60);
    const sensor = await putInService(plant, modelOf(plant));
    await server.drainJobs();
    const rolledBack = server.context.db.transaction(async (tx) => {
      await queueJudging(tx, plant.siteId, sensor.id);
      throw new Error('no');
    });
    await expect(rolledBack).rejects.toThrow('no');
    const jobs = await server.context.db.execute(
      sql`select 1 from graphile_worker.jobs where key = ${`judge:${sensor.id}`}`,
    );
    expect(jobs.rows).toHaveLength(0);
  });

  it('that fails on our side tells so without its inside, and is tried again', async () => {
    const plant = await makePlant(server);
    server.now.value = at(60);
    const { db } = server.context;
    const run = await db.execute<{ id: number }>(sql`
      insert into runs (site_id, kind, subject_id) values (${plant.siteId}, 'replay', 999999) returning id`);
    await db.execute(
      sql`select graphile_worker.add_job('replay', ${JSON.stringify({ siteId: plant.siteId, replayId: 999_999, runId: run.rows[0]!.id })}::json)`,
    );
    await server.drainJobs();
    const answer = await plant.engineer.get(`/api/v1/runs/${run.rows[0]!.id}`).expect(200);
    expect(answer.body).toMatchObject({ state: 'failed', problem: { code: 'unexpected' } });
    expect(JSON.stringify(answer.body)).not.toMatch(/TypeError|at .*\.ts/);
    const left = await db.execute<{ attempts: number }>(
      sql`select attempts from graphile_worker.jobs where task_identifier = 'replay'`,
    );
    expect(left.rows[0]!.attempts).toBe(1);
  });
});
