import { randomUUID } from 'node:crypto';
import pg from 'pg';
import { afterAll, beforeAll, inject } from 'vitest';
import type { Context } from '../../server/context.ts';
import { createDb, createPool } from '../../server/db/client.ts';
import { readConfig } from '../../server/env.ts';
import { createLog } from '../../server/log.ts';
import { createComputePool } from '../../server/jobs/compute-pool.ts';
import { startLocalMailServer } from '../../server/mail/local-server.ts';
import { databaseUrl } from './database-url.ts';

/** A context on a clone of the template database for the calling file, with a real mail server; all gone at the end. */
export function useTestContext(clock: () => Date, ready: (context: Context) => void | Promise<void>): void {
  const name = `cupel_test_${randomUUID().replaceAll('-', '')}`;
  const endings: (() => Promise<unknown>)[] = [];

  beforeAll(async () => {
    const admin = new pg.Client({ connectionString: databaseUrl('postgres') });
    await admin.connect();
    endings.unshift(() => admin.end());
    await admin.query(`create database ${name} template ${inject('templateDatabase')}`);
    endings.unshift(() => admin.query(`drop database if exists ${name} with (force)`));
    const log = createLog(process.env.LOG_LEVEL ?? 'silent');
    const config = readConfig({ DATABASE_URL: databaseUrl(name), NODE_ENV: 'test' });
    const pool = createPool(config.databaseUrl, log, 6);
    endings.unshift(() => pool.end());
    const compute = createComputePool(config);
    endings.unshift(() => compute.stop());
    const bare: Context = { config, pool, db: createDb(pool), log, clock, compute };
    const mail = await startLocalMailServer(bare);
    endings.unshift(() => mail.stop());
    await ready({ ...bare, config: { ...config, smtpUrl: mail.url } });
  });
  afterAll(async () => {
    for (const end of endings) await end();
  });
}
