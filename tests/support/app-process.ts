import { createServer } from 'node:http';
import pino from 'pino';
import { createApp } from '../../server/app.ts';
import { createDb, createPool } from '../../server/db/client.ts';
import { readConfig } from '../../server/env.ts';
import { createComputePool } from '../../server/jobs/compute-pool.ts';

/** A server in a process of its own, to be killed by a trial. Says its port once it listens. */
const log = pino({ level: 'silent' });
const config = readConfig(process.env);
const pool = createPool(config.databaseUrl, log, 4);
const context = {
  config,
  pool,
  db: createDb(pool),
  log,
  clock: () => new Date(),
  compute: createComputePool(config),
};
const server = createServer(createApp(context));
server.listen(0, '127.0.0.1', () => {
  process.stdout.write(`${(server.address() as { port: number }).port}\n`);
});
