import { beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { eq } from 'drizzle-orm';
import { recentValues } from '../../server/features/samples/reading.ts';
import { sampleImports, samples } from '../../server/db/schema/index.ts';
import { sayEvidence, sayNotice } from '../../shared/rules/sample-evidence-sentences.ts';
import {
  type Laboratory,
  makeLaboratory,
  mappingOf,
  problemOf,
  rowAt,
  sayMapping,
  wordsOf,
} from '../support/laboratory.ts';
import { useServer } from '../support/server.ts';
import { workbookOf, workbookParts, zipOf } from '../support/workbook.ts';

const server = useServer();
let lab: Laboratory;

beforeAll(async () => {
  lab = await makeLaboratory(server);
});
beforeEach(() => {
  server.now.value = new Date('2026-11-30T05:40:00Z');
});

const head = ['Sample no.', 'Taken', 'Value', 'Unit', 'Point'];
const at = (day: number, hour = 6) => new Date(Date.UTC(2026, 10, day, hour, 10));
const book = workbookOf({
  Cover: [['Weekly report']],
  Results: [
    ['Works laboratory'],
    head,
    ['W-1', at(28), 1480.5, '°C', 'Tarnby'],
    ['W-2', at(29), 2678, '°F', 'Tarnby'],
  ],
});

describe('a workbook', () => {
  it('is read from its best sheet, shows each and its first lines, and can be added', async () => {
    const view = await lab.upload(book, 'week-48.xlsx');
    expect(view.preview).toMatchObject({ encoding: null, proposed: { sheet: 'Results', headerLine: 2 } });
    expect(view.preview.sheets.map(({ name }) => name)).toEqual(['Cover', 'Results']);
    expect(view.preview.head).toContain('W-1\t2026-11-28 06:10:00\t1480.5\t°C\tTarnby');
    expect(view.preview.because.map((one) => sayEvidence(one, 'Europe/Copenhagen'))).toContain(
      'Sheet “Results” of 2: it looks most like a table of samples (2 rows).',
    );
    expect(view.notices.map(sayNotice)).toEqual(['1 line above the header is passed over.']);
    await lab.commit(view).expect(200);
    const stored = await lab.samples({ importId: view.import.id });
    expect(stored.rows).toMatchObject([
      {
        sampleNumber: 'W-2',
        value: 1470,
        unit: '°C',
        statedUnit: '°F',
        statedValue: 2678,
        flags: ['converted'],
      },
      { sampleNumber: 'W-1', value: 1480.5, takenAt: '2026-11-28T05:10:00.000Z', statedUnit: null },
    ]);
  });

  it('asks for another sheet where there is none of the name', async () => {
    const view = await lab.upload(book, 'week-48.xlsx');
    const mapping = { ...mappingOf(view, {}), sheet: 'Sheet 9' };
    const { fields } = problemOf(await sayMapping(lab.technician, view, mapping).expect(400));
    expect(fields).toEqual([
      { path: 'mapping.sheet', message: 'This workbook has no sheet “Sheet 9”. Choose another.' },
    ]);
  });

  const container = Buffer.concat([Buffer.from([0xd0, 0xcf, 0x11, 0xe0]), Buffer.alloc(600)]);
  const locked = Buffer.concat([container, Buffer.from('EncryptedPackage', 'utf16le')]);
  const far = workbookParts({ S: [['a']] });
  far.at(-1)!.content =
    '<worksheet><sheetData><row r="1"><c r="A1"><v>1</v></c></row><row r="1000000"><c r="ZZ1000000"><v>1</v></c></row></sheetData></worksheet>';
  // The package that reads workbooks leaves a promise of such a one without a handler, which would end the server.
  const hollow = workbookParts({ A: [['a']], B: [['b']], C: [['c']] });
  for (const part of hollow.slice(-3)) part.content = '<worksheet/>';
  const bomb = workbookParts({ S: [['a']] });
  bomb.push({ name: 'xl/sharedStrings.xml', content: Buffer.alloc(120 * 1024 ** 2), saidLength: 10 });

  it.each([
    ['of an old kind', container, 'This is a workbook of an old kind'],
    ['with a password', locked, 'This workbook is locked with a password.'],
    ['cut off', book.subarray(0, book.length - 300), 'This workbook is damaged'],
    [
      'that is another archive',
      zipOf([{ name: 'word/document.xml', content: '<x/>' }]),
      'This is an archive or a document',
    ],
    [
      'with one cell a million rows below',
      zipOf(far),
      'This workbook unpacks to more than can be read at once.',
    ],
    [
      'that unpacks to far more than it says',
      zipOf(bomb),
      'This workbook unpacks to more than can be read at once.',
    ],
    ['whose sheets are hollow', zipOf(hollow), 'This workbook is damaged'],
    ['without any cell', workbookOf({ S: [] }), 'This file is empty.'],
  ])('%s is refused in words', async (_what, bytes, words) => {
    const answer = await lab.send(bytes, 'week.xlsx').expect(422);
    expect(problemOf(answer).fields![0]!.message).toContain(words);
  });
});

describe('beside what the site knows', () => {
  it('the other names of a point are taken', async () => {
    const point = `/api/v1/sample-points/${lab.samplePointId}`;
    const body = { name: lab.name, unitId: null, aliases: ['Crown 9'], archived: false, version: 1 };
    await lab.technician.put(point).send(body).expect(200);
    const view = await lab.upload('id;taken;value;unit;point\nAL-1;28.11.2026 06:10;1480,5;°C;crown 9\n');
    expect(rowAt(view, 2)).toMatchObject({ outcome: 'added', samplePoint: 'Tarnby' });
  });

  it('results of one sample are averaged by the r of the method, and held beyond it', async () => {
    const method = await lab.technician
      .post(`/api/v1/sites/${lab.siteId}/methods`)
      .send({ name: 'Pyrometer', quantity: '', unit: '°C', repeatability: 4, reproducibility: 9 })
      .expect(200);
    const text = [
      'id;taken;value;unit;point;analyst',
      'R-1;28.11.2026 06:10;1480,5;°C;Tarnby;TH',
      'R-1;28.11.2026 06:10;1483,5;°C;Tarnby;TH',
      'R-2;28.11.2026 07:10;1480,5;°C;Tarnby;TH',
      'R-2;28.11.2026 07:10;1485,5;°C;Tarnby;TH',
    ].join('\n');
    const view = await lab.dryRun(text, { methodId: method.body.id });
    expect(view.import.counts).toMatchObject({ added: 1, held: 1, skipped: 2, refused: 0 });
    await lab.commit(view).expect(200);
    const { rows } = await lab.samples({ importId: view.import.id });
    expect(rows).toMatchObject([
      { sampleNumber: 'R-2', replicates: [1480.5, 1485.5], heldSince: '2026-11-30T05:40:00.000Z' },
      {
        sampleNumber: 'R-1',
        replicates: [1480.5, 1483.5],
        value: 1482,
        heldSince: null,
        flags: ['averaged'],
      },
    ]);
    const again = await lab.dryRun(text, { methodId: method.body.id });
    expect(again.import.counts).toMatchObject({ added: 0, held: 0, skipped: 4 });
  });

  it('a result far from the last thirty of its point is held, and held ones are none of the last', async () => {
    const other = await makeLaboratory(server, 'Kallara');
    const lines = Array.from(
      { length: 34 },
      (_, i) => `K-${i};2026-11-${10 + (i % 18)} 0${i % 9}:1${i % 7};${1470 + (i % 9)};°C`,
    );
    await other.add(['id;taken;value;unit', ...lines].join('\n'));
    const view = await other.upload('id;taken;value;unit\nK-90;2026-11-29 06:10;2678;°C\n');
    expect(wordsOf(rowAt(view, 2))).toContain('It would fit if it were in °F.');
    await other.commit(view).expect(200);
    const { db } = server.context;
    const last = await recentValues(db, other.siteId, view.import.mapping!.methodId, [other.samplePointId]);
    const values = last.get(other.samplePointId)!;
    expect(values).toHaveLength(30);
    expect(values).not.toContain(2678);
    const [newest] = await db.select().from(samples).where(eq(samples.sampleNumber, 'K-17'));
    expect(values.at(-1)).toBe(newest!.value);
  });
});

describe('a mapping of before', () => {
  it('that lacks what mappings have had since is completed', async () => {
    const view = await lab.upload('id;taken;value;unit;point\nOLD-1;28.11.2026 06:10;1480,5;°C;Tarnby\n');
    const { sheet: _sheet, missingWords: _words, columns, ...rest } = view.import.mapping!;
    const { analyst: _a, takenFrom: _f, takenTime: _t, ...old } = columns;
    const { db } = server.context;
    const stored = { ...rest, columns: old } as never;
    await db.update(sampleImports).set({ mapping: stored }).where(eq(sampleImports.id, view.import.id));
    const { body } = await lab.technician.get(`/api/v1/sample-imports/${view.import.id}`).expect(200);
    expect(body.import.mapping).toEqual(view.import.mapping);
    expect(body.outcome).toBe(view.outcome);
  });
});
