import type pg from 'pg';
import type { Logger } from 'pino';
import type { Db } from './db/client.ts';
import type { Config } from './env.ts';

/** What the server's parts work with; passed, never imported. */
export interface Context {
  config: Config;
  db: Db;
  pool: pg.Pool;
  log: Logger;
  clock: () => Date;
}
