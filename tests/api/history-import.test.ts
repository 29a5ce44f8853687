import { describe, expect, it } from 'vitest';
import { historySite, layoutOf } from '../support/history-site.ts';
import { useServer } from '../support/server.ts';

const server = useServer();

const wide = [
  'time,TI-1,TI-2',
  '2026-11-01T10:00:00Z,301.4,8.25',
  '2026-11-01T10:01:00Z,302,-1.5e1',
  '',
].join('\n');

describe('a file with a column for each tag', () => {
  it('is recognised, and every number reaches its tag at its instant', async () => {
    const site = await historySite(server, ['TI-1', 'ti-2']);
    const { preview } = await site.upload(wide);
    expect(preview.proposed).toMatchObject({
      shape: 'wide',
      delimiter: ',',
      decimal: '.',
      dateOrder: 'iso',
      zone: 'Europe/Copenhagen',
      timeColumn: 0,
      columns: [
        { column: 1, tagId: site.tagIds['TI-1'] },
        { column: 2, tagId: site.tagIds['ti-2'] },
      ],
    });
    const outcome = await site.add(wide);
    expect(outcome.import).toMatchObject({ state: 'done', added: 4, refused: 0, unchanged: 0 });
    expect(outcome.import.firstAt).toBe('2026-11-01T10:00:00.000Z');
    expect(await site.stored('TI-1')).toEqual([
      ['2026-11-01T10:00:00.000Z', 301.4, 0],
      ['2026-11-01T10:01:00.000Z', 302, 0],
    ]);
    expect(await site.stored('ti-2')).toEqual([
      ['2026-11-01T10:00:00.000Z', 8.25, 0],
      ['2026-11-01T10:01:00.000Z', -15, 0],
    ]);
    expect(await site.span('TI-1')).toMatchObject({ readings: 2, lastValue: 302 });
    expect(await site.run(outcome.import.runId!)).toMatchObject({
      state: 'done',
      done: 3,
      result: { added: 4 },
    });
  });

  it('reads semicolons, decimal commas, day before month and local time as a European export has them', async () => {
    const site = await historySite(server, ['TI-1', 'TI-2']);
    const text = [
      'Tarnby furnace 1;;',
      'Zeit;TI-1 [°C];TI-2 (t/h)',
      '13.11.2026 10:00;1.301,4;8,25',
      '13.11.2026 10:01;1.302,4;8,50',
    ].join('\r\n');
    const { preview } = await site.upload(text);
    expect(preview).toMatchObject({ header: ['Zeit', 'TI-1 [°C]', 'TI-2 (t/h)'], doubts: [] });
    expect(preview.proposed).toMatchObject({
      delimiter: ';',
      decimal: ',',
      dateOrder: 'day-month-year',
      headerLine: 2,
    });
    await site.add(text);
    expect(await site.stored('TI-1')).toEqual([
      ['2026-11-13T09:00:00.000Z', 1301.4, 0],
      ['2026-11-13T09:01:00.000Z', 1302.4, 0],
    ]);
  });

  it('lists names that are no tag with their unit; a column of words is none', async () => {
    const site = await historySite(server, ['TI-1']);
    const { preview } = await site.upload('time,ti-1,FI-9 [t/h],Shift\n2026-11-01T10:00:00Z,1.5,2.5,night\n');
    expect(preview.unknownTags).toEqual([{ column: 2, name: 'FI-9', unit: 't/h' }]);
    expect(preview.proposed.columns).toEqual([{ column: 1, tagId: site.tagIds['TI-1'] }]);
  });

  it('takes empty cells and the common words for no reading as gaps, not as refusals', async () => {
    const site = await historySite(server, ['TI-1']);
    const words = ['', ' ', '#N/A', 'NaN', 'null', 'Bad', '-', 'No Data', 'bad'];
    const lines = words.map((word, index) => `2026-11-01T10:0${index}:00Z,${word}`);
    const { import: row } = await site.add(['time,TI-1', ...lines, '2026-11-01T11:00:00Z,7.5'].join('\n'));
    expect(row).toMatchObject({ added: 1, refused: 0 });
  });
});

