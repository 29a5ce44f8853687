import { type ChildProcess, spawn } from 'node:child_process';
import { randomUUID } from 'node:crypto';
import { once } from 'node:events';
import path from 'node:path';
import pg from 'pg';
import pino from 'pino';
import { createSessions } from '../../server/auth/sessions.ts';
import { createDb, createPool } from '../../server/db/client.ts';
import { migrate } from '../../server/db/migrate.ts';
import { persons, siteRoles } from '../../server/db/schema/index.ts';
import type { SampleImportView } from '../../shared/contracts/sample-import.ts';
import { databaseUrl } from '../support/database-url.ts';
import { addSiteRows } from '../support/site-rows.ts';
import { seededRandom } from './seeded-random.ts';
import type { SlowTrial } from './trial.ts';

interface KilledCommits {
  kills: number;
  rows: number;
}

/**
 * A server that is killed with SIGKILL at a random moment of adding a file: afterwards the samples are there wholly or
 * not at all, and the same file can be added (again) without one lost or doubled.
 */
export async function tryKilledCommits(seed: number, { kills, rows }: KilledCommits) {
  const random = seededRandom(seed);
  const place = await makePlace();
  try {
    const usual = await place.usualMs(fileOf(0, rows), rows);
    const figures = { kills, whole: 0, absent: 0, half: 0, notMended: 0 };
    for (let number = 1; number <= kills; number++) {
      const found = await place.killDuring(fileOf(number, rows), random.uniform() * usual);
      if (found.count === rows && found.state === 'committed') figures.whole++;
      else if (found.count === 0 && found.state === 'uploaded') figures.absent++;
      else figures.half++;
      if (found.state === 'uploaded' && (await place.addAgain(found.importId)) !== rows) figures.notMended++;
    }
    return { figures, agrees: figures.half === 0 && figures.notMended === 0 && figures.absent > 0 };
  } finally {
    await place.close();
  }
}

export const killedCommitTrials: SlowTrial[] = [
  {
    name: 'a server killed at random moments of adding 20,000 samples: wholly there or wholly absent',
    run: (seed) => tryKilledCommits(seed, { kills: 50, rows: 20_000 }),
  },
];

function fileOf(number: number, rows: number): string {
  const lines = ['Sample no.;Taken;Value;Unit'];
  for (let row = 0; row < rows; row++) {
    const at = new Date(Date.UTC(2020, 0, 1) + row * 60_000).toISOString();
    lines.push(`K${number}-${row};${at};${1400 + (row % 50)};°C`);
  }
  return lines.join('\n');
}

async function makePlace() {
  const name = `cupel_trial_${randomUUID().replaceAll('-', '')}`;
  const admin = new pg.Client({ connectionString: databaseUrl('postgres') });
  await admin.connect();
  await admin.query(`create database ${name}`);
  const url = databaseUrl(name);
  await migrate(url);
  const pool = createPool(url, pino({ level: 'silent' }), 2);
  const db = createDb(pool);
  const addPerson = async (who: string) =>
    (
      await db
        .insert(persons)
        .values({ name: who, email: `${who}@trial.example` })
        .returning()
    )[0]!.id;
  const { siteId } = await addSiteRows(db, 'Trial', await addPerson('engineer'));
  const personId = await addPerson('technician');
  await db.insert(siteRoles).values({ personId, siteId, role: 'technician' });
  const session = await createSessions(db, false).createSession(personId, {});
  let server = await startServer(url);

  const ask = async (where: string, init: { body: FormData | string; json?: boolean }) => {
    const origin = `http://127.0.0.1:${server.port}`;
    const headers: Record<string, string> = { cookie: `cupel_session=${session.id}`, origin };
    if (init.json) headers['content-type'] = 'application/json';
    const answer = await fetch(`${origin}/api/v1${where}`, { method: 'POST', headers, body: init.body });
    if (!answer.ok) throw new Error(`${where}: ${await answer.text()}`);
    return (await answer.json()) as SampleImportView;
  };
  const upload = (content: string) => {
    const body = new FormData();
    body.append('file', new Blob([content]), 'trial.csv');
    return ask(`/sites/${siteId}/sample-imports`, { body });
  };
  const commit = ({ import: row, outcome }: SampleImportView) =>
    ask(`/sample-imports/${row.id}/commit`, {
      body: JSON.stringify({ version: row.version, outcome }),
      json: true,
    });
  const standing = async (importId: number) => {
    const found = await pool.query<{ state: string; count: number }>(
      `select state, (select count(*)::int from samples where import_id = i.id) as count from sample_imports i where id = $1`,
      [importId],
    );
    return { ...found.rows[0]!, importId };
  };
  /** What the dead server asked of the database goes on until the database notices; only then its end is known. */
  const untilQuiet = async () => {
    for (;;) {
      const busy = await admin.query(`select from pg_stat_activity where datname = $1 and state <> 'idle'`, [
        name,
      ]);
      if (busy.rowCount === 0) return;
      await new Promise((resolve) => setTimeout(resolve, 5));
    }
  };

  return {
    async usualMs(content: string, rows: number) {
      const view = await upload(content);
      const started = performance.now();
      await commit(view);
      const { count } = await standing(view.import.id);
      if (count !== rows) throw new Error(`${count} of ${rows} samples were added undisturbed.`);
      return performance.now() - started;
    },
    async killDuring(content: string, afterMs: number) {
      const view = await upload(content);
      const ended = commit(view).catch(() => null);
      await new Promise((resolve) => setTimeout(resolve, afterMs));
      const gone = once(server.child, 'exit');
      server.child.kill('SIGKILL');
      await Promise.all([ended, gone]);
      await untilQuiet();
      server = await startServer(url);
      return standing(view.import.id);
    },
    async addAgain(importId: number) {
      const origin = `http://127.0.0.1:${server.port}`;
      const answer = await fetch(`${origin}/api/v1/sample-imports/${importId}`, {
        headers: { cookie: `cupel_session=${session.id}` },
      });
      await commit((await answer.json()) as SampleImportView);
      return (await standing(importId)).count;
    },
    async close() {
      server.child.kill('SIGKILL');
      await pool.end();
      await admin.query(`drop database ${name} with (force)`);
      await admin.end();
    },
  };
}

async function startServer(url: string): Promise<{ child: ChildProcess; port: number }> {
  const env = { ...process.env, NODE_ENV: 'test', DATABASE_URL: url, SMTP_URL: 'smtp://127.0.0.1:1' };
  const script = path.resolve(import.meta.dirname, '../support/app-process.ts');
  const child = spawn(process.execPath, ['--import', 'tsx', script], {
    env,
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  const failed = once(child, 'exit').then(() => Promise.reject(new Error('The server did not start.')));
  const [port] = (await Promise.race([once(child.stdout!, 'data'), failed])) as [Buffer];
  failed.catch(() => {});
  return { child, port: Number(port) };
}
