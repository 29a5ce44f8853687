import { readFile } from 'node:fs/promises';
import path from 'node:path';
import { drizzle } from 'drizzle-orm/node-postgres';
import { migrate as drizzleMigrate } from 'drizzle-orm/node-postgres/migrator';
import { runMigrations as migrateQueue } from 'graphile-worker';
import pg from 'pg';

const migrationsFolder = path.resolve('drizzle');

/** Brings a database to the present schema, the queue's included. Safe when several processes start at once. */
export async function migrate(url: string): Promise<void> {
  const client = new pg.Client({ connectionString: url, application_name: 'cupel-migrate' });
  await client.connect();
  try {
    // Two migrations at once collide in the catalogue; the lock ends with the connection.
    await client.query(`select pg_advisory_lock(hashtext('cupel-migrations'))`);
    await client.query('set client_min_messages = warning');
    await drizzleMigrate(drizzle(client), { migrationsFolder });
    await refuseSkipped(client);
    await migrateQueue({ connectionString: url });
  } finally {
    await client.end();
  }
}

/** A migration older than the newest applied one is skipped without a word; after a bad merge that must be heard. */
async function refuseSkipped(client: pg.Client): Promise<void> {
  const journal = JSON.parse(await readFile(path.join(migrationsFolder, 'meta/_journal.json'), 'utf8')) as {
    entries: unknown[];
  };
  const applied = await client.query<{ count: number }>(
    'select count(*)::int as count from drizzle.__drizzle_migrations',
  );
  if (applied.rows[0]?.count !== journal.entries.length) {
    throw new Error(
      `The database has ${applied.rows[0]?.count} of ${journal.entries.length} migrations. ` +
        'One is older than the newest applied: generate it again so that it comes last.',
    );
  }
}
