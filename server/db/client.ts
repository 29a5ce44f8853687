import { drizzle, type NodePgDatabase } from 'drizzle-orm/node-postgres';
import pg from 'pg';
import type { Logger } from 'pino';
import * as schema from './schema/index.ts';

export type Db = NodePgDatabase<typeof schema>;
/** Inside a transaction: the same queries, one connection. */
export type Tx = Parameters<Parameters<Db['transaction']>[0]>[0];
/** What a repo function takes: it runs inside a transaction or outside one. */
export type Queryable = Db | Tx;

export function createPool(url: string, log: Logger, max = 10): pg.Pool {
  const pool = new pg.Pool({ connectionString: url, max, application_name: 'cupel' });
  // Without these two a connection that the server closes would end the process.
  pool.on('error', (error) => log.warn({ err: error }, 'an idle database connection was lost'));
  pool.on('connect', (client) =>
    client.on('error', (error) => log.warn({ err: error }, 'a database connection was lost')),
  );
  return pool;
}

export const createDb = (pool: pg.Pool): Db => drizzle(pool, { schema });

/** A transaction whose own client is at hand, for COPY. */
export async function withClient<T>(
  pool: pg.Pool,
  work: (db: Db, client: pg.PoolClient) => Promise<T>,
): Promise<T> {
  const client = await pool.connect();
  try {
    return await work(drizzle(client, { schema }) as unknown as Db, client);
  } finally {
    client.release();
  }
}
