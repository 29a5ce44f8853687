import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { eq, sql } from 'drizzle-orm';
import { describe, expect, it } from 'vitest';
import { historyImports, readings, tagSpans } from '../../server/db/schema/index.ts';
import { unlockDeadWorkers } from '../../server/jobs/unlock-dead-workers.ts';
import { type HistorySite, historySite, layoutOf } from '../support/history-site.ts';
import { useServer } from '../support/server.ts';

const server = useServer();
const names = Array.from({ length: 8 }, (_, k) => `TI-${k}`);
const lines = 80_000;
const valueAt = (line: number, tag: number) => (line * 7 + tag) % 1000;

/** Several chunks of 200,000 readings, with one refused value in every ten thousandth line. */
function longFile(): string {
  const rows = ['time,' + names.join(',')];
  for (let line = 0; line < lines; line++) {
    const values = names.map((_name, tag) => (tag === 0 && line % 10_000 === 5 ? 'x' : valueAt(line, tag)));
    rows.push(`${new Date(Date.UTC(2026, 0, 1, 0, line)).toISOString()},${values.join(',')}`);
  }
  return rows.join('\n');
}
const refused = lines / 10_000;

async function started(site: HistorySite) {
  const { import: row, preview } = await site.upload(longFile());
  await site.start(row.id, layoutOf(preview.proposed)).expect(200);
  return row.id;
}

const lineDone = async (id: number) =>
  (await server.context.db.select().from(historyImports).where(eq(historyImports.id, id)))[0]!.lineDone;

/** Waits until some of the file is stored, but not all. */
async function untilPartlyDone(id: number): Promise<void> {
  await expect.poll(() => lineDone(id), { interval: 5, timeout: 40_000 }).toBeGreaterThan(0);
  expect(await lineDone(id)).toBeLessThan(lines);
}

async function expectAll(site: HistorySite, id: number): Promise<void> {
  const { import: row, refusals } = await site.view(id);
  expect(row).toMatchObject({
    state: 'done',
    added: lines * 8 - refused,
    unchanged: 0,
    keptDifferent: 0,
    refused,
  });
  expect(refusals).toHaveLength(refused);
  const { db } = server.context;
  const sums = await db
    .select({ count: sql<number>`count(*)::int`, sum: sql<number>`sum(value)` })
    .from(readings)
    .where(eq(readings.siteId, site.siteId));
  let sum = 0;
  for (let line = 0; line < lines; line++) {
    for (let tag = 0; tag < 8; tag++) sum += tag === 0 && line % 10_000 === 5 ? 0 : valueAt(line, tag);
  }
  expect(sums).toEqual([{ count: lines * 8 - refused, sum }]);
  const spans = await db.select().from(tagSpans).where(eq(tagSpans.siteId, site.siteId));
  expect(spans.reduce((total, span) => total + span.readings, 0)).toBe(lines * 8 - refused);
}

describe('an import whose worker is killed', () => {
  it('goes on by itself behind the last stored chunk, and nothing is lost or counted twice', async () => {
    const site = await historySite(server, names);
    const id = await started(site);
    const worker = spawn('node', ['--import', 'tsx', 'tests/support/history-worker.ts'], {
      env: { ...process.env, DATABASE_URL: server.context.config.databaseUrl },
    });
    await untilPartlyDone(id);
    worker.kill('SIGKILL');
    await once(worker, 'exit');
    expect((await site.view(id)).import.state).toBe('running');
    const before = await lineDone(id);
    expect(before).toBeGreaterThan(0);
    await expect
      .poll(
        async () => {
          await unlockDeadWorkers(server.context);
          await server.drainJobs();
          return (await site.view(id)).import.state;
        },
        { timeout: 60_000 },
      )
      .toBe('done');
    await expectAll(site, id);
  }, 120_000);
});

describe('a running import', () => {
  it('tells how far it is, stops when asked, keeps what is stored, and goes on when asked', async () => {
    const site = await historySite(server, names);
    const id = await started(site);
    const { runId } = (await site.view(id)).import;
    const drained = server.drainJobs();
    await untilPartlyDone(id);
    const half = await site.run(runId!);
    expect(half).toMatchObject({ state: 'running', total: lines + 1 });
    await site.engineer.post(`/api/v1/runs/${runId}/cancel`).send({}).expect(200);
    await drained;
    const stopped = await site.view(id);
    expect(stopped.import.state).toBe('cancelled');
    expect(stopped.import.added).toBeGreaterThan(0);
    expect(stopped.import.added).toBeLessThan(lines * 8 - refused);
    const layout = layoutOf(stopped.preview.proposed);
    expect((await site.start(id, layout)).body.detail).toMatch(/Go on with that/);

    await site.engineer.post(`/api/v1/history-imports/${id}/resume`).send({}).expect(200);
    await server.drainJobs();
    await expectAll(site, id);
  }, 120_000);

  it('that waits is cancelled before it begins, and can then be laid out anew', async () => {
    const site = await historySite(server, ['TI-1']);
    const { import: row, preview } = await site.upload('time,TI-1\n2026-11-01T10:00:00Z,1.5\n');
    await site.start(row.id, layoutOf(preview.proposed)).expect(200);
    const { runId } = (await site.view(row.id)).import;
    await site.engineer.post(`/api/v1/runs/${runId}/cancel`).send({}).expect(200);
    await server.drainJobs();
    expect((await site.view(row.id)).import).toMatchObject({ state: 'cancelled', added: 0 });
    await site.start(row.id, layoutOf(preview.proposed)).expect(200);
    await server.drainJobs();
    expect((await site.view(row.id)).import).toMatchObject({ state: 'done', added: 1 });
  });
});
