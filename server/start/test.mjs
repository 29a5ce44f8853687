// npm test and npm run trials: everything from a fresh clone to the figures of a test run.
import { join } from 'node:path';
import { build } from './build.mjs';
import { provideChromium } from './chromium.mjs';
import { atEnd, runScript } from './ending.mjs';
import { providePackages } from './packages.mjs';
import { projectRoot } from './project.mjs';
import { openRunCluster, runEnvironment } from './run-cluster.mjs';
import { runNode } from './run.mjs';
import { openTestCounts } from './test-counts.mjs';

// The data of a test run are worth nothing after it, so the disk need not be waited for.
const fastAndForgetful = { fsync: 'off', synchronous_commit: 'off', full_page_writes: 'off' };

function projectsIn(args) {
  return args.flatMap((arg, at) => {
    if (arg.startsWith('--project=')) return arg.slice('--project='.length);
    return arg === '--project' ? (args[at + 1] ?? []) : [];
  });
}

function needsNothingAround(args) {
  const projects = projectsIn(args);
  return projects.length > 0 && projects.every((name) => name === 'unit' || name === 'client');
}

async function provideSurroundings() {
  const CHROMIUM = await provideChromium();
  const TEST_DATABASE_URL = await openRunCluster('test-postgres', fastAndForgetful);
  await build(projectRoot, 'client');
  return { CHROMIUM, TEST_DATABASE_URL };
}

await runScript(async () => {
  const [first, ...rest] = process.argv.slice(2);
  if (first === '--trials') {
    await providePackages(projectRoot);
    const env = { ...runEnvironment(), ...(await provideSurroundings()) };
    const { code } = await runNode(
      ['--import', 'tsx', join(projectRoot, 'tests/trials/main.ts'), ...rest],
      env,
    );
    return code;
  }
  const counts = openTestCounts();
  // Registered first, so that it is done last: nothing may follow this line.
  atEnd((exitCode) => console.log(counts.takeLine(exitCode)));
  const args = process.argv.slice(2);
  await providePackages(projectRoot);
  const surroundings = needsNothingAround(args) ? {} : await provideSurroundings();
  const env = { ...runEnvironment(), ...surroundings, CUPEL_TEST_COUNTS: counts.file };
  const { code } = await runNode([join(projectRoot, 'node_modules/vitest/vitest.mjs'), 'run', ...args], env);
  return code;
});
