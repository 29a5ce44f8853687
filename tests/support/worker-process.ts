import pino from 'pino';
import { createDb, createPool } from '../../server/db/client.ts';
import { readConfig } from '../../server/env.ts';
import { createComputePool } from '../../server/jobs/compute-pool.ts';
import { startWorkers } from '../../server/jobs/worker.ts';

/** A process of its own with workers, to be killed by a test. Says "ready" once it works. */
const log = pino({ level: 'silent' });
const config = readConfig({ DATABASE_URL: process.env.DATABASE_URL, NODE_ENV: 'test' });
const pool = createPool(config.databaseUrl, log, 4);
const context = {
  config,
  pool,
  db: createDb(pool),
  log,
  clock: () => new Date(),
  compute: createComputePool(config),
};
await startWorkers(context);
process.stdout.write('ready\n');
