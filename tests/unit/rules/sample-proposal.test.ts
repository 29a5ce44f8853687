import { describe, expect, it } from 'vitest';
import { proposeMapping } from '../../../shared/rules/sample-proposal.ts';
import { type SampleRegistry, unitKey } from '../../../shared/rules/sample-registry.ts';
import { noColumns } from '../../../shared/rules/sample-mapping.ts';
import { textFile } from '../../support/read-samples.ts';
import { sayCounts, sayFileProblem, sayReading } from '../../../shared/rules/sample-sentences.ts';

const registry: SampleRegistry = {
  zone: 'Europe/Copenhagen',
  pointsByName: new Map([
    ['kx-09', { id: 9, name: 'KX-09' }],
    ['kx-10', { id: 10, name: 'KX-10' }],
  ]),
  sensorsAt: new Map([
    [9, [{ tagName: 'TY-1402', unit: '°C', methodId: 4 }]],
    [10, [{ tagName: 'TY-1405', unit: '°C', methodId: 5 }]],
  ]),
};
const proposed = (text: string, known = registry) => {
  const proposal = proposeMapping(textFile(text), known);
  if (!proposal.ok) throw new Error(sayFileProblem(proposal.problem));
  return proposal.proposed;
};
const columnsOf = (...header: string[]) => {
  const { columns } = proposed(`${header.join(';')}\n${header.map((_, index) => `${index}x`).join(';')}\n`);
  return Object.fromEntries(
    Object.entries(columns).map(([role, column]) => [role, column === null ? null : header[column]]),
  );
};
const none = noColumns;

describe('the words of a header', () => {
  // Spellings of public regulator templates and plant exports; common practice, no single source.
  it.each([
    [
      ['Probe no.', 'Taken', 'Reading', 'Unit', 'Point', 'Remark'],
      { sampleNumber: 'Probe no.', takenAt: 'Taken', value: 'Reading', unit: 'Unit', samplePoint: 'Point' },
    ],
    [
      ['sample_id', 'sample_time', 'result_time', 'value'],
      { sampleNumber: 'sample_id', takenAt: 'sample_time', reportedAt: 'result_time', value: 'value' },
    ],
    [
      ['Sample Date', 'Date Reported', 'Sample Point', 'Sample', 'Result', 'UOM'],
      {
        takenAt: 'Sample Date',
        reportedAt: 'Date Reported',
        samplePoint: 'Sample Point',
        sampleNumber: 'Sample',
        value: 'Result',
        unit: 'UOM',
      },
    ],
    [
      ['ID', 'Collected', 'Analysed', 'Location', 'Result value'],
      {
        sampleNumber: 'ID',
        takenAt: 'Collected',
        reportedAt: 'Analysed',
        samplePoint: 'Location',
        value: 'Result value',
      },
    ],
  ])('%j', (header, columns) => {
    expect(columnsOf(...header)).toEqual({ ...none, ...columns });
  });

  it('give way to what the cells show where they say nothing', () => {
    const { columns } = proposed('Wann;NOx;Wer\n29.11.2026 06:00;70,5;TH\n30.11.2026 06:00;71,5;TH\n');
    expect(columns).toEqual({ ...none, takenAt: 0, value: 1 });
  });

  it('leave a choice between two columns of figures to the person', () => {
    expect(proposed('taken;NOx;CO\n29.11.2026 06:00;70,5;3,1\n').columns.value).toBeNull();
  });

  it('may stand below title lines, and the last of them counts', () => {
    expect(
      proposed('Works laboratory;\nWeek 48;\n\nid;taken;value\nA;2026-11-29 06:00;7,5\n').headerLine,
    ).toBe(4);
  });
});

describe('what goes for the whole file', () => {
  const file = 'id;taken;value;point\nA;29.11.2026 06:00;1480,5;';

  it('is the method of the soft sensors at the points, where they share one', () => {
    expect(proposed(`${file}KX-09\n`).methodId).toBe(4);
    expect(proposed(`${file}KX-09\nB;29.11.2026 07:00;1480,5;kx-10\n`).methodId).toBeNull();
  });

  it('is the only sample point of the site', () => {
    const one = { ...registry, pointsByName: new Map([['kx-09', { id: 9, name: 'KX-09' }]]) };
    const plain = 'id;taken;value\nA;29.11.2026 06:00;1480,5\n';
    expect(proposed(plain, one)).toMatchObject({ samplePointId: 9, methodId: 4 });
    expect(proposed(plain)).toMatchObject({ samplePointId: null, methodId: null });
  });

  it.each([
    ['Value (°C)', '°C'],
    ['NOx value [mg/m³]', 'mg/m³'],
    ['Value, %', '%'],
    ['Value', null],
  ])('is the unit in “%s”', (value, unit) => {
    expect(proposed(`id;taken;${value}\nA;29.11.2026 06:00;1480,5\n`).unit).toBe(unit);
  });
});

it('units are compared by what they mean, not how they are spelt, and never converted', () => {
  for (const same of ['°C', '° C', 'degC', 'deg C', '℃', 'ºC']) expect(unitKey(same)).toBe(unitKey('°C'));
  expect(unitKey('mg/m3')).toBe(unitKey('mg/m³'));
  expect(unitKey('µg/l')).toBe(unitKey('μg/l'));
  expect(unitKey('mPa')).not.toBe(unitKey('MPa'));
  expect(unitKey('°C')).not.toBe(unitKey('°F'));
});

describe('sentences', () => {
  const counts = { rows: 412, added: 404, flagged: 3, held: 1, skipped: 2, refused: 5 };

  it('give the finding of a file, before and after', () => {
    expect(sayCounts(counts, 'will')).toBe(
      '412 rows: 404 will be added, 1 held for a re-test, 2 skipped, 5 refused.',
    );
    expect(sayCounts(counts, 'was')).toBe('412 rows: 404 added, 1 held for a re-test, 2 skipped, 5 refused.');
    expect(sayCounts(counts, 'undone')).toBe('412 rows: 405 added and taken out again.');
    const nothing = { rows: 1, added: 0, flagged: 0, held: 0, skipped: 1, refused: 0 };
    expect(sayCounts(nothing, 'will')).toBe('1 row: none will be added, 1 skipped.');
  });

  it('say how a file is read', () => {
    const reading = { delimiter: ';', decimal: ',', dateOrder: 'day-month-year' } as const;
    expect(sayReading('utf-8', reading)).toBe('Read as UTF-8, semicolons, decimal commas, day before month.');
    expect(sayReading('windows-1252', { delimiter: ',', decimal: null, dateOrder: null })).toBe(
      'Read as Windows-1252, commas.',
    );
  });
});
