import { randomUUID } from 'node:crypto';
import pg from 'pg';
import { migrate } from '../../server/db/migrate.ts';
import { databaseUrl } from './database-url.ts';

/** Makes one migrated database; each test file clones it. */
export default async function setup(project: { provide(key: 'templateDatabase', value: string): void }) {
  const template = `cupel_template_${randomUUID().replaceAll('-', '')}`;
  const admin = new pg.Client({ connectionString: databaseUrl('postgres') });
  await admin.connect();
  await admin.query(`create database ${template}`);
  await migrate(databaseUrl(template));
  project.provide('templateDatabase', template);
  return async () => {
    await admin.query(`drop database if exists ${template} with (force)`);
    await admin.end();
  };
}

declare module 'vitest' {
  interface ProvidedContext {
    templateDatabase: string;
  }
}
