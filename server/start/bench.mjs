// npm run bench: the benchmarks against a production build and a database with the durability that it has in service.
import { join } from 'node:path';
import { build } from './build.mjs';
import { runScript } from './ending.mjs';
import { providePackages } from './packages.mjs';
import { projectRoot } from './project.mjs';
import { openRunCluster, runEnvironment } from './run-cluster.mjs';
import { runNode } from './run.mjs';

await runScript(async () => {
  await providePackages(projectRoot);
  const BENCH_DATABASE_URL = await openRunCluster('bench-postgres');
  await build(projectRoot, 'client', 'server');
  const env = { ...runEnvironment(), BENCH_DATABASE_URL };
  const main = join(projectRoot, 'tests/bench/main.ts');
  const { code } = await runNode(['--import', 'tsx', main, ...process.argv.slice(2)], env);
  return code;
});
