import type pg from 'pg';
import type { Logger } from 'pino';
import type { Db } from './db/client.ts';
import type { Config } from './env.ts';
import type { ComputePool } from './jobs/compute-pool.ts';

/** What the server's parts work with; passed, never imported. */
export interface Context {
  config: Config;
  db: Db;
  pool: pg.Pool;
  log: Logger;
  clock: () => Date;
  /** Worker threads for heavy computation. */
  compute: ComputePool;
}
