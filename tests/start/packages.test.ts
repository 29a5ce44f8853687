import { execFileSync } from 'node:child_process';
import { cpSync, existsSync, mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, test, vi } from 'vitest';
import { root, runProgram, temporaryFolder } from './processes.ts';

vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

const installing = 'Installing the packages';
let installed: string;

/** A project with one package beside it, so that npm needs no network. */
function writeProject(folder: string, version: string): void {
  const project = { name: 'project', version: '1.0.0', dependencies: { thing: 'file:thing' } };
  const packages = {
    '': project,
    'node_modules/thing': { resolved: 'thing', link: true },
    thing: { version },
  };
  mkdirSync(join(folder, 'thing'), { recursive: true });
  writeFileSync(join(folder, 'thing/package.json'), JSON.stringify({ name: 'thing', version }));
  writeFileSync(join(folder, 'package.json'), JSON.stringify(project));
  const lock = { name: 'project', version: '1.0.0', lockfileVersion: 3, requires: true, packages };
  writeFileSync(join(folder, 'package-lock.json'), JSON.stringify(lock));
}

async function provide(folder: string): Promise<string> {
  const running = runProgram([join(root, 'tests/start/provide.mjs'), 'packages', folder]);
  expect(await running.ended, running.printed()).toBe(0);
  return running.printed();
}

beforeAll(() => {
  installed = mkdtempSync(join(tmpdir(), 'cupel-start-'));
  writeProject(installed, '1.0.0');
  const args = [join(root, 'tests/start/provide.mjs'), 'packages', installed];
  expect(execFileSync(process.execPath, args, { encoding: 'utf8' })).toContain(installing);
});
afterAll(() => rmSync(installed, { recursive: true, force: true }));

function copyOfInstalled(): string {
  const folder = temporaryFolder();
  cpSync(installed, folder, { recursive: true });
  return folder;
}

test('missing packages are installed once, with a stamp that says for what', async () => {
  expect(existsSync(join(installed, 'node_modules/thing/package.json'))).toBe(true);
  const stamp = readFileSync(join(installed, 'node_modules/.stamp'), 'utf8');
  expect(stamp).toMatch(new RegExp(`^${process.version} [0-9a-f]{64}$`));
  expect(await provide(copyOfInstalled())).toBe('');
});

test('a changed lock installs again', async () => {
  const folder = copyOfInstalled();
  writeProject(folder, '1.1.0');
  expect(await provide(folder)).toContain(installing);
  expect(await provide(folder)).toBe('');
});

test('packages made for another version of Node.js are installed again', async () => {
  const folder = copyOfInstalled();
  const stampFile = join(folder, 'node_modules/.stamp');
  writeFileSync(stampFile, readFileSync(stampFile, 'utf8').replace(process.version, 'v18.0.0'));
  expect(await provide(folder)).toContain(installing);
});

test('an installation that was interrupted is done again, one that somebody did by hand is not', async () => {
  const folder = copyOfInstalled();
  rmSync(join(folder, 'node_modules/.stamp'));
  expect(await provide(folder)).toBe('');
  rmSync(join(folder, 'node_modules/.stamp'));
  rmSync(join(folder, 'node_modules/.package-lock.json'));
  expect(await provide(folder)).toContain(installing);
});
