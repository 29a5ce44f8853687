import { existsSync, readFileSync } from 'node:fs';
import { eq, sql } from 'drizzle-orm';
import { describe, expect, it } from 'vitest';
import { dirtyHours, readings, softSensorWork } from '../../server/db/schema/index.ts';
import { importHistory } from '../../server/features/history/import.ts';
import { rollUp } from '../../server/features/history/roll-up.ts';
import { at, makePlant, modelOf, putInService } from '../support/plant.ts';
import { type HistorySite, historySite, layoutOf } from '../support/history-site.ts';
import { useServer } from '../support/server.ts';

const server = useServer();

/** Rolled-up hours that differ from the readings themselves, and hours on one side alone; figures are over what is not Bad. */
async function differences(siteId: number) {
  const found = await server.context.db.execute(sql`
    with direct as (
      select tag_id, date_trunc('hour', at, 'UTC') as hour, count(*) as readings, count(*) filter (where quality = 2) as bad,
        avg(value) filter (where quality < 2) as mean, min(value) filter (where quality < 2) as low,
        max(value) filter (where quality < 2) as high
      from readings where site_id = ${siteId} group by 1, 2
    )
    select * from direct d full join (select * from reading_hours where site_id = ${siteId}) h using (tag_id, hour)
    where (d.readings, d.bad, d.low, d.high) is distinct from (h.readings, h.bad, h.low, h.high)
      or abs(d.mean - h.mean) > 1e-9 * abs(d.mean) or (d.mean is null) <> (h.mean is null)`);
  return found.rows;
}
const hoursOf = async (siteId: number) =>
  (
    await server.context.db.execute<{ count: number }>(
      sql`select count(*)::int as count from reading_hours where site_id = ${siteId}`,
    )
  ).rows[0]!.count;

/** Readings at odd seconds over some days in long form, about a third of them Bad. */
function longText(tag: string, fromMinute: number, toMinute: number): string {
  const rows = ['Tag,Time,Value,Quality'];
  for (let minute = fromMinute; minute < toMinute; minute += 7) {
    const time = new Date(Date.UTC(2026, 1, 27, 0, minute, (minute * 13) % 60)).toISOString();
    rows.push(`${tag},${time},${(minute * 31) % 97}.5,${minute % 3 === 0 ? 'Bad' : 'Good'}`);
  }
  return rows.join('\n');
}

describe('hourly figures', () => {
  it('equal the readings they stand for, over the end of a month and in a zone of half hours', async () => {
    const site = await historySite(server, ['TI-1'], 'Asia/Kolkata');
    await site.add(longText('TI-1', 0, 5 * 1440));
    expect(await hoursOf(site.siteId)).toBe(120);
    expect(await differences(site.siteId)).toEqual([]);
  });

  it('follow when readings are removed, as do first, last and count of the tag', async () => {
    const site = await historySite(server, ['TI-1']);
    await site.add(longText('TI-1', 0, 2 * 1440));
    const remove = (from: string, to: string) =>
      site.engineer
        .post(`/api/v1/tags/${site.tagIds['TI-1']}/removals`)
        .send({ from, to, reason: 'Thermocouple was out' });
    const all = await site.stored('TI-1');
    const removed = await remove('2026-02-28T00:00:00Z', '2126-01-01T00:00:00Z').expect(200);
    const left = await site.stored('TI-1');
    expect(removed.body.removed).toBe(all.length - left.length);
    expect(left.length).toBeGreaterThan(100);
    await server.drainJobs();
    expect(await hoursOf(site.siteId)).toBe(24);
    expect(await differences(site.siteId)).toEqual([]);
    const span = await site.span('TI-1');
    expect(span).toMatchObject({ readings: left.length, lastValue: left.at(-1)![1] });
    expect(span!.lastAt.toISOString()).toBe(left.at(-1)![0]);
    await remove('1970-01-01T00:00:00Z', '2126-01-01T00:00:00Z').expect(200);
    await server.drainJobs();
    expect(await site.span('TI-1')).toBeNull();
    expect(await hoursOf(site.siteId)).toBe(0);
  });

  it('lose nothing when two workers roll up while an import goes on', async () => {
    const site = await historySite(server, ['TI-1', 'TI-2']);
    const add = async (text: string) => {
      const { import: row, preview } = await site.upload(text);
      await site.start(row.id, layoutOf(preview.proposed)).expect(200);
    };
    for (const [from, to] of [
      [0, 9],
      [3, 12],
      [5, 20],
      [6, 30],
    ] as const) {
      await add(longText('TI-1', from * 60 + from, to * 60));
      await Promise.all([server.drainJobs(), rollUp(server.context, site), rollUp(server.context, site)]);
    }
    await server.drainJobs();
    expect(await differences(site.siteId)).toEqual([]);
    expect(
      await server.context.db.select().from(dirtyHours).where(eq(dirtyHours.siteId, site.siteId)),
    ).toEqual([]);
  });
});

