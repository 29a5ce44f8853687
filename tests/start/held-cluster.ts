import type { SpawnOptions } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import pg from 'pg';
import { onTestFinished, vi } from 'vitest';
import { root, runProgram, type Running } from './processes.ts';

export interface Held extends Running {
  url: string;
}

/** Holds a cluster in `dataFolder` from a process of its own; waits until it can be used. */
export async function holdCluster(
  dataFolder: string,
  kind: 'shared' | 'alone' = 'shared',
  options: SpawnOptions = {},
): Promise<Held> {
  const running = startHolding(dataFolder, kind, options);
  const early = running.ended.then((code) => {
    throw new Error(`ended with ${code}: ${running.printed()}`);
  });
  const url = await Promise.race([addressOf(running), early]);
  early.catch(() => {});
  return { ...running, url };
}

export function startHolding(
  dataFolder: string,
  kind: 'shared' | 'alone' = 'shared',
  options: SpawnOptions = {},
): Running {
  return runProgram(
    [join(root, 'tests/start/hold-cluster.mjs'), kind],
    { CUPEL_DATA_DIR: dataFolder },
    options,
  );
}

export const addressOf = (running: Running): Promise<string> =>
  vi.waitFor(
    () => {
      const url = /^postgres:.*$/m.exec(running.printed())?.[0];
      if (!url) throw new Error(`no address yet: ${running.printed()}`);
      return url;
    },
    { timeout: 20_000, interval: 10 },
  );

export const postmasterPid = (folder: string): number =>
  Number(readFileSync(join(folder, 'data/postmaster.pid'), 'utf8').split('\n')[0]);

export async function connect(url: string): Promise<pg.Client> {
  const client = new pg.Client({ connectionString: url });
  // A server that is ended on purpose breaks the connection; the test sees it in its query.
  client.on('error', () => {});
  await client.connect();
  onTestFinished(() => client.end().catch(() => {}));
  return client;
}

/** The values of a query's rows, one after another. */
export async function ask(url: string, sql: string): Promise<unknown[]> {
  const client = await connect(url);
  const { rows } = await client.query({ text: sql, rowMode: 'array' });
  return rows.flat();
}
