import { existsSync } from 'node:fs';
import { createServer } from 'node:net';
import { join } from 'node:path';
import { expect, onTestFinished, test, vi } from 'vitest';
import { holdCluster, postmasterPid } from './held-cluster.ts';
import { isAlive, readChildren, root, runProgram, temporaryFolder, type Running } from './processes.ts';

vi.setConfig({ testTimeout: 60_000 });

const start = join(root, 'server/start/start.mjs');

async function listen(): Promise<{ port: number; close: () => Promise<unknown> }> {
  const server = createServer((socket) => socket.destroy());
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const close = () => new Promise((resolve) => server.close(resolve));
  onTestFinished(() => close().then(() => {}));
  return { port: (server.address() as { port: number }).port, close };
}

async function freePort(): Promise<number> {
  const { port, close } = await listen();
  await close();
  return port;
}

function startCupel(folder: string, port: number, env: NodeJS.ProcessEnv = {}): Running {
  return runProgram([start, '--empty'], { PORT: String(port), CUPEL_DATA_DIR: folder, ...env });
}

async function whenReady(running: Running, port: number): Promise<void> {
  const early = running.ended.then((code) => {
    throw new Error(`ended with ${code}: ${running.printed()}`);
  });
  const ready = vi.waitFor(
    async () => {
      const answer = await fetch(`http://127.0.0.1:${port}/api/health`);
      expect(await answer.json()).toMatchObject({ status: 'ready' });
      expect(running.printed()).toContain('Cupel is ready');
    },
    { timeout: 50_000, interval: 20 },
  );
  await Promise.race([ready, early]);
  early.catch(() => {});
}

/** The number of the server's process, which the script started. */
const serverOf = ({ pid }: Running): number => {
  const children = readChildren(pid);
  expect(children).toHaveLength(1);
  return children[0]!;
};

test('an occupied port is refused in one sentence before anything is made', async () => {
  const { port } = await listen();
  const folder = join(temporaryFolder(), 'data');
  const running = startCupel(folder, port);
  expect(await running.ended).toBe(1);
  expect(running.printed()).toBe(
    `Port ${port} is already in use, perhaps by Cupel itself. ` +
      'Stop the program that uses it, or choose another port, for example: PORT=4700 npm start\n',
  );
  expect(existsSync(folder)).toBe(false);
});

test.each(['0', '70000', 'http', '46.5'])('PORT=%s is refused in one sentence', async (port) => {
  const running = runProgram([start], { PORT: port, CUPEL_DATA_DIR: join(temporaryFolder(), 'data') });
  expect(await running.ended).toBe(1);
  expect(running.printed()).toBe(`PORT must be a whole number from 1 to 65535, not "${port}".\n`);
});

test('a word that npm start does not know is refused in one sentence', async () => {
  const running = runProgram([start, '--emtpy'], { CUPEL_DATA_DIR: join(temporaryFolder(), 'data') });
  expect(await running.ended).toBe(1);
  expect(running.printed()).toMatch(/^npm start knows only .*--emtpy".\n$/);
});

test('a second start beside the first is refused and harms nothing; SIGTERM to npm ends everything', async () => {
  const folder = temporaryFolder();
  const port = await freePort();
  const env = { PORT: String(port), CUPEL_DATA_DIR: folder };
  const first = runProgram(['start', '--', '--empty'], env, {}, 'npm');
  await whenReady(first, port);
  const second = startCupel(folder, port);
  expect(await second.ended).toBe(1);
  expect(second.printed()).toContain(`Port ${port} is already in use`);
  await whenReady(first, port);

  const postmaster = postmasterPid(join(folder, 'postgres'));
  first.child.kill('SIGTERM');
  await first.ended;
  await vi.waitFor(() => expect(isAlive(postmaster)).toBe(false), { timeout: 5000, interval: 10 });
  await expect(fetch(`http://127.0.0.1:${port}/`)).rejects.toThrow();
});

test('Cupel starts again at once after kill -9 of its script, its server and its database', async () => {
  const folder = temporaryFolder();
  const port = await freePort();
  const first = startCupel(folder, port);
  await whenReady(first, port);
  const server = serverOf(first);
  process.kill(first.pid, 'SIGKILL');
  await vi.waitFor(() => expect(isAlive(server)).toBe(false), { timeout: 5000, interval: 10 });

  const second = startCupel(folder, port);
  await whenReady(second, port);
  for (const pid of [serverOf(second), second.pid, postmasterPid(join(folder, 'postgres'))]) {
    process.kill(pid, 'SIGKILL');
  }
  await second.ended;
  const third = startCupel(folder, port);
  await whenReady(third, port);
  third.child.kill('SIGINT');
  expect(await third.ended).toBe(130);
});

test('with DATABASE_URL no cluster is made, and the one that is used is left alone', async () => {
  const { url } = await holdCluster(temporaryFolder());
  const folder = temporaryFolder();
  const port = await freePort();
  const running = startCupel(folder, port, { DATABASE_URL: url });
  await whenReady(running, port);
  expect(existsSync(join(folder, 'postgres'))).toBe(false);
  running.child.kill('SIGTERM');
  await running.ended;
  const other = await holdCluster(temporaryFolder());
  expect(other.url).not.toBe(url);
});
