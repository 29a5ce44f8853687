import { symlinkSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, test, vi } from 'vitest';
import { root, runProgram, temporaryFolder, type Running } from './processes.ts';

vi.setConfig({ testTimeout: 30_000 });

const reporter = join(root, 'tests/support/plain-reporter.ts');
const config = `export default { test: {
  reporters: ['default', ${JSON.stringify(reporter)}],
  projects: [{ test: { name: 'unit', include: ['*.test.ts'] } }],
} };`;

const passing = `import { test } from 'vitest';
test('one', () => {});
test('two', () => {});`;

const everyFate = `import { afterAll, beforeAll, describe, test } from 'vitest';
test('passes', () => {});
test('fails', () => { throw new Error('on purpose'); });
test.skip('is skipped', () => {});
describe('a group that cannot begin', () => {
  beforeAll(() => { throw new Error('on purpose'); });
  test('never runs', () => {});
});
describe('a group that cannot end', () => {
  afterAll(() => { throw new Error('on purpose'); });
  test('passes', () => {});
});`;

function makeProject(files: Record<string, string>): string {
  const folder = temporaryFolder();
  symlinkSync(join(root, 'node_modules'), join(folder, 'node_modules'));
  writeFileSync(join(folder, 'vitest.config.mjs'), config);
  for (const [name, content] of Object.entries(files)) writeFileSync(join(folder, name), content);
  return folder;
}

const lastLine = (running: Running): string | undefined => running.printed().trimEnd().split('\n').at(-1);

function runTests(...args: string[]): Running {
  return runProgram([join(root, 'server/start/test.mjs'), '--project', 'unit', ...args]);
}

test('a run that succeeds ends with its figures', async () => {
  const running = runTests('--root', makeProject({ 'good.test.ts': passing }));
  expect(await running.ended).toBe(0);
  expect(lastLine(running)).toBe('2 passed, 0 failed');
});

test('failed tests, failing hooks and a file that does not load each count as failed', async () => {
  const folder = makeProject({ 'fates.test.ts': everyFate, 'broken.test.ts': 'import "./not-there.ts";' });
  const running = runTests('--root', folder);
  expect(await running.ended).toBe(1);
  expect(lastLine(running)).toBe('2 passed, 4 failed, 2 skipped');
});

test('a run that never came to its tests counts one failure', async () => {
  const running = runTests('--root', makeProject({}), '--config', 'not-there.mjs');
  expect(await running.ended).toBe(1);
  expect(lastLine(running)).toBe('0 passed, 1 failed');
});

test('a run without any test counts one failure', async () => {
  const running = runTests('--root', makeProject({}));
  expect(await running.ended).toBe(1);
  expect(lastLine(running)).toBe('0 passed, 1 failed');
});

test('a run that is ended from outside counts one failure', async () => {
  const endless = `import { test } from 'vitest';\ntest('waits', () => new Promise(() => {}), 60_000);`;
  const running = runTests('--root', makeProject({ 'endless.test.ts': endless }));
  await vi.waitFor(() => expect(running.printed()).toContain('RUN'), 20_000);
  running.child.kill('SIGTERM');
  expect(await running.ended).toBe(143);
  expect(lastLine(running)).toBe('0 passed, 1 failed');
});

test('vitest without npm test prints the same line', async () => {
  const folder = makeProject({ 'good.test.ts': passing });
  const vitest = join(root, 'node_modules/vitest/vitest.mjs');
  const running = runProgram([vitest, 'run', '--root', folder]);
  expect(await running.ended).toBe(0);
  expect(running.printed()).toMatch(/^2 passed, 0 failed$/m);
});
