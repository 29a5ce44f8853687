import { type Runner, run, type WorkerEvents } from 'graphile-worker';
import { EventEmitter } from 'node:events';
import pg from 'pg';
import type { Context } from '../context.ts';
import { lifeLock } from './life.ts';
import { quietLogger } from './quiet-logger.ts';
import { taskList } from './tasks.ts';

const concurrency = 3;

// Times are UTC; a local hour is worked out by the job itself.
const crontab = `
* * * * * unlock-dead-workers ?max=1
*/10 * * * * judge-all ?max=1
*/10 * * * * remind ?max=1
17 3 * * * clean-up ?max=1
`;

export interface Workers {
  stop(): Promise<void>;
}

/**
 * Starts this process's workers. Each holds an advisory lock that says it lives.
 * @param schedule what runs by the clock of the machine; empty where a trial sets the clock
 */
export async function startWorkers(context: Context, schedule = crontab): Promise<Workers> {
  const pool = new pg.Pool({
    connectionString: context.config.databaseDirectUrl,
    max: concurrency + 2,
    application_name: 'cupel-jobs',
  });
  pool.on('error', (error) => context.log.warn({ err: error }, 'an idle queue connection was lost'));
  pool.on('connect', (client) =>
    client.on('error', (error) => context.log.warn({ err: error }, 'a queue connection was lost')),
  );
  const life = new pg.Client({
    connectionString: context.config.databaseDirectUrl,
    application_name: 'cupel-worker-life',
  });
  life.on('error', (error) =>
    context.log.warn({ err: error }, 'the connection that shows this worker alive was lost'),
  );
  await life.connect();
  const events = new EventEmitter() as WorkerEvents;
  // Jobs are locked in the name of the pool, so it is the pool that must be seen to live.
  events.on('pool:create', ({ workerPool }) => {
    life
      .query('select pg_advisory_lock($1, hashtext($2))', [lifeLock, workerPool.id])
      .catch((error: unknown) => {
        context.log.warn({ err: error }, 'this worker could not show that it lives');
      });
  });
  const runner: Runner = await run({
    pgPool: pool,
    concurrency,
    events,
    crontab: schedule,
    noHandleSignals: true,
    logger: quietLogger(context),
    taskList: taskList(context),
    pollInterval: 5000,
    maxPoolSize: concurrency + 2,
  });
  return {
    async stop() {
      await runner.stop();
      await life.end();
      await pool.end();
    },
  };
}
