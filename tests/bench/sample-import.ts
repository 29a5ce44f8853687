import { execFile } from 'node:child_process';
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { promisify } from 'node:util';
import { sql } from 'drizzle-orm';
import { createSessions } from '../../server/auth/sessions.ts';
import { persons, siteRoles } from '../../server/db/schema/index.ts';
import type { SampleImportView } from '../../shared/contracts/sample-import.ts';
import { addSiteRows } from '../support/site-rows.ts';
import { type BenchServer, startBenchServer } from './bench-server.ts';
import type { Figure } from './figure.ts';

const run = promisify(execFile);
const rows = 100_000;
const files = 4;
const dryRunWithin = 5;
const commitWithin = 10;
const memoryWithin = 1.25;
const startMs = Date.UTC(2015, 0, 1);
const everyMs = 600_000;

/** As a laboratory exports them: semicolons, decimal commas, day before month, of samples that no other file holds. */
function fileOf(number: number): string {
  const lines = ['Sample no.;Taken;Value;Unit;Point'];
  const two = (count: number) => String(count).padStart(2, '0');
  for (let row = 0; row < rows; row++) {
    const at = new Date(startMs + row * everyMs);
    const day = `${two(at.getUTCDate())}.${two(at.getUTCMonth() + 1)}.${at.getUTCFullYear()}`;
    const value = (1400 + (row % 977) / 10).toFixed(1).replace('.', ',');
    lines.push(
      `L${number}-${row};${day} ${two(at.getUTCHours())}:${two(at.getUTCMinutes())}+00:00;${value};°C;Bench`,
    );
  }
  return lines.join('\r\n');
}

/** Seconds that psql's \copy takes for the samples just added, into a table of the same shape. */
async function peerSeconds({ context }: BenchServer, importId: number): Promise<number | null> {
  const { db } = context;
  const folder = await mkdtemp(path.join(tmpdir(), 'cupel-bench-'));
  const file = path.join(folder, 'samples.csv');
  const columns =
    'id, site_id, sample_point_id, sample_number, taken_at, reported_at, value, unit, as_written, import_id, line, entered_by, entered_at';
  const psql = (command: string) =>
    run('psql', [context.config.databaseUrl, '-v', 'ON_ERROR_STOP=1', '-qc', command]);
  try {
    await writeFile(file, '');
    await psql(`\\copy (select ${columns} from samples where import_id = ${importId}) to '${file}' csv`);
    await db.execute(
      sql`create table peer_samples (like samples including defaults including constraints including indexes)`,
    );
    const started = performance.now();
    await psql(`\\copy peer_samples (${columns}) from '${file}' csv`);
    return (performance.now() - started) / 1000;
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return null;
    throw error;
  } finally {
    await db.execute(sql`drop table if exists peer_samples`);
    await rm(folder, { recursive: true });
  }
}

async function signIn({ context, address }: BenchServer): Promise<{ siteId: number; headers: HeadersInit }> {
  const { db } = context;
  const add = async (name: string) => {
    const email = `${name.toLowerCase()}@cupel.example`;
    return (await db.insert(persons).values({ name, email }).returning())[0]!.id;
  };
  const { siteId } = await addSiteRows(db, 'Bench', await add('Engineer'));
  const personId = await add('Technician');
  await db.insert(siteRoles).values({ personId, siteId, role: 'technician' });
  const session = await createSessions(db, false).createSession(personId, {});
  return { siteId, headers: { cookie: `cupel_session=${session.id}`, origin: address } };
}

/** A hundred thousand samples from the upload to the dry run, and from there into the registry; and what memory stays taken. */
export async function sampleFigures(adminUrl: string): Promise<Figure[]> {
  const server = await startBenchServer(adminUrl);
  try {
    const { siteId, headers } = await signIn(server);
    const send = async (where: string, init: RequestInit): Promise<SampleImportView> => {
      const answer = await fetch(`${server.address}/api/v1${where}`, { method: 'POST', ...init });
      if (!answer.ok) throw new Error(`${where}: ${await answer.text()}`);
      return (await answer.json()) as SampleImportView;
    };
    const timed = async (work: () => Promise<SampleImportView>) => {
      const started = performance.now();
      const view = await work();
      return { view, seconds: (performance.now() - started) / 1000 };
    };
    const taken: { dryRun: number; commit: number; memory: number; importId: number }[] = [];
    for (let number = 0; number < files; number++) {
      const form = new FormData();
      form.append('file', new Blob([fileOf(number)]), `week-${number}.csv`);
      const dryRun = await timed(() => send(`/sites/${siteId}/sample-imports`, { headers, body: form }));
      const { outcome, import: row } = dryRun.view;
      const body = JSON.stringify({ version: row.version, outcome });
      const json = { ...headers, 'content-type': 'application/json' };
      const commit = await timed(() => send(`/sample-imports/${row.id}/commit`, { headers: json, body }));
      if (commit.view.import.counts?.added !== rows)
        throw new Error(JSON.stringify(commit.view.import.counts));
      const memory = process.memoryUsage().rss / 1024 ** 2;
      taken.push({ dryRun: dryRun.seconds, commit: commit.seconds, memory, importId: row.id });
    }
    return figuresOf(taken, await peerSeconds(server, taken[0]!.importId));
  } finally {
    await server.stop();
  }
}

function figuresOf(
  taken: { dryRun: number; commit: number; memory: number }[],
  copySeconds: number | null,
): Figure[] {
  const worst = (of: 'dryRun' | 'commit') => Math.max(...taken.map((one) => one[of]));
  const beside = (value: number) => (copySeconds === null ? null : value / copySeconds);
  const scale = {
    unit: 's',
    peer: 'psql \\copy of the same rows, for scale',
    peerValue: copySeconds,
    target: null,
  };
  const [first, last] = [taken[1]!.memory, taken.at(-1)!.memory];
  const dryRun = worst('dryRun');
  const commit = worst('commit');
  return [
    {
      ...scale,
      name: `dry run of 100,000 samples, upload included, under ${dryRunWithin} s`,
      value: dryRun,
      ratio: beside(dryRun),
      met: dryRun < dryRunWithin,
    },
    {
      ...scale,
      name: `adding 100,000 samples, under ${commitWithin} s`,
      value: commit,
      ratio: beside(commit),
      met: commit < commitWithin,
    },
    {
      name: `memory of the server after ${files} files of 100,000 samples`,
      value: last,
      unit: 'MB',
      peer: 'after 2 of them',
      peerValue: first,
      ratio: last / first,
      target: memoryWithin,
      met: last / first <= memoryWithin,
    },
  ];
}
