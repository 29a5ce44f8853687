import { execFile } from 'node:child_process';
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { promisify } from 'node:util';
import { sql } from 'drizzle-orm';
import { createSessions } from '../../server/auth/sessions.ts';
import type { Context } from '../../server/context.ts';
import { persons, siteRoles, sites, tags } from '../../server/db/schema/index.ts';
import { startWorkers } from '../../server/jobs/worker.ts';
import { type BenchServer, startBenchServer } from './bench-server.ts';
import type { Figure } from './figure.ts';

const run = promisify(execFile);
const tagCount = 10;
const minutes = 100_000;
const startMs = Date.UTC(2025, 0, 1);
const target = 3;

/** The same million values twice: as a plant exports them, and as COPY takes them, in the order of the key. */
function makeTexts(tagIds: readonly number[]): { wide: string; long: string } {
  const names = tagIds.map((_id, k) => `TI-${1400 + k}`);
  const wide = [`time,${names.join(',')}`];
  const columns: string[][] = tagIds.map(() => []);
  for (let minute = 0; minute < minutes; minute++) {
    const time = new Date(startMs + minute * 60_000).toISOString();
    const values = tagIds.map((_id, k) =>
      (100 * k + 50 * Math.sin(minute / 500 + k) + (minute % 17) / 9).toFixed(3),
    );
    wide.push(`${time},${values.join(',')}`);
    values.forEach((value, k) => columns[k]!.push(`1,${tagIds[k]},${time},${value},0`));
  }
  return { wide: wide.join('\n'), long: columns.map((column) => column.join('\n')).join('\n') };
}

async function prepare(context: Context): Promise<{ cookie: string; siteId: number; tagIds: number[] }> {
  const { db } = context;
  const [person] = await db
    .insert(persons)
    .values({ name: 'Bench', email: 'bench@cupel.example' })
    .returning();
  const [site] = await db.insert(sites).values({ name: 'Bench', zone: 'Europe/Copenhagen' }).returning();
  await db.insert(siteRoles).values({ personId: person!.id, siteId: site!.id, role: 'engineer' });
  const made = await db
    .insert(tags)
    .values(
      Array.from({ length: tagCount }, (_, k) => ({ siteId: site!.id, name: `TI-${1400 + k}`, unit: '°C' })),
    )
    .returning();
  const session = await createSessions(db, false).createSession(person!.id, {});
  return { cookie: `cupel_session=${session.id}`, siteId: site!.id, tagIds: made.map(({ id }) => id) };
}

/** Seconds that psql's own \copy takes for the values, into a table of the same shape; null where psql is missing. */
async function peerSeconds(context: Context, long: string): Promise<number | null> {
  const { db } = context;
  await db.execute(sql`create table peer_readings (like readings including all) partition by range (at)`);
  await db.execute(sql`
    do $$ declare month date; begin
      for month in select generate_series(date '2025-01-01', date '2025-04-01', interval '1 month') loop
        execute format('create table %I partition of peer_readings for values from (%L) to (%L)',
          to_char(month, '"peer_"YYYY_MM'), month::timestamp at time zone 'UTC', (month + interval '1 month')::timestamp at time zone 'UTC');
      end loop;
    end $$`);
  const folder = await mkdtemp(path.join(tmpdir(), 'cupel-bench-'));
  try {
    const file = path.join(folder, 'long.csv');
    await writeFile(file, long);
    const copy = `\\copy peer_readings (site_id, tag_id, at, value, quality) from '${file}' csv`;
    const started = performance.now();
    await run('psql', [context.config.databaseUrl, '-v', 'ON_ERROR_STOP=1', '-qc', copy]);
    return (performance.now() - started) / 1000;
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return null;
    throw error;
  } finally {
    await rm(folder, { recursive: true });
    await db.execute(sql`drop table peer_readings`);
  }
}

/** Seconds from the first byte sent until every reading is stored and every hour rolled up. */
async function ourSeconds(
  server: BenchServer,
  cookie: string,
  siteId: number,
  wide: string,
): Promise<number> {
  const { db } = server.context;
  const headers = { cookie, origin: server.address };
  const ask = async (method: string, where: string, body?: BodyInit, type?: string) => {
    const answer = await fetch(`${server.address}/api/v1${where}`, {
      method,
      headers: type ? { ...headers, 'content-type': type } : headers,
      ...(body === undefined ? {} : { body }),
    });
    if (!answer.ok) throw new Error(`${where}: ${await answer.text()}`);
    return answer.json();
  };
  const form = new FormData();
  form.append('file', new Blob([wide]), 'wide.csv');
  const started = performance.now();
  const { import: row, preview } = await ask('POST', `/sites/${siteId}/history-imports`, form);
  const { tagColumn: _t, valueColumn: _v, qualityColumn: _q, ...layout } = preview.proposed;
  const body = JSON.stringify({ layout, replaceExisting: false });
  await ask('POST', `/history-imports/${row.id}/start`, body, 'application/json');
  for (;;) {
    const left = await db.execute<{ state: string; dirty: boolean }>(sql`
      select state, exists (select 1 from dirty_hours) as dirty from history_imports where id = ${row.id}`);
    const { state, dirty } = left.rows[0]!;
    if (state === 'failed') throw new Error('The import failed.');
    if (state === 'done' && !dirty) break;
    await new Promise((resolve) => setTimeout(resolve, 20));
  }
  const seconds = (performance.now() - started) / 1000;
  const counted = await db.execute<{ readings: number; hours: number }>(sql`
    select (select count(*)::int from readings) as readings, (select sum(readings)::int from reading_hours) as hours`);
  const { readings, hours } = counted.rows[0]!;
  if (readings !== tagCount * minutes || hours !== readings)
    throw new Error(`${readings} readings, ${hours} in hours`);
  return seconds;
}

/** A million readings from the upload to the rolled-up hours, against PostgreSQL's own way of loading the same values. */
export async function historyFigures(adminUrl: string): Promise<Figure[]> {
  const server = await startBenchServer(adminUrl);
  const { cookie, siteId, tagIds } = await prepare(server.context);
  const workers = await startWorkers(server.context);
  try {
    const { wide, long } = makeTexts(tagIds);
    const peerValue = await peerSeconds(server.context, long);
    const value = await ourSeconds(server, cookie, siteId, wide);
    const ratio = peerValue === null ? null : value / peerValue;
    return [
      {
        name: 'a million readings of tag history, uploaded, imported and rolled up',
        value,
        unit: 's',
        peer: 'psql \\copy of the same values into the same table',
        peerValue,
        ratio,
        target,
        met: ratio === null ? null : ratio <= target,
      },
    ];
  } finally {
    await workers.stop();
    await server.stop();
  }
}
