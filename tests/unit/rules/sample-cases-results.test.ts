import { describe, expect, it } from 'vitest';
import type { SampleMapping } from '../../../shared/contracts/sample-import.ts';
import { refusedCsv } from '../../../shared/rules/sample-refused.ts';
import { type Asked, readSamples } from '../../support/read-samples.ts';
import { workbookOf } from '../../support/workbook.ts';

// The nasty cases of laboratory files that concern what a row says: 16 to 22 but 19 and 20. Fixtures of this project's own making.
const header = 'Sample no.,Taken,Value,Unit,Point,Analyst';
type Row = Partial<Record<'no' | 'taken' | 'value' | 'unit' | 'point' | 'by', string>>;
const line = ({
  no = 'A-1',
  taken = '2026-11-28 06:10',
  value = '1480.5',
  unit = '°C',
  point = 'KX-09',
  by = 'TH',
}: Row) => [no, taken, value, unit, point, by].join(',');
const file = (...rows: Row[]) => [header, ...rows.map(line)].join('\n');
const read = (rows: Row[], asked?: Asked) => readSamples(file(...rows), asked);
const steady = Array.from({ length: 30 }, (_, i) => 1470 + ((i * 7) % 11) - 5);
const lastAt = (pointId: number, values: number[]) => ({
  beside: { lastValues: new Map([[pointId, values]]) },
});

describe('case 16: units', () => {
  it('are converted where they are stated, and what was stated is kept', async () => {
    const { at } = await read([{ value: '2678', unit: '°F' }]);
    expect(at(2)).toMatchObject({
      outcome: 'added-with-flag',
      words: 'Converted from 2,678 °F to 1,470 °C.',
      sample: { value: 1470, unit: '°C', statedUnit: '°F', statedValue: 2678 },
    });
    const ppm = await read([{ value: '2500', unit: 'ppm', point: 'OX-02' }]);
    expect(ppm.at(2).sample).toMatchObject({ value: 0.25, unit: '%' });
  });

  it.each([
    ['vol%', 'OX-02', 'shares of mass, volume and substance differ'],
    ['bar', 'KX-09', 'the two are of different kinds'],
    ['mg/Nm³', 'NX-01', 'it is no unit that is known here'],
  ])('in %s at %s are refused, with why', async (unit, point, why) => {
    const { outcome, words } = (await read([{ unit, point }])).at(2);
    expect(outcome).toBe('refused');
    expect(words).toContain(`It can’t be converted: ${why}.`);
  });

  it('that are mistaken are held beside the last results, and it says which would fit', async () => {
    const { at } = await read([{ value: '2678' }], lastAt(9, steady));
    expect(at(2)).toMatchObject({
      outcome: 'held',
      words:
        '2,678 °C lies far from the last results of this point (median 1,470 °C). It would fit if it were in °F. Held: write the unit anew, or confirm it.',
    });
    const anew = await read([{ value: '2678' }], { ...lastAt(9, steady), mends: { 2: { unit: '°F' } } });
    expect(anew.at(2)).toMatchObject({ outcome: 'added-with-flag', sample: { value: 1470 } });
  });

  it('that are mistaken in a whole file are held, while a real step of the process is let in and spoken of', async () => {
    const rows = (of: (i: number) => number) =>
      Array.from({ length: 12 }, (_, i) => ({
        no: `S-${i}`,
        taken: `2026-11-28 06:${10 + i}`,
        value: String(of(i)),
      }));
    const fahrenheit = await read(
      rows((i) => 2678 + (i % 3)),
      lastAt(9, steady),
    );
    expect(new Set(fahrenheit.rows.map(({ outcome }) => outcome))).toEqual(new Set(['held']));
    const step = await read(
      rows((i) => 1540 + (i % 5)),
      lastAt(9, steady),
    );
    expect(new Set(step.rows.map(({ outcome }) => outcome))).toEqual(new Set(['added']));
    expect(step.saysNotices).toEqual([
      'All 12 results at KX-09 lie far from the last ones (median 1,541.5 after 1,470 °C). They agree with each other, so they are let in.',
    ]);
    const within = await read(
      rows((i) => (i < 6 ? 1470 : 1540) + (i % 5)),
      lastAt(9, steady),
    );
    expect(new Set(within.rows.map(({ outcome }) => outcome))).toEqual(new Set(['added']));
    const one = await read([...rows((i) => 1470 + (i % 5)), { no: 'X', value: '1147' }], lastAt(9, steady));
    expect(one.at(14).outcome).toBe('held');
  });
});

describe('case 1 again: the decimal sign of a whole file', () => {
  it('that would make a thousandth of every result holds them all', async () => {
    const rows = Array.from({ length: 12 }, (_, i) => ({ no: `S-${i}`, value: `1.47${i % 10}` }));
    const { at } = await read(rows, lastAt(9, steady));
    expect(at(7)).toMatchObject({
      outcome: 'held',
      words: expect.stringContaining(
        'It would fit if it were a thousand times as large: is the decimal sign right?',
      ),
    });
  });
});

