import { chownSync, mkdirSync, readFileSync } from 'node:fs';
import { createConnection } from 'node:net';
import { networkInterfaces } from 'node:os';
import { join } from 'node:path';
import pg from 'pg';
import { expect, test, vi } from 'vitest';
import { addressOf, ask, holdCluster, postmasterPid, startHolding } from './held-cluster.ts';
import { isAlive, temporaryFolder } from './processes.ts';

vi.setConfig({ testTimeout: 30_000 });

const asRoot = process.getuid?.() === 0;
const nobody = 65_534;

test('a cold start makes a cluster that is stopped with the process and keeps its data', async () => {
  const folder = temporaryFolder();
  const first = await holdCluster(folder);
  await ask(first.url, 'create table kept as select 7 as value');
  const postmaster = postmasterPid(join(folder, 'postgres'));
  first.child.kill('SIGTERM');
  expect(await first.ended).toBe(143);
  expect(isAlive(postmaster)).toBe(false);

  const second = await holdCluster(folder);
  expect(await ask(second.url, 'select value from kept')).toEqual([7]);
});

test('the cluster asks for its password and listens on the loopback interface only', async () => {
  const { url } = await holdCluster(temporaryFolder());
  const wrong = new pg.Client({ connectionString: url.replace(/:[^:@]+@/, ':guess@') });
  await expect(wrong.connect()).rejects.toThrow('password authentication failed');

  const addresses = Object.values(networkInterfaces()).flatMap((entries) => entries ?? []);
  const outside = addresses.find(({ internal, family }) => !internal && family === 'IPv4')?.address;
  if (!outside) return;
  const refused = await new Promise((resolve) => {
    const socket = createConnection({ host: outside, port: Number(new URL(url).port) });
    socket.once('connect', () => resolve('connected'));
    socket.once('error', (error: NodeJS.ErrnoException) => resolve(error.code));
  });
  expect(refused).toBe('ECONNREFUSED');
});

test('two runs share one cluster, and only the last to end stops it', async () => {
  const folder = temporaryFolder();
  const [first, second] = await Promise.all([holdCluster(folder), holdCluster(folder)]);
  expect(second.url).toBe(first.url);
  first.child.kill('SIGINT');
  expect(await first.ended).toBe(130);
  expect(await ask(second.url, 'select 1')).toEqual([1]);
  const postmaster = postmasterPid(join(folder, 'postgres'));
  second.child.stdin?.end();
  expect(await second.ended).toBe(0);
  expect(isAlive(postmaster)).toBe(false);
});

test('a run that must be alone waits for the one before it', async () => {
  const folder = temporaryFolder();
  const first = await holdCluster(folder, 'alone');
  const second = startHolding(folder, 'alone');
  await vi.waitFor(() => expect(second.printed()).toContain('waiting for it to end'), 5000);
  expect(second.printed()).not.toContain('postgres:');
  first.child.kill('SIGKILL');
  expect(await ask(await addressOf(second), 'select 1')).toEqual([1]);
});

test('a folder with a path too long for a Unix socket, and with a space in it, works', async () => {
  const folder = join(temporaryFolder(), 'a folder with quite a long name'.repeat(4));
  const { url } = await holdCluster(folder);
  expect(await ask(url, 'select 1')).toEqual([1]);
});

test.runIf(asRoot)(
  'a data folder that the database user may not enter is refused in one sentence',
  async () => {
    const closed = join(temporaryFolder(), 'closed');
    mkdirSync(closed, { mode: 0o700 });
    const running = startHolding(join(closed, 'data'));
    expect(await running.ended).toBe(1);
    expect(running.printed()).toMatch(
      /^PostgreSQL may not run as root.* may not enter .*CUPEL_DATA_DIR.*\n$/,
    );
  },
);

test.runIf(asRoot)(
  'an ordinary user runs the cluster as himself, and root afterwards as that user',
  async () => {
    const folder = temporaryFolder();
    chownSync(folder, nobody, nobody);
    const first = await holdCluster(folder, 'shared', { uid: nobody, gid: nobody });
    first.child.stdin?.end();
    expect(await first.ended).toBe(0);
    const { url } = await holdCluster(folder);
    expect(await ask(url, 'select 1')).toEqual([1]);
    const status = readFileSync(`/proc/${postmasterPid(join(folder, 'postgres'))}/status`, 'utf8');
    expect(status).toMatch(new RegExp(`^Uid:\\t${nobody}\\t`, 'm'));
  },
);
