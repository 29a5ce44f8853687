import { randomUUID } from 'node:crypto';
import { type RequestListener, createServer } from 'node:http';
import pg from 'pg';
import { createApp } from '../../server/app.ts';
import type { Context } from '../../server/context.ts';
import { createDb, createPool } from '../../server/db/client.ts';
import { migrate } from '../../server/db/migrate.ts';
import { readConfig } from '../../server/env.ts';
import { createLog } from '../../server/log.ts';
import { createComputePool } from '../../server/jobs/compute-pool.ts';

export interface BenchServer {
  context: Context;
  address: string;
  stop(): Promise<void>;
}

/** A server on a database of its own in the bench cluster, with durable settings, listening on loopback. */
export async function startBenchServer(
  adminUrl: string,
  appOf: (context: Context) => RequestListener = (context) => createApp(context),
): Promise<BenchServer> {
  const name = `cupel_bench_${randomUUID().replaceAll('-', '')}`;
  const admin = new pg.Client({ connectionString: adminUrl });
  await admin.connect();
  await admin.query(`create database ${name}`);
  const url = new URL(adminUrl);
  url.pathname = `/${name}`;
  await migrate(url.toString());
  const log = createLog('silent');
  const config = readConfig({ DATABASE_URL: url.toString(), SMTP_URL: 'smtp://127.0.0.1:1' });
  const pool = createPool(config.databaseUrl, log);
  const compute = createComputePool(config);
  const context: Context = { config, pool, db: createDb(pool), log, compute, clock: () => new Date() };
  const server = createServer(appOf(context));
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.address() as { port: number };
  return {
    context,
    address: `http://127.0.0.1:${port}`,
    async stop() {
      server.closeAllConnections();
      server.close();
      await compute.stop();
      await pool.end();
      await admin.query(`drop database ${name} with (force)`);
      await admin.end();
    },
  };
}
