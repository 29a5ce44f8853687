// Opens a cluster as the scripts do, prints its address, and holds it until its standard input ends or a signal comes.
// Arguments: `shared` as npm start has it, or `alone` as npm test has it.
import { once } from 'node:events';
import { join } from 'node:path';
import { openCluster } from '../../server/start/cluster.mjs';
import { enterableDataFolder } from '../../server/start/data-folder.mjs';
import { runScript } from '../../server/start/ending.mjs';
import { providePostgres } from '../../server/start/postgres.mjs';
import { projectRoot } from '../../server/start/project.mjs';
import { openRunCluster } from '../../server/start/run-cluster.mjs';

// Nothing here waits for the disk: the tests kill processes, not machines.
const hasty = { fsync: 'off' };

async function openShared() {
  const postgres = await providePostgres();
  const folder = await enterableDataFolder(projectRoot, postgres.user);
  const address = await openCluster(postgres, join(folder, 'postgres'), hasty);
  return address('cupel');
}

await runScript(async () => {
  const url = process.argv[2] === 'alone' ? await openRunCluster('test-postgres', hasty) : await openShared();
  process.stdout.write(`${url}\n`);
  await once(process.stdin.resume(), 'end');
  return 0;
});
