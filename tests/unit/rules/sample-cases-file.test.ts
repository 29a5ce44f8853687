import { describe, expect, it } from 'vitest';
import { readSamples } from '../../support/read-samples.ts';
import { workbookOf } from '../../support/workbook.ts';

// The nasty cases of laboratory files that concern how a file is read: 1 to 11. Fixtures of this project's own making.
const header = 'Sample no.;Taken;Reported;Value;Unit;Point;Analyst;Type';
const line = (
  cells: Partial<Record<'no' | 'taken' | 'reported' | 'value' | 'unit' | 'point' | 'by' | 'type', string>>,
) => {
  const { no = 'A-1', taken = '28.11.2026 06:10', reported = '', value = '1480,5', unit = '°C' } = cells;
  return [no, taken, reported, value, unit, cells.point ?? 'KX-09', cells.by ?? '', cells.type ?? ''].join(
    ';',
  );
};
const file = (...lines: Parameters<typeof line>[0][]) => [header, ...lines.map(line)].join('\r\n');

describe('case 1: 1,234', () => {
  it('leaves the sign open while nothing in the file shows it', async () => {
    const { proposed, says } = await readSamples(
      'id,taken,value\nA,2026-11-28 06:10,"1,234"\nB,2026-11-28 07:10,"2,345"\n',
    );
    expect(proposed.decimal).toBeNull();
    expect(says).toContain(
      'Decimal sign open: 2 of 2 values look like 1,234, which is a thousand or a little more than one.',
    );
  });

  it('is read by the sign that the rest of the file shows, never by itself', async () => {
    const text =
      'id;taken;value;unit;point\nA;28.11.2026 06:10;1,234;°C;KX-09\nB;28.11.2026 07:10;2,5;°C;KX-09\n';
    const { at, says } = await readSamples(text);
    expect(at(2).sample?.value).toBe(1.234);
    expect(says).toContain(
      'Decimal comma: 2 of 2 values have one, none a point.'.replace('2 of 2', '1 of 2'),
    );
  });
});

describe('case 2: semicolons with decimal commas', () => {
  it('are told from the file, with how many values say so', async () => {
    const rows = Array.from({ length: 404 }, (_, i) => ({
      no: `A-${i}`,
      value: i < 398 ? '1480,5' : '1480',
    }));
    const { proposed, says } = await readSamples(file(...rows));
    expect(proposed).toMatchObject({ delimiter: ';', decimal: ',' });
    expect(says).toContain('Decimal comma: 398 of 404 values have one, none a point.');
  });
});

describe('cases 3 and 4: results beyond the range of the method', () => {
  it('keep limit and sign, neither zero nor half the limit, and are flagged', async () => {
    const { at } = await readSamples(file({ value: '<0,05' }, { no: 'A-2', value: '> 1200,5' }));
    expect(at(2)).toMatchObject({ outcome: 'added-with-flag', sample: { value: 0.05, qualifier: '<' } });
    expect(at(3)).toMatchObject({ outcome: 'added-with-flag', sample: { value: 1200.5, qualifier: '>' } });
    expect(at(2).words).toBe('Below the method’s range: kept, not used to judge the estimate.');
  });
});

describe('case 5: 03/04/2026', () => {
  it('is left open while no day of the file is above 12', async () => {
    const { proposed, says } = await readSamples(
      file({ taken: '03/04/2026 06:10' }, { no: 'B', taken: '05/04/2026 06:10' }),
    );
    expect(proposed.dateOrder).toBeNull();
    expect(says).toContain('Day and month open: no day of this file is above 12.');
  });

  it('is read by the one row that shows the order, wherever it stands', async () => {
    const rows = Array.from({ length: 15 }, (_, i) => ({
      no: `A-${i}`,
      taken: `0${1 + (i % 9)}/04/2026 06:10`,
    }));
    const { says, at } = await readSamples(file(...rows, { no: 'Z', taken: '28/04/2026 06:10' }));
    expect(says).toContain('Day before month: row 17 has 28 in first place.');
    expect(at(2).sample?.takenAt).toBe(Date.parse('2026-04-01T04:10:00Z'));
    const american = await readSamples(file(...rows, { no: 'Z', taken: '04/28/2026 06:10' }));
    expect(american.says).toContain('Month before day: row 17 has 28 in second place.');
  });
});

describe('cases 6 and 7: 02:30 when clocks change', () => {
  it('occurs twice in autumn: refused until the file or a person says which', async () => {
    const twice = file({ taken: '25.10.2026 02:30' });
    const { at } = await readSamples(twice);
    expect(at(2).outcome).toBe('refused');
    expect(at(2).words).toContain('occurred twice');
    const mended = await readSamples(twice, { mends: { 2: { takenAt: '2026-10-25T02:30:00+01:00' } } });
    expect(mended.at(2)).toMatchObject({
      outcome: 'added',
      sample: { takenAt: Date.parse('2026-10-25T01:30:00Z') },
    });
  });

  it('does not occur in spring: the zone is open, since the file must be on another clock', async () => {
    const skipped = file({ taken: '29.03.2026 02:30' }, { no: 'B' });
    const { proposed, says } = await readSamples(skipped);
    expect(proposed.zone).toBeNull();
    expect(says).toContain(
      'Zone open: 1 time falls into the hour that clocks of Europe/Copenhagen leave out (row 2), so the file may be on another clock, such as UTC or winter time all year.',
    );
    expect((await readSamples(skipped, { said: { zone: 'Europe/Copenhagen' } })).at(2).outcome).toBe(
      'refused',
    );
    const utc = await readSamples(skipped, { said: { zone: 'UTC' } });
    expect(utc.at(2).sample?.takenAt).toBe(Date.parse('2026-03-29T02:30:00Z'));
  });
});