describe('case 17: the sample point', () => {
  it('is known by its other names', async () => {
    expect((await read([{ point: 'Crown  9' }])).at(2).sample?.samplePointId).toBe(9);
  });

  it('that is unknown is refused, never made', async () => {
    const { at, rows } = await read([{ point: 'KX-90' }]);
    expect(at(2)).toMatchObject({
      outcome: 'refused',
      words:
        'There is no sample point KX-90 at this site. Say which point it is, or add it under Points and methods.',
    });
    expect(rows[0]!.reasons[0]!.code).toBe('unknown-point');
  });
});

describe('case 18: what a spreadsheet did', () => {
  it.each(['1.2E+05', '1,2E+11', '10-May', '05-Oct', 'May-10', '10. Mai', '#REF!'])(
    '%s is no sample number',
    async (no) => {
      const { outcome, words } = (await read([{ no: `"${no}"` }])).at(2);
      expect(outcome).toBe('refused');
      expect(words).toContain(`The sample number “${no}” is`);
    },
  );

  it.each(['KX-0917-3', 'MAR-17', '12E4', '2026-11-28', '5-10'])('%s is one', async (no) => {
    expect((await read([{ no }])).at(2)).toMatchObject({ outcome: 'added', sample: { sampleNumber: no } });
  });

  it('a date cell among sample numbers is none, in a workbook', async () => {
    const rows = [
      header.split(','),
      [new Date('2026-05-10T00:00:00Z'), '2026-11-28 06:10', 1480.5, '°C', 'KX-09', 'TH'],
    ];
    expect((await readSamples(workbookOf({ S: rows }))).at(2).words).toContain(
      'a date that a spreadsheet made',
    );
  });

  it('days since 1900 are known by the whole column, and it says so', async () => {
    const { proposed, says, at } = await read([
      { taken: '46354.2569444444' },
      { no: 'B', taken: '46355' },
      { no: 'C', taken: '46355.5' },
    ]);
    expect(proposed.dateOrder).toBe('serial-days');
    expect(says).toContain('Times are days as spreadsheets count them: 3 of 3 look like 45123.5.');
    expect(at(2).sample?.takenAt).toBe(Date.parse('2026-11-28T05:10:00Z'));
    expect(at(3).sample?.takenAt).toBe(Date.parse('2026-11-28T23:00:00Z'));
    const days = await read([{ taken: '46354' }, { no: 'B', taken: '46355' }]);
    expect(days.at(2).sample?.takenOn).toBe('2026-11-28');
  });

  it('lost zeros are hinted at where other numbers have theirs', async () => {
    const { saysNotices } = await read([{ no: '00917' }, { no: '918', taken: '2026-11-28 07:10' }]);
    expect(saysNotices).toEqual([
      '1 sample number such as “918” may have lost zeros in front: others have 5 digits.',
    ]);
  });

  it('#N/A is no value', async () => {
    expect((await read([{ value: '#N/A' }])).at(2).words).toContain('No value, only “#N/A”');
  });
});

describe('case 21: words and figures for nothing', () => {
  it('go by the list of the file, which a person may change', async () => {
    expect((await read([{ value: 'QNS' }])).at(2).words).toContain('“QNS” is no number');
    const said = { said: { missingWords: ['qns'] } };
    expect((await read([{ value: 'QNS' }], said)).at(2).words).toContain('No value, only “QNS”');
    expect((await read([{ value: 'pend' }], said)).at(2).words).toContain('“pend” is no number');
  });

  it.each(['0', '9999', '-999'])(
    '%s is held where it lies far from other results, kept where it does not',
    async (value) => {
      expect((await read([{ value }], lastAt(9, steady))).at(2).outcome).toBe('held');
      const others = Array.from({ length: 10 }, (_, i) => ({
        no: `S-${i}`,
        taken: `2026-11-28 07:${10 + i}`,
        value: `${1470 + i}`,
      }));
      expect((await read([{ value }, ...others])).at(2)).toMatchObject({
        outcome: 'held',
        words: expect.stringContaining('lies far from the others of this file'),
      });
      const near = Array.from({ length: 12 }, (_, i) => Number(value) + (i % 3));
      expect((await read([{ value }], lastAt(9, near))).at(2).outcome).toBe('added');
    },
  );
});

describe('case 22: cells that a spreadsheet would run', () => {
  it('are text on the way in, and escaped on the way out; a sign before a number is none of them', async () => {
    const good = ['G-1', 'G-2'].map((no) => ({ no }));
    const { rows, proposed } = await read([
      ...good,
      { no: '=cmd|1', value: '=1+1' },
      { no: '@SUM(A1)', value: 'x' },
      { no: '-2', value: '+3.5x' },
    ]);
    const refused = ['refused', 'refused', 'refused'];
    expect(rows.map(({ outcome }) => outcome)).toEqual(['added', 'added', ...refused]);
    const out = refusedCsv(header.split(','), rows, proposed as SampleMapping);
    expect(out).toContain(',"\'=cmd|1",2026-11-28 06:10,"\'=1+1",');
    expect(out).toContain(',"\'@SUM(A1)",');
    expect(out).toContain(',-2,2026-11-28 06:10,');
  });
});
