import { readFileSync } from 'node:fs';
import pino from 'pino';
import { createDb, createPool } from '../../server/db/client.ts';
import { readConfig } from '../../server/env.ts';
import { createComputePool } from '../../server/jobs/compute-pool.ts';
import { startWorkers } from '../../server/jobs/worker.ts';

/** A process of its own with workers whose clock stands in a file, to be killed by a trial. Says "ready" once it works. */
const log = pino({ level: 'silent' });
const config = readConfig(process.env);
const pool = createPool(config.databaseUrl, log, 6);
const clockFile = process.env.CLOCK_FILE!;
const context = {
  config,
  pool,
  db: createDb(pool),
  log,
  clock: () => new Date(Number(readFileSync(clockFile, 'utf8'))),
  compute: createComputePool(config),
};
// A scan by the machine's own clock would look in the midst of what changes at one instant of the simulated one.
await startWorkers(context, '');
process.stdout.write('ready\n');
