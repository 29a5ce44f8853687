import { describe, expect, it } from 'vitest';
import { files } from '../../server/db/schema/index.ts';
import { historySite } from '../support/history-site.ts';
import { useServer } from '../support/server.ts';

const server = useServer();
const rows = ['time,TI-1 æøå', '2026-11-01T10:00:00Z,1.5'].join('\n');

describe('files that are no history', () => {
  const bad: [string, Buffer, RegExp][] = [
    ['0 bytes', Buffer.alloc(0), /0 bytes/],
    [
      'an Excel workbook',
      Buffer.from('PK\u0003\u0004 and what a zip holds'),
      /Excel workbook.*Save the sheet as CSV/,
    ],
    ['a web page', Buffer.from('<!DOCTYPE html><html><body>Sign in</body></html>'), /web page/],
    ['JSON', Buffer.from('{"time": "2026-11-01", "value": 1}'), /JSON/],
    ['binary data', Buffer.from([...Array(300).keys()].map((k) => (k * 7919) % 256)), /binary data/],
    ['a header alone', Buffer.from('time,TI-1\n'), /no lines below the header/],
    [
      'readings without a header',
      Buffer.from('2026-11-01T10:00:00Z,1.5\n2026-11-01T10:01:00Z,1.5\n'),
      /no line that names the columns/,
    ],
    ['text without columns', Buffer.from('Dear all\nthe export failed\n'), /No columns were found/],
    [
      'a quotation mark that never closes',
      Buffer.from('time,TI-1\n2026-11-01T10:00:00Z,"1.5\n2026-11-01T10:01:00Z,2\n'),
      /quotation mark/,
    ],
  ];
  it.each(bad)('%s: refused with a sentence, and nothing is kept', async (_what, content, sentence) => {
    const site = await historySite(server, ['TI-1']);
    const before = await server.context.db.$count(files);
    const answer = await site.send(content);
    expect(answer.status).toBe(422);
    expect(answer.body.detail).toMatch(sentence);
    expect(answer.body.fields[0].path).toBe('file');
    expect(await server.context.db.$count(files)).toBe(before);
    expect((await site.engineer.get(`/api/v1/sites/${site.siteId}/history-imports`)).body.rows).toEqual([]);
  });
});

describe('encodings', () => {
  const utf16 = (text: string, big: boolean) => {
    const bytes = Buffer.from(`\ufeff${text}`, 'utf16le');
    return big ? bytes.swap16() : bytes;
  };
  const encodings: [string, Buffer][] = [
    ['utf-8', Buffer.from(rows)],
    ['utf-8', Buffer.from(`\ufeff${rows}`)],
    ['utf-16le', utf16(rows, false)],
    ['utf-16be', utf16(rows, true)],
    ['utf-16le', utf16(rows, false).subarray(2)],
    ['windows-1252', Buffer.from(rows, 'latin1')],
  ];
  it.each(encodings)('%s is recognised and read to the end', async (encoding, content) => {
    const site = await historySite(server, ['TI-1 æøå']);
    const { preview, import: row } = await site.add(content);
    expect(preview.encoding).toBe(encoding);
    expect(preview.header).toEqual(['time', 'TI-1 æøå']);
    expect(row).toMatchObject({ state: 'done', added: 1 });
  });

  it('a tag name in windows-1252 far behind an ASCII head is still met', async () => {
    const site = await historySite(server, ['TI-1', 'Kølevand']);
    const lines = Array.from(
      { length: 40_000 },
      (_, k) => `TI-1,${new Date(Date.UTC(2026, 0, 1, 0, k)).toISOString()},1.5`,
    );
    const content = Buffer.from(
      ['Tag,Time,Value', ...lines, 'Kølevand,2026-06-01T00:00:00Z,2.5'].join('\n'),
      'latin1',
    );
    expect(content.length).toBeGreaterThan(1.2 * 1024 ** 2);
    const { import: row } = await site.add(content);
    expect(row).toMatchObject({ added: 40_001, refused: 0 });
    expect(await site.stored('Kølevand')).toEqual([['2026-06-01T00:00:00.000Z', 2.5, 0]]);
  });

  it('UTF-8 that turns into something else midway fails with a sentence, and what was stored stays', async () => {
    const site = await historySite(server, ['Kølevand']);
    const head = Buffer.from('Tag,Time,Value\nKølevand,2026-06-01T00:00:00Z,2.5\n');
    const lines = Array.from(
      { length: 40_000 },
      (_, k) => `Kølevand,${new Date(Date.UTC(2026, 0, 1, 0, k)).toISOString()},1.5\n`,
    );
    const content = Buffer.concat([
      head,
      Buffer.from(lines.join('')),
      Buffer.from('Kølevand,2026-06-01T01:00:00Z,2.5\n', 'latin1'),
    ]);
    const { import: row } = await site.add(content);
    expect(row.state).toBe('failed');
    expect((await site.run(row.runId!)).problem).toMatchObject({ code: 'unreadable', detail: /UTF-8/ });
  });
});

describe('quotation marks', () => {
  it('may enclose names, times and values with separators and line breaks in them, and lines are still counted right', async () => {
    const site = await historySite(server, ['TI-1, top', 'TI-2']);
    const text = [
      '"time","TI-1, top","TI-2","note"',
      '"2026-11-01T10:00:00Z","1.5","2.5","two\r\nlines"',
      '"2026-11-01T10:01:00Z","1,501.5","x","say ""no"""',
    ].join('\r\n');
    const { import: row, refusals } = await site.add(text);
    expect(row).toMatchObject({ added: 3, refused: 1 });
    expect(refusals).toEqual([{ line: 4, column: 2, code: 'not-a-number', found: 'x' }]);
    expect((await site.stored('TI-1, top')).map(([, value]) => value)).toEqual([1.5, 1501.5]);
  });
});