describe('a file with a row for each reading', () => {
  it('is recognised by the names in its rows, and quality comes with the readings', async () => {
    const site = await historySite(server, ['TI-1', 'TI-2']);
    const text = [
      'Tag,Timestamp,Value,Quality',
      'TI-1,2026-11-01T10:00:00Z,1.5,Good',
      'ti-2,2026-11-01T10:00:00Z,2.5,Uncertain',
      'TI-1,2026-11-01T10:01:00Z,3.5,Bad',
      'TI-1,2026-11-01T10:02:00Z,4.5,192',
      'TI-1,2026-11-01T10:03:00Z,5.5,64',
      'TI-1,2026-11-01T10:04:00Z,6.5,0',
      'TI-1,2026-11-01T10:05:00Z,,Bad',
      'TI-1,2026-11-01T10:06:00Z,7.5,meh',
      'XX-9,2026-11-01T10:00:00Z,8.5,Good',
    ].join('\n');
    const { preview } = await site.upload(text);
    expect(preview.proposed).toMatchObject({
      shape: 'long',
      tagColumn: 0,
      timeColumn: 1,
      valueColumn: 2,
      qualityColumn: 3,
    });
    expect(preview.unknownTags).toEqual([{ column: null, name: 'XX-9', unit: '' }]);
    const outcome = await site.add(text);
    expect((await site.stored('TI-1')).map(([, value, quality]) => [value, quality])).toEqual([
      [1.5, 0],
      [3.5, 2],
      [4.5, 0],
      [5.5, 1],
      [6.5, 2],
    ]);
    expect((await site.stored('TI-2')).map(([, value, quality]) => [value, quality])).toEqual([[2.5, 1]]);
    expect(outcome.import).toMatchObject({ added: 6, refused: 2 });
    expect(outcome.refusals).toEqual([
      { line: 9, column: 3, code: 'unknown-quality', found: 'meh' },
      { line: 10, column: 0, code: 'unknown-tag', found: 'XX-9' },
    ]);
  });
});

describe('readings that are stored already', () => {
  const one = (value: number) => `time,TI-1\n2026-11-01T10:00:00Z,${value}\n2026-11-01T10:01:00Z,5.5\n`;

  it('are counted as unchanged when they are the same, and the file is recognised', async () => {
    const site = await historySite(server, ['TI-1']);
    const first = await site.add(one(1.5));
    const again = await site.upload(one(1.5));
    expect(again.preview.sameAs).toMatchObject({ importId: first.import.id });
    expect((await site.upload(one(2.5))).preview.sameAs).toBeNull();
    const second = await site.add(one(1.5));
    expect(second.import).toMatchObject({ added: 0, unchanged: 2, keptDifferent: 0, firstAt: null });
  });

  it('are kept when the file says otherwise, and replaced when that is asked for', async () => {
    const site = await historySite(server, ['TI-1']);
    await site.add(one(1.5));
    expect((await site.add(one(2.5))).import).toMatchObject({
      added: 0,
      unchanged: 1,
      keptDifferent: 1,
      replaced: 0,
    });
    expect((await site.stored('TI-1'))[0]![1]).toBe(1.5);
    const replaced = await site.add(one(3.5), { replaceExisting: true });
    expect(replaced.import).toMatchObject({ added: 0, unchanged: 1, keptDifferent: 0, replaced: 1 });
    expect((await site.stored('TI-1'))[0]![1]).toBe(3.5);
    expect(await site.span('TI-1')).toMatchObject({ readings: 2, lastValue: 5.5 });
  });

  it('of one file that names an instant twice: the first counts, or the last when replacing', async () => {
    const site = await historySite(server, ['TI-1']);
    const twice = ['time,TI-1', ...[1.5, 2.5, 2.5].map((value) => `2026-11-01T10:00:00Z,${value}`)].join(
      '\n',
    );
    expect((await site.add(twice)).import).toMatchObject({ added: 1, unchanged: 0, keptDifferent: 2 });
    expect((await site.stored('TI-1'))[0]![1]).toBe(1.5);
    const again = await site.add(twice, { replaceExisting: true });
    expect(again.import).toMatchObject({ added: 0, unchanged: 1, replaced: 2 });
    expect(await site.stored('TI-1')).toEqual([['2026-11-01T10:00:00.000Z', 2.5, 0]]);
  });
});

describe('a layout that doesn’t fit', () => {
  it('is refused field by field: a foreign tag, a column that is not there, two tags for one column', async () => {
    const site = await historySite(server, ['TI-1']);
    const elsewhere = await historySite(server, ['TI-1']);
    const { import: row, preview } = await site.upload(wide);
    const columns = [
      { column: 1, tagId: elsewhere.tagIds['TI-1']! },
      { column: 7, tagId: site.tagIds['TI-1']! },
      { column: 7, tagId: site.tagIds['TI-1']! },
    ];
    const layout = layoutOf({ ...preview.proposed, columns });
    const refused = await site.start(row.id, layout).expect(400);
    expect(refused.body.fields.map((field: { path: string }) => field.path)).toEqual([
      'layout.columns.1.column',
      'layout.columns.2.column',
      'layout.columns.2.column',
      'layout.columns.0.tagId',
      'layout.columns.2.tagId',
    ]);
    expect((await site.view(row.id)).import.state).toBe('uploaded');
  });

  it('can’t be started twice', async () => {
    const site = await historySite(server, ['TI-1']);
    const outcome = await site.add(wide);
    const layout = layoutOf(outcome.preview.proposed);
    expect((await site.start(outcome.import.id, layout)).status).toBe(409);
  });
});
