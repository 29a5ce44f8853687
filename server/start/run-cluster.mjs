import { join } from 'node:path';
import { openCluster } from './cluster.mjs';
import { enterableDataFolder } from './data-folder.mjs';
import { lock } from './lock.mjs';
import { providePostgres } from './postgres.mjs';
import { projectRoot } from './project.mjs';

/**
 * A cluster for one run alone, beside that of npm start: a second run of the same kind waits for the first to end.
 * Gives the superuser's address of the database `postgres`.
 */
export async function openRunCluster(name, settings) {
  const postgres = await providePostgres();
  const folder = join(await enterableDataFolder(projectRoot, postgres.user), name);
  await lock(`${folder} run`, `Another run is using ${folder}; waiting for it to end …`);
  const address = await openCluster(postgres, folder, settings);
  return address('postgres');
}

// What a person's own Cupel is set to must not reach into a run of the tests or the benchmarks.
const personal =
  /^(PORT|DATABASE_URL|DATABASE_DIRECT_URL|CUPEL_EMPTY|CUPEL_OWN_CLUSTER|CUPEL_DATA_DIR|NODE_ENV|PG[A-Z]+)$/;

export const runEnvironment = () =>
  Object.fromEntries(Object.entries(process.env).filter(([name]) => !personal.test(name)));
