import { once } from 'node:events';
import { createServer } from 'node:http';
import path from 'node:path';
import { createApp } from './app.ts';
import type { Context } from './context.ts';
import { createDb, createPool } from './db/client.ts';
import { migrate } from './db/migrate.ts';
import { readConfig } from './env.ts';
import { createLog } from './log.ts';
import { createComputePool } from './jobs/compute-pool.ts';
import { startWorkers } from './jobs/worker.ts';
import { startLocalMailServer } from './mail/local-server.ts';
import { welcome } from './welcome.ts';

const say = (line: string) => process.stdout.write(`${line}\n`);

async function main(): Promise<void> {
  const config = readConfig(process.env);
  const log = createLog(config.logLevel);
  await migrate(config.databaseDirectUrl);
  const pool = createPool(config.databaseUrl, log);
  const compute = createComputePool(config);
  const context: Context = { config, pool, db: createDb(pool), log, compute, clock: () => new Date() };
  const localMail = config.smtpUrl ? undefined : await startLocalMailServer(context);
  const withMail: Context = localMail
    ? { ...context, config: { ...config, smtpUrl: localMail.url } }
    : context;
  const greeting = await welcome(withMail);
  const server = createServer(createApp(withMail, { clientFolder: path.resolve('dist/client') }));
  server.listen(config.port, config.host);
  await listening(server, config.port);
  const workers = await startWorkers(withMail);
  say(`Cupel is ready on ${config.publicUrl}`);
  for (const line of greeting) say(line);

  const stop = async (): Promise<void> => {
    server.close();
    server.closeAllConnections();
    await workers.stop();
    await compute.stop();
    await localMail?.stop();
    await pool.end();
    process.exit(0);
  };
  for (const signal of ['SIGINT', 'SIGTERM'] as const) process.once(signal, () => void stop());
}

async function listening(server: ReturnType<typeof createServer>, port: number): Promise<void> {
  const failed = once(server, 'error').then(([error]) => {
    throw error;
  });
  await Promise.race([once(server, 'listening'), failed]).catch((error: NodeJS.ErrnoException) => {
    if (error.code === 'EADDRINUSE') {
      throw new Error(
        `Port ${port} is in use by another program. Stop it, or choose another: PORT=4700 npm start`,
      );
    }
    throw error;
  });
}

main().catch((error: Error) => {
  process.stderr.write(`Cupel could not start. ${error.message}\n`);
  process.exit(1);
});
