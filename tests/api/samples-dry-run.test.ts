import { beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { noColumns } from '../../shared/rules/sample-mapping.ts';
import { sayCounts } from '../../shared/rules/sample-sentences.ts';
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

const server = useServer();
let lab: Laboratory;

beforeAll(async () => {
  lab = await makeLaboratory(server);
});
beforeEach(() => {
  server.now.value = new Date('2026-11-30T05:40:00Z');
});

const header = 'Sample no.;Taken;Reported;Value;Unit;Point';
/** A file of good rows in which one row has the given cells instead. */
function fileWith(
  cells: Partial<Record<'number' | 'taken' | 'reported' | 'value' | 'unit' | 'point', string>>,
): string {
  const {
    number = 'X-1',
    taken = '29.11.2026 06:00',
    reported = '',
    value = '1481,5',
    unit = '°C',
    point = 'Tarnby',
  } = cells;
  return [
    header,
    'A-1;27.11.2026 06:00;27.11.2026 09:10;1480,25;°C;Tarnby',
    [number, taken, reported, value, unit, point].join(';'),
    'A-2;27.11.2026 14:00;;1482,0;°C;tarnby',
  ].join('\r\n');
}

describe('a row of a dry run', () => {
  it.each([
    ['no value', { value: '' }, 'No value. Write it in the file, or leave the row out.'],
    [
      'a word instead of a value',
      { value: 'pend' },
      'No value, only “pend”. Write it in the file, or leave the row out.',
    ],
    ['text in the column of numbers', { value: 'broken' }, '“broken” is no number as this file writes them.'],
    ['the other decimal sign', { value: '1481.55' }, '“1481.55” is no number as this file writes them.'],
    ['a formula for a value', { value: '=1+1' }, '“=1+1” is no number as this file writes them.'],
    ['no time', { taken: '' }, 'No time of taking. Write it in the file.'],
    [
      'an unreadable time',
      { taken: 'yesterday' },
      'The time of taking, “yesterday”, can’t be read. One looks like 2026-11-29 06:00.',
    ],
    [
      'a day that does not exist',
      { taken: '31.11.2026 06:00' },
      '31 November does not exist. Write the right date in the file.',
    ],
    [
      '29 February of no leap year',
      { taken: '29.02.2025 06:00' },
      '29 February 2025 does not exist. Write the right date in the file.',
    ],
    [
      'a month that does not exist',
      { taken: '11.30.2026 06:00' },
      'There is no month 30. Is the order of day and month the other way round?',
    ],
    [
      'a time that does not exist',
      { taken: '29.11.2026 25:00' },
      'The time of taking, “29.11.2026 25:00”, is no time of day.',
    ],
    [
      'a date of tomorrow',
      { taken: '01.12.2026' },
      'The time of taking, “01.12.2026”, is still to come. Check date, order of day and month, and zone.',
    ],
    [
      'a time 11 minutes ahead',
      { taken: '30.11.2026 06:51' },
      'The time of taking, “30.11.2026 06:51”, is still to come. Check date, order of day and month, and zone.',
    ],
    [
      'a time before 1970',
      { taken: '29.11.1926 06:00' },
      'The time of taking, “29.11.1926 06:00”, lies before 1970. Check the year.',
    ],
    [
      'the hour that clocks leave out',
      { taken: '29.03.2026 02:30' },
      '“29.03.2026 02:30” did not occur: the clocks were put forward. Write the time that is meant, 01:30+01:00 or 03:30+02:00.',
    ],
    [
      'the hour that clocks show twice',
      { taken: '25.10.2026 02:30' },
      'The time of taking “25.10.2026 02:30” occurred twice, as the clocks were put back: at 00:30 and 01:30 UTC. Write it with its offset, 02:30+02:00 or 02:30+01:00.',
    ],
    [
      'a report before the sample',
      { reported: '29.11.2026 05:00' },
      'Reported before it was taken (“29.11.2026 05:00”). One of the two times is wrong.',
    ],
    [
      'an unreadable report',
      { reported: 'soon' },
      'The time of reporting, “soon”, can’t be read. One looks like 2026-11-29 06:00.',
    ],
    [
      'a report still to come',
      { reported: '30.11.2026 12:00' },
      'The time of reporting, “30.11.2026 12:00”, is still to come. Check date, order of day and month, and zone.',
    ],
    [
      'an unknown point',
      { point: 'K9' },
      'There is no sample point K9 at this site. Say which point it is, or add it under Points and methods.',
    ],
    ['no point', { point: '' }, 'No sample point. Write it in the file, or choose one for the whole file.'],
    [
      'a unit of another kind than the soft sensor’s',
      { unit: 'bar' },
      'In bar, but samples of this point are in °C. It can’t be converted: the two are of different kinds.',
    ],
    ['no unit', { unit: '' }, 'No unit; samples of this point are in °C.'],
    [
      'a sample number without end',
      { number: 'N'.repeat(81) },
      'The sample number has 81 characters; 80 are the most.',
    ],
    [
      'a cell too many',
      { point: 'Tarnby;9' },
      '7 cells where the header has 6. Is a delimiter missing, or is one inside a text without quotation marks?',
    ],
  ])('with %s is refused on its line, in words', async (_what, cells, words) => {
    const view = await lab.dryRun(fileWith(cells), { decimal: ',', dateOrder: 'day-month-year' });
    expect(view.import.counts).toMatchObject({ rows: 3, added: 2, refused: 1 });
    const row = rowAt(view, 3);
    expect({ outcome: row.outcome, words: wordsOf(row) }).toEqual({ outcome: 'refused', words });
  });

  it('tells everything that is wrong with it at once', async () => {
    const view = await lab.upload(fileWith({ value: '', taken: '31.11.2026 06:00', point: 'K9' }));
    expect(rowAt(view, 3).reasons.map(({ code }) => code)).toEqual([
      'unknown-point',
      'impossible-date',
      'no-value',
    ]);
  });

  it('may lie ten minutes ahead, as clocks differ', async () => {
    const view = await lab.upload(fileWith({ taken: '30.11.2026 06:49' }));
    expect(rowAt(view, 3).outcome).toBe('added');
  });

  it('takes a time with its offset in the hour that clocks show twice', async () => {
    const view = await lab.upload(fileWith({ taken: '25.10.2026 02:30+01:00' }));
    expect(rowAt(view, 3)).toMatchObject({ outcome: 'added', takenAt: '2026-10-25T01:30:00.000Z' });
  });

  it.each([
    ['<0,05', 'Below the method’s range: kept, not used to judge the estimate.'],
    ['> 1200', 'Above the method’s range: kept, not used to judge the estimate.'],
  ])('with %s is added with a flag', async (value, words) => {
    const row = rowAt(await lab.upload(fileWith({ value })), 3);
    expect({ outcome: row.outcome, value: row.value, words: wordsOf(row) }).toEqual({
      outcome: 'added-with-flag',
      value,
      words,
    });
  });

  it('with a date alone is kept as a day, flagged', async () => {
    const row = rowAt(await lab.upload(fileWith({ taken: '29.11.2026' })), 3);
    expect(row).toMatchObject({ outcome: 'added-with-flag', takenAt: null, takenOn: '2026-11-29' });
    expect(wordsOf(row)).toBe('A date without a time: kept, never compared with the estimate.');
  });

  it('shows what it says, how it is read and where it goes', async () => {
    expect(rowAt(await lab.upload(fileWith({ unit: '° C' })), 3)).toEqual({
      line: 3,
      outcome: 'added',
      sampleNumber: 'X-1',
      taken: '29.11.2026 06:00',
      takenAt: '2026-11-29T05:00:00.000Z',
      takenOn: null,
      value: '1481,5',
      unit: '°C',
      samplePoint: 'Tarnby',
      goesTo: ['Tarnby TY'],
      reasons: [],
      stored: false,
      inFile: {},
    });
  });

  it('that repeats another of the file is skipped, and that contradicts another in its time is refused, as that is', async () => {
    const view = await lab.upload(
      [
        header,
        'A-1;29.11.2026 06:00;;1480,0;°C;Tarnby',
        'A-1;29.11.2026 06:00;;1480,0;°C;TARNBY',
        'A-2;29.11.2026 07:00;;1480,5;°C;Tarnby',
        'A-2;29.11.2026 07:10;;1499,0;°C;Tarnby',
      ].join('\n'),
    );
    expect(wordsOf(rowAt(view, 3))).toBe('The same sample as row 2.');
    expect(wordsOf(rowAt(view, 4))).toBe(
      'Row 5 gives this sample as 1499,0 °C. Keep the right one of the two.',
    );
    expect(wordsOf(rowAt(view, 5))).toBe(
      'Row 4 gives this sample as 1480,5 °C. Keep the right one of the two.',
    );
    expect(sayCounts(view.import.counts!, 'will')).toBe('4 rows: 1 will be added, 1 skipped, 2 refused.');
    expect(view.rows.map(({ outcome }) => outcome)).toEqual(['refused', 'refused', 'skipped', 'added']);
  });

  it('keeps its line number after line breaks inside quotes', async () => {
    const view = await lab.upload(
      `${header};Remark\nA-1;29.11.2026 06:00;;1480,0;°C;Tarnby;"two\nlines"\nA-2;31.11.2026 06:00;;1480,5;°C;Tarnby;\n`,
    );
    expect(rowAt(view, 4).reasons[0]!.code).toBe('impossible-date');
  });
});

describe('what a file shows by itself', () => {
  it('is enough to see the outcome at once', async () => {
    const view = await lab.upload(fileWith({}));
    expect(view.preview).toMatchObject({
      encoding: 'utf-8',
      proposed: {
        delimiter: ';',
        decimal: ',',
        headerLine: 1,
        dateOrder: 'day-month-year',
        zone: 'Europe/Copenhagen',
        columns: { sampleNumber: 0, takenAt: 1, reportedAt: 2, value: 3, unit: 4, samplePoint: 5 },
      },
    });
    expect(view.import).toMatchObject({ state: 'uploaded', version: 1, mapping: view.preview.proposed });
    expect((await lab.samples()).rows.map((row) => row.sampleNumber)).not.toContain('X-1');
  });

  it('leaves open what only a person knows: order of day and month, decimal sign, unit', async () => {
    const view = await lab.upload('taken,result\n03/04/2026 06:00,"1,234"\n05/04/2026 06:00,"1,250"\n');
    expect(view.preview.proposed).toMatchObject({ dateOrder: null, decimal: null, unit: null });
    expect(view).toMatchObject({ rows: [], outcome: null, import: { mapping: null, counts: null } });
    const mapping = mappingOf(view, { dateOrder: 'month-day-year', decimal: '.' });
    const said = await sayMapping(lab.technician, view, mapping).expect(200);
    expect(rowAt(said.body, 2)).toMatchObject({ takenAt: '2026-03-04T05:00:00.000Z', outcome: 'added' });
  });

  it('reads title lines, a unit in the header, tabs and windows-1252', async () => {
    const text = 'Furnace laboratory\n\nProbe no.\tSampled\tReading [°C]\nP-1\t2026-11-29 06:00\t1480.5\n';
    const view = await lab.upload(Buffer.from(text, 'latin1'));
    expect(view.preview.encoding).toBe('windows-1252');
    expect(view.preview.proposed).toMatchObject({ delimiter: '\t', headerLine: 3, unit: '°C' });
    expect(rowAt(view, 4)).toMatchObject({ outcome: 'added', unit: '°C' });
  });

  it('numbers samples without a number by the time they were taken', async () => {
    const view = await lab.dryRun('taken,value\n2026-11-29 06:00,1480.5\n2026-11-28,1480.5\n');
    expect(rowAt(view, 2).sampleNumber).toBe('2026-11-29T05:00:00Z');
    expect(rowAt(view, 3).sampleNumber).toBe('2026-11-28');
  });
});

describe('a mapping', () => {
  const file = 'id,taken,value\nA,2026-11-29 06:00,1480.5\n';
  const columns = { ...noColumns, sampleNumber: 0, takenAt: 1, value: 2 };

  it.each([
    [
      'no point at all',
      { samplePointId: null },
      'samplePointId',
      'No column names the sample point. Choose the point for the whole file.',
    ],
    [
      'a column beyond the last',
      { columns: { ...columns, value: 9 } },
      'columns.value',
      'The file has 3 columns. Choose one of them.',
    ],
    [
      'a column twice',
      { columns: { ...columns, value: 1 } },
      'columns.value',
      'This column is chosen twice. Choose another, or none.',
    ],
    [
      'a header where no row begins',
      { headerLine: 9 },
      'headerLine',
      'No row begins on line 9. Choose the line that names the columns.',
    ],
    [
      'a zone that does not exist',
      { zone: 'Tarnby' },
      'zone',
      'This is no time zone. One looks like Europe/Copenhagen.',
    ],
    [
      'a method that does not exist',
      { methodId: 99_999 },
      'methodId',
      'This method is not one in use at the site. Choose another.',
    ],
  ])('with %s is refused beside its field', async (_what, said, field, message) => {
    const view = await lab.upload(file);
    const answer = await sayMapping(lab.technician, view, { ...mappingOf(view, {}), ...said }).expect(400);
    expect(problemOf(answer).fields).toEqual([{ path: `mapping.${field}`, message }]);
  });

  it('can’t name a point of another site', async () => {
    const elsewhere = await makeLaboratory(server, 'Kallara');
    const view = await lab.upload(file);
    const mapping = { ...mappingOf(view, {}), samplePointId: elsewhere.samplePointId };
    const answer = await sayMapping(lab.technician, view, mapping).expect(400);
    expect(problemOf(answer).fields![0]!.path).toBe('mapping.samplePointId');
  });

  it('goes by the unit of the chosen method before the soft sensor’s', async () => {
    const { body } = await lab.technician
      .post(`/api/v1/sites/${lab.siteId}/methods`)
      .send({ name: 'Thermocouple', quantity: '', unit: 'K', repeatability: null, reproducibility: null })
      .expect(200);
    const view = await lab.dryRun(file, { methodId: body.id });
    expect(wordsOf(rowAt(view, 2))).toBe('Converted from 1,480.5\u00a0°C to 1,753.65\u00a0K.');
    expect(rowAt(view, 2)).toMatchObject({ outcome: 'added-with-flag', value: '1480.5', unit: '°C' });
  });

  it('that somebody else said meanwhile is shown instead of overwritten', async () => {
    const view = await lab.upload(file);
    await sayMapping(lab.technician, view, mappingOf(view, {})).expect(200);
    const late = await sayMapping(lab.technician, view, mappingOf(view, { zone: 'UTC' })).expect(409);
    expect(problemOf(late)).toMatchObject({
      code: 'stale',
      current: { import: { version: 2, mapping: { zone: 'Europe/Copenhagen' } } },
    });
  });

  it('is no longer said once its point is archived: the file asks anew', async () => {
    const points = `/api/v1/sites/${lab.siteId}/sample-points`;
    const point = (await lab.technician.post(points).send({ name: 'KX-77', unitId: null }).expect(200)).body;
    const view = await lab.dryRun(file, { samplePointId: point.id });
    expect(view.outcome).not.toBeNull();
    await lab.technician
      .put(`/api/v1/sample-points/${point.id}`)
      .send({ name: 'KX-77', unitId: null, archived: true, version: 1 })
      .expect(200);
    const { body } = await lab.technician.get(`/api/v1/sample-imports/${view.import.id}`).expect(200);
    expect(body).toMatchObject({ outcome: null, rows: [] });
    await lab.commit(view).expect(400);
  });
});
