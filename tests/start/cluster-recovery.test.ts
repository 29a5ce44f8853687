import { readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, test, vi } from 'vitest';
import { ask, connect, holdCluster, postmasterPid, startHolding } from './held-cluster.ts';
import { isAlive, temporaryFolder } from './processes.ts';

vi.setConfig({ testTimeout: 30_000 });

test('a cluster left by a killed run is used at once and stopped by the run that uses it', async () => {
  const folder = temporaryFolder();
  const killed = await holdCluster(folder);
  killed.child.kill('SIGKILL');
  await killed.ended;
  const postmaster = postmasterPid(join(folder, 'postgres'));
  expect(isAlive(postmaster)).toBe(true);
  const next = await holdCluster(folder);
  expect(next.url).toBe(killed.url);
  next.child.kill('SIGTERM');
  await next.ended;
  expect(isAlive(postmaster)).toBe(false);
});

test('a start right after kill -9 of the postmaster ends its busy backend and keeps committed work', async () => {
  const folder = temporaryFolder();
  const killed = await holdCluster(folder);
  await ask(killed.url, 'create table kept as select 7 as value');
  const busy = await connect(killed.url);
  const { rows } = await busy.query('select pg_backend_pid() as pid');
  const backend = rows[0].pid as number;
  const endless = busy.query('do $$ begin loop end loop; end $$').catch((error: Error) => error);
  await vi.waitFor(async () => {
    const active = `select count(*)::int from pg_stat_activity where pid = ${backend} and state = 'active'`;
    expect(await ask(killed.url, active)).toEqual([1]);
  });
  process.kill(postmasterPid(join(folder, 'postgres')), 'SIGKILL');
  killed.child.kill('SIGKILL');
  expect(isAlive(backend)).toBe(true);

  const next = await holdCluster(folder);
  expect(await ask(next.url, 'select value from kept')).toEqual([7]);
  expect(isAlive(backend)).toBe(false);
  expect(await endless).toBeInstanceOf(Error);
});

// PostgreSQL refuses only when the process of that number has the server's own user: another cluster's server has it.
test('a stale postmaster.pid that names a living process of the same user does no harm', async () => {
  const folder = temporaryFolder();
  const data = join(folder, 'postgres/data');
  const stopped = await holdCluster(folder);
  stopped.child.stdin?.end();
  await stopped.ended;
  await holdCluster(join(folder, 'other'));
  const living = postmasterPid(join(folder, 'other/postgres'));
  const uid = statSync(data).uid;
  expect(readFileSync(`/proc/${living}/status`, 'utf8')).toMatch(new RegExp(`^Uid:\\t${uid}\\t`, 'm'));
  writeFileSync(join(data, 'postmaster.pid'), `${living}\n${data}\n1\n5432\n\n127.0.0.1\n 1 1\nready\n`);

  const next = await holdCluster(folder);
  expect(await ask(next.url, 'select 1')).toEqual([1]);
  expect(isAlive(living)).toBe(true);
});

test('an interrupted making of the cluster is begun again', async () => {
  const folder = temporaryFolder();
  const interrupted = startHolding(folder);
  await vi.waitFor(
    () => expect(readdirSync(join(folder, 'postgres')).join(' ')).toContain('data.unfinished'),
    {
      timeout: 5000,
      interval: 5,
    },
  );
  interrupted.child.kill('SIGKILL');
  await interrupted.ended;
  const next = await holdCluster(folder);
  expect(await ask(next.url, 'select current_database()')).toEqual(['cupel']);
});