describe('case 8: the time of the result in the column of samples', () => {
  it('is flagged row by row, and the file is spoken of where most rows are so', async () => {
    const same = ['06:10', '07:25', '08:40'].map((clock, i) => {
      const at = `28.11.2026 ${clock}`;
      return { no: `A-${i}`, taken: at, reported: at };
    });
    const { at, saysNotices } = await readSamples(file(...same, { no: 'B', reported: '28.11.2026 09:00' }));
    expect(at(2)).toMatchObject({
      outcome: 'added-with-flag',
      words: 'The time of taking is the time of the result: perhaps not when it was taken.',
    });
    expect(at(5).outcome).toBe('added');
    expect(saysNotices.join(' ')).toContain('In 3 of 4 rows the time of taking is the time of the result');
  });

  it('is flagged where it is the minute of the upload', async () => {
    const uploadedAt = Date.parse('2026-11-28T05:10:30Z');
    expect((await readSamples(file({}), { uploadedAt })).at(2).words).toContain(
      'the very minute this file came in',
    );
    expect((await readSamples(file({}))).at(2).outcome).toBe('added');
  });

  it('is suspected where nearly all times are full or half hours', async () => {
    const rows = Array.from({ length: 24 }, (_, i) => ({
      no: `A-${i}`,
      taken: `28.11.2026 ${String(i).padStart(2, '0')}:30`,
    }));
    expect((await readSamples(file(...rows))).saysNotices).toEqual([
      '24 of 24 times are full or half hours: perhaps the times planned, not those at which samples were taken.',
    ]);
    const exact = rows.map((row) => ({ ...row, taken: row.taken.replace(':30', ':37') }));
    expect((await readSamples(file(...exact))).notices).toEqual([]);
  });
});

describe('case 9: a sample yet to come', () => {
  it('is refused beyond ten minutes', async () => {
    const { at } = await readSamples(
      file({ taken: '30.11.2026 06:51' }, { no: 'B', taken: '30.11.2026 06:50' }),
    );
    expect([at(2).outcome, at(3).outcome]).toEqual(['refused', 'added']);
  });
});

describe('case 10: a date alone', () => {
  it('is kept as a day, in text and in a workbook', async () => {
    const { at } = await readSamples(file({ taken: '28.11.2026' }));
    expect(at(2)).toMatchObject({
      outcome: 'added-with-flag',
      sample: { takenAt: null, takenOn: '2026-11-28' },
    });
    const day = { day: new Date('2026-11-28T00:00:00Z') };
    const book = await readSamples(
      workbookOf({
        S: [
          ['Sample no.', 'Taken', 'Value', 'Unit', 'Point'],
          ['A-1', day, 1480.5, '°C', 'KX-09'],
        ],
      }),
    );
    expect(book.at(2).sample).toMatchObject({ takenAt: null, takenOn: '2026-11-28' });
  });

  it('is joined by the time of day from a column of its own', async () => {
    const text =
      'No;Date;Time;Value;Unit;Point\nA;28.11.2026;06:10;1480,5;°C;KX-09\nB;27.11.2026;07:20;1481,5;°C;KX-09\n';
    const { proposed, at } = await readSamples(text);
    expect(proposed.columns).toMatchObject({ takenAt: 1, takenTime: 2, value: 3 });
    expect(at(2).sample?.takenAt).toBe(Date.parse('2026-11-28T05:10:00Z'));
  });
});

describe('case 11: a composite', () => {
  it.each([
    ['24-h composite', 24],
    ['24 h', 24],
    ['Tagesmischprobe', 24],
    ['composite over 8 hours', 8],
    ['échantillon moyen 24 h', 24],
  ])('is known by “%s”', async (type, hours) => {
    const { at } = await readSamples(file({ type }));
    expect(at(2)).toMatchObject({ outcome: 'added-with-flag', sample: { compositeMs: hours * 3_600_000 } });
    expect(at(2).words).toBe(
      `A composite over ${hours} h: compared with the average of the estimate over that time.`,
    );
  });

  it('of unknown length is kept as of its day, never compared', async () => {
    const { at } = await readSamples(file({ type: 'Composite' }));
    expect(at(2).sample).toMatchObject({ takenAt: null, takenOn: '2026-11-28', compositeMs: null });
  });

  it('is not made of any remark with hours in it', async () => {
    expect((await readSamples(file({ type: 'furnace cold for 24 h before' }))).at(2).outcome).toBe('added');
  });

  it('is known by when gathering began', async () => {
    const text = (from: string) =>
      `No;Sampling start;Sampling end;Value;Unit;Point\nA;${from};28.11.2026 06:00;1480,5;°C;KX-09\n`;
    const { at, proposed } = await readSamples(text('27.11.2026 06:00'));
    expect(proposed.columns).toMatchObject({ takenFrom: 1, takenAt: 2 });
    expect(at(2).sample).toMatchObject({
      compositeMs: 86_400_000,
      takenAt: Date.parse('2026-11-28T05:00:00Z'),
    });
    const turned = (await readSamples(text('28.11.2026 07:00'))).at(2);
    expect(turned).toMatchObject({
      outcome: 'refused',
      words: expect.stringContaining('Taken before gathering began (“28.11.2026 07:00”).'),
    });
    expect((await readSamples(text('01.10.2026 07:00'))).at(2).outcome).toBe('refused');
  });
});
