import { describe, expect, it } from 'vitest';
import { modelOf, putInService, makePlant, post } from '../support/plant.ts';
import { historySite, layoutOf } from '../support/history-site.ts';
import { useServer } from '../support/server.ts';

const server = useServer();

/** Codes of the refused places by line, of a file whose other lines are all taken. */
async function refusedIn(lines: string[], zone?: string) {
  const site = await historySite(server, ['TI-1', 'TI-2'], zone);
  const good = Array.from({ length: 10 }, (_, k) => `11/14/2026 1${k}:00,1.5,2.5`);
  const { import: row, refusals } = await site.add(['time,TI-1,TI-2', ...lines, ...good].join('\n'));
  expect(row.state).toBe('done');
  return {
    row,
    refusals: refusals.map(({ line, column, code }) => [line, column, code]),
    stored: await site.stored('TI-1'),
  };
}

describe('values that are refused', () => {
  it('are counted, each kept with its line, its column and why, and the rest of the line is taken', async () => {
    const { row, refusals } = await refusedIn([
      '11/13/2026 10:00,abc,2.5',
      '11/13/2026 10:01,"1,5",2.5',
      '11/13/2026 10:02,Infinity,1e999',
      '11/13/2026 10:03,0x10,<0.05',
    ]);
    expect(refusals).toEqual([
      [2, 1, 'not-a-number'],
      [3, 1, 'decimal-sign'],
      [4, 1, 'not-finite'],
      [4, 2, 'not-finite'],
      [5, 1, 'not-a-number'],
      [5, 2, 'not-a-number'],
    ]);
    expect(row).toMatchObject({ added: 20 + 2, refused: 6 });
  });

  it('go with the whole line where it has no time that can be, and every lost value is counted', async () => {
    const { row, refusals } = await refusedIn([
      ',1.5,2.5',
      'yesterday,1.5,',
      '11/13/2026,1.5,2.5',
      '11/31/2026 10:00,1.5,2.5',
      '11/13/2026 25:00,1.5,2.5',
      '12/31/1969 10:00,1.5,2.5',
      '11/13/2226 10:00,1.5,2.5',
      ',,',
    ]);
    expect(refusals).toEqual([
      [2, 0, 'time-missing'],
      [3, 0, 'time-unreadable'],
      [4, 0, 'time-without-clock'],
      [5, 0, 'no-such-time'],
      [6, 0, 'no-such-time'],
      [7, 0, 'before-1970'],
      [8, 0, 'in-the-future'],
    ]);
    expect(row).toMatchObject({ added: 20, refused: 13 });
  });

  it('stand in lines with more or fewer cells than the header', async () => {
    const { row, refusals } = await refusedIn([
      '11/13/2026 10:00,1,5,2,5',
      '11/13/2026 10:01,1.5',
      '11/13/2026 10:02,1.5,2.5,,',
    ]);
    expect(refusals).toEqual([
      [2, 5, 'cell-count'],
      [3, 2, 'cell-count'],
    ]);
    expect(row).toMatchObject({ added: 22, refused: 3 });
  });

  it('fall into the hour that spring skips or the one that autumn repeats', async () => {
    const { refusals, stored } = await refusedIn([
      '03/29/2026 01:30,1,',
      '03/29/2026 02:30,2,',
      '03/29/2026 03:30,3,',
      '10/25/2026 01:30,4,',
      '10/25/2026 02:30,5,',
      '10/25/2026 02:30+01:00,6,',
      '10/25/2026 03:30,7,',
    ]);
    expect(refusals).toEqual([
      [3, 0, 'hour-skipped'],
      [6, 0, 'hour-twice'],
    ]);
    expect(stored.slice(0, 5).map(([at]) => at.slice(0, 16))).toEqual([
      '2026-03-29T00:30',
      '2026-03-29T01:30',
      '2026-10-24T23:30',
      '2026-10-25T01:30',
      '2026-10-25T02:30',
    ]);
  });

  it('are times more than ten minutes ahead, and no earlier', async () => {
    const site = await historySite(server, ['TI-1']);
    server.now.value = new Date('2026-11-20T12:00:00Z');
    const { import: row, refusals } = await site.add(
      'time,TI-1\n2026-11-20T12:09:59Z,1.5\n2026-11-20T12:10:01Z,2.5\n2026-11-20T11:00:00Z,2.5\n',
    );
    server.now.value = null;
    expect(refusals).toMatchObject([{ line: 3, code: 'in-the-future' }]);
    expect(row.added).toBe(2);
  });

  it('are those of an estimate that Cupel computes itself', async () => {
    const plant = await makePlant(server);
    server.now.value = new Date('2026-11-20T12:00:00Z');
    const sheet = await putInService(plant, modelOf(plant));
    const estimate = (await plant.engineer.get(`/api/v1/sites/${plant.siteId}/tags`)).body.rows.find(
      (tag: { id: number }) => tag.id === sheet.estimateTagId,
    ) as { id: number; name: string };
    const upload = await plant.engineer
      .post(`/api/v1/sites/${plant.siteId}/history-imports`)
      .attach('file', Buffer.from(`time,A,${estimate.name}\n2026-11-20T10:00:00Z,1.5,2.5\n`), 'h.csv');
    const { preview, import: row } = upload.body;
    expect(preview.computedTags).toEqual([estimate.name]);
    expect(preview.proposed.columns).toEqual([{ column: 1, tagId: plant.tagIds[0] }]);
    const columns = [...preview.proposed.columns, { column: 2, tagId: estimate.id }];
    await post(plant.engineer, `/history-imports/${row.id}/start`, {
      layout: layoutOf({ ...preview.proposed, columns }),
      replaceExisting: false,
    });
    await server.drainJobs();
    server.now.value = null;
    const view = (await plant.engineer.get(`/api/v1/history-imports/${row.id}`)).body;
    expect(view.import).toMatchObject({ added: 1, refused: 1 });
    expect(view.refusals).toEqual([{ line: 2, column: 2, code: 'computed-tag', found: '2.5' }]);
  });

  it('are listed up to the first thousand, and all counted', async () => {
    const site = await historySite(server, ['TI-1']);
    const lines = Array.from(
      { length: 1200 },
      (_, k) => `${new Date(Date.UTC(2026, 0, 1, k)).toISOString()},x${k}`,
    );
    const { import: row, refusals } = await site.add(
      ['time,TI-1', '2025-12-01T00:00:00Z,1.5', ...lines].join('\n'),
      {
        columns: [{ column: 1, tagId: site.tagIds['TI-1']! }],
      },
    );
    expect(row).toMatchObject({ added: 1, refused: 1200 });
    expect(refusals).toHaveLength(1000);
    expect(refusals[999]).toMatchObject({ line: 1002, found: 'x999' });
  });
});
