// npm start: everything from a fresh clone to a serving Cupel.
import { join } from 'node:path';
import { build } from './build.mjs';
import { openCluster } from './cluster.mjs';
import { dataFolder, enterableDataFolder } from './data-folder.mjs';
import { isEnding, runScript } from './ending.mjs';
import { Failure } from './messages.mjs';
import { providePackages } from './packages.mjs';
import { requirePort } from './port.mjs';
import { providePostgres } from './postgres.mjs';
import { projectRoot } from './project.mjs';
import { runNode } from './run.mjs';

function readArguments(args) {
  const unknown = args.find((arg) => arg !== '--empty');
  if (unknown)
    throw new Failure(
      `npm start knows only "-- --empty", which starts without the example company; not "${unknown}".`,
    );
  return { empty: args.includes('--empty') };
}

async function provideDatabase() {
  if (process.env.DATABASE_URL) {
    return { DATABASE_URL: process.env.DATABASE_URL, CUPEL_DATA_DIR: dataFolder(projectRoot) };
  }
  const postgres = await providePostgres();
  const folder = await enterableDataFolder(projectRoot, postgres.user);
  const address = await openCluster(postgres, join(folder, 'postgres'));
  return { DATABASE_URL: address('cupel'), CUPEL_OWN_CLUSTER: '1', CUPEL_DATA_DIR: folder };
}

await runScript(async () => {
  const { empty } = readArguments(process.argv.slice(2));
  const port = await requirePort(process.env.PORT || undefined, process.env.HOST || undefined);
  await providePackages(projectRoot);
  const database = await provideDatabase();
  await build(projectRoot, 'client', 'server');
  const { CUPEL_OWN_CLUSTER: _, CUPEL_EMPTY: __, ...inherited } = process.env;
  const env = { NODE_ENV: 'production', ...inherited, ...database, PORT: String(port) };
  if (empty) env.CUPEL_EMPTY = '1';
  const { code, signal } = await runNode([join(projectRoot, 'dist/server/main.js')], env);
  if (signal && !isEnding()) console.error(`The server was ended from outside (${signal}).`);
  return code;
});
