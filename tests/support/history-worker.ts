import pino from 'pino';
import { createDb, createPool } from '../../server/db/client.ts';
import { readConfig } from '../../server/env.ts';
import { createComputePool } from '../../server/jobs/compute-pool.ts';
import { startWorkers } from '../../server/jobs/worker.ts';

/** A worker in a process of its own, so that a test can kill it as a power cut would. */
async function main(): Promise<void> {
  const config = readConfig(process.env);
  const log = pino({ level: 'silent' });
  const pool = createPool(config.databaseUrl, log, 6);
  const compute = createComputePool(config);
  await startWorkers({ config, pool, db: createDb(pool), log, clock: () => new Date(), compute });
}

void main();