describe('estimates that rest on imported tags', () => {
  it('are marked from the first changed instant on, and not at all when nothing changed', async () => {
    const plant = await makePlant(server);
    server.now.value = at(200);
    await putInService(plant, modelOf(plant));
    await server.drainJobs();
    const { db } = server.context;
    const marked = async (values: number[]) => {
      const rows = values.map((value, hour) => `${at(100 + hour).toISOString()},${value},${hour}`);
      const file = Buffer.from(['time,A,B', ...rows].join('\n'));
      const path = `/api/v1/sites/${plant.siteId}/history-imports`;
      const { import: row, preview } = (await plant.engineer.post(path).attach('file', file, 'a.csv')).body;
      const body = { layout: layoutOf(preview.proposed), replaceExisting: true };
      const { runId } = (
        await plant.engineer.post(`/api/v1/history-imports/${row.id}/start`).send(body).expect(200)
      ).body;
      await importHistory(server.context, { siteId: plant.siteId, historyImportId: row.id, runId });
      const work = await db.select().from(softSensorWork).where(eq(softSensorWork.siteId, plant.siteId));
      await server.drainJobs();
      return work.map(({ dirtyFrom }) => dirtyFrom);
    };
    expect(await marked([1.5, 2.5, 3.5, 4.5])).toEqual([at(100)]);
    expect(await marked([1.5, 2.5, 3.5, 9.5, 5.5])).toEqual([at(103)]);
    expect(await marked([1.5, 2.5, 3.5, 9.5, 5.5])).toEqual([]);
    server.now.value = null;
  });
});

const gasTurbine = '../shared/data/gas_turbine_nox/history.csv';

describe('five years of a gas turbine', () => {
  const here = existsSync(gasTurbine);
  it.skipIf(!here)(
    'arrive whole: 36,733 rows of 9 tags (skipped where the public data set is not beside the project)',
    async () => {
      const names = ['AT', 'AP', 'AH', 'AFDP', 'GTEP', 'TIT', 'TAT', 'TEY', 'CDP'];
      const site: HistorySite = await historySite(server, names);
      const bytes = readFileSync(gasTurbine);
      const { import: row } = await site.add(bytes);
      expect(row).toMatchObject({ state: 'done', added: 36_733 * 9, refused: 0, unchanged: 0 });
      const cells = bytes
        .toString('utf8')
        .trim()
        .split('\n')
        .slice(1)
        .map((line) => line.trim().split(','));
      for (const [index, name] of names.entries()) {
        const stored = await server.context.db
          .select({ at: readings.at, value: readings.value })
          .from(readings)
          .where(eq(readings.tagId, site.tagIds[name]!))
          .orderBy(readings.at);
        expect(stored.map(({ value }) => value)).toEqual(cells.map((line) => Number(line[index + 1])));
        expect(stored[0]!.at).toEqual(new Date(cells[0]![0]!));
      }
      expect(await differences(site.siteId)).toEqual([]);
    },
    120_000,
  );
});
