import { describe, expect, it } from 'vitest';
import { readSamples } from '../../support/read-samples.ts';
import { type Cell, workbookOf } from '../../support/workbook.ts';

// The nasty cases of laboratory files that concern their bytes and their layout: 19, 20 and workbooks. Own fixtures.
const bytesOf = (text: string, encoding: 'latin1' | 'utf16le') => new Uint8Array(Buffer.from(text, encoding));
const table = 'Probe;Taken;Value;Unit;Point\r\nA-1;28.11.2026 06:10;1\u00a0480,5;°C;KX-09\r\n';

describe('case 19: encodings and signs', () => {
  it.each([
    ['UTF-8 with a byte order mark', new TextEncoder().encode(`\ufeff${table}`)],
    ['UTF-16 with one', bytesOf(`\ufeff${table}`, 'utf16le')],
    ['UTF-16 without one', bytesOf(table, 'utf16le')],
    ['windows-1252, with ° and a no-break space as single bytes', bytesOf(table, 'latin1')],
  ])('%s', async (_name, bytes) => {
    const { at, proposed } = await readSamples(bytes);
    expect(proposed.columns.sampleNumber).toBe(0);
    expect(at(2)).toMatchObject({ outcome: 'added', sample: { value: 1480.5, unit: '°C' } });
  });

  it('a Unicode minus, and µ in either spelling', async () => {
    const text =
      'No;Taken;Value;Unit;Point\nA;28.11.2026 06:10;−4,5;μg/l;NX-01\nB;28.11.2026 06:11;4,5;µg/l;NX-01\n';
    const { at } = await readSamples(text);
    expect(at(2).sample).toMatchObject({ value: -4.5, unit: 'mg/m³', statedUnit: 'μg/l' });
    expect(at(3).sample).toMatchObject({ value: 4.5, unit: 'mg/m³' });
  });
});

describe('case 20: lines that are no samples', () => {
  const text = [
    'Works laboratory;;;',
    'Week 48, printed 30.11.2026;;;',
    '',
    'Sample no.;Taken;Value;Point;Remark',
    ';dd.mm.yyyy hh:mm;[°C];;',
    'A-1;28.11.2026 06:10;1480,5;KX-09;"two',
    'lines"',
    'Sample no.;Taken;Value;Point;Remark',
    'A-2;28.11.2026 07:10;1481,5;KX-09;',
    'Average;;1481,0;;',
    'n = 2;;;;',
    '----------',
    'Page 1 of 1',
    '* checked by the shift',
  ].join('\r\n');

  it('are skipped with what they are, and the file needs no editing', async () => {
    const { at, rows, saysNotices } = await readSamples(text);
    expect(rows.map(({ row, outcome }) => [row.line, outcome])).toEqual([
      [5, 'skipped'],
      [6, 'added'],
      [8, 'skipped'],
      [9, 'added'],
      [10, 'skipped'],
      [11, 'skipped'],
      [12, 'skipped'],
      [13, 'skipped'],
      [14, 'skipped'],
    ]);
    expect(at(5).words).toBe('A row of units.');
    expect(at(8).words).toBe('The header once more.');
    expect(at(10).words).toBe('“Average”: a figure over other rows, no sample.');
    expect(at(13).words).toBe('“Page 1 of 1”: a note, no sample.');
    expect(saysNotices).toEqual(['2 lines above the header are passed over.']);
  });

  it('the unit of the row of units is that of the values', async () => {
    const { proposed, says, at } = await readSamples(text);
    expect(proposed.unit).toBe('°C');
    expect(says).toContain('Unit °C: it stands in the row of units, row 5.');
    expect(at(6).sample?.unit).toBe('°C');
  });

  it.each([
    ['half a sample', 'A-3;;;;'],
    ['a sample without its value', 'A-3;28.11.2026 08:10;;KX-09;'],
    ['a sample without its time', 'Total flow;;1480,5;KX-09;'.replace('Total flow', 'T-3')],
    ['a sample whose delimiters are lost', 'A-3 28.11.2026 08:10 1480,5 KX-09'],
    ['a sample named like a month’s mean', 'Meander-3;28.11.2026 08:10;pend;KX-09;'],
  ])('%s is refused instead: no sample is passed over', async (_name, row) => {
    const { at } = await readSamples(`${text}\r\n${row}`);
    expect(at(15).outcome).toBe('refused');
  });
});

describe('a workbook', () => {
  const head = ['Probe', 'Entnahme', 'Messwert', 'Einheit', 'Messstelle'];
  const at = (day: number) => new Date(Date.UTC(2026, 10, day, 6, 10));
  const rows: Cell[][] = [
    ['Betriebslabor'],
    [],
    head,
    ['A-1', at(28), 1480.5, '°C', 'KX-09'],
    ['A-2', at(29), '1.481,25', '°C', 'KX-09'],
    ['A-3', '29.11.2026 08:10', { formula: 'C4+1', value: '1481,5' }, '°C', 'KX-09'],
    ['A-4', at(29), { error: '#N/A' }, '°C', 'KX-09'],
    ['Mittelwert', null, 1480.875],
  ];

  it('is read from the sheet that looks most like samples, each row by its line there', async () => {
    const read = await readSamples(workbookOf({ Deckblatt: [['Wochenbericht'], ['KW', 48]], Werte: rows }));
    expect(read.proposed).toMatchObject({ sheet: 'Werte', headerLine: 3, decimal: ',' });
    expect(read.says).toContain('Sheet “Werte” of 2: it looks most like a table of samples (5 rows).');
    expect(read.at(4).sample).toMatchObject({ value: 1480.5, takenAt: Date.parse('2026-11-28T05:10:00Z') });
    expect(read.at(5).sample).toMatchObject({ value: 1481.25 });
    expect(read.at(6).sample).toMatchObject({ value: 1481.5 });
    expect(read.at(7).outcome).toBe('refused');
    expect(read.at(8).outcome).toBe('skipped');
  });

  it('holds its numbers as numbers, whatever the sign of texts beside them', async () => {
    const plain = [head, ['A-1', at(28), 1.234, '°C', 'KX-09'], ['A-2', at(29), 1480.5, '°C', 'KX-09']];
    const read = await readSamples(workbookOf({ S: plain }));
    expect(read.says).toContain('The workbook holds its values as numbers, so no sign is to be told.');
    expect(read.at(2).sample?.value).toBe(1.234);
    const commas = await readSamples(workbookOf({ S: plain }), { said: { decimal: ',' } });
    expect(commas.at(2).sample?.value).toBe(1.234);
  });

  it('gives sample numbers all their digits', async () => {
    const number = 20_261_129_001;
    const read = await readSamples(workbookOf({ S: [head, [number, at(28), 1480.5, '°C', 'KX-09']] }));
    expect(read.at(2).sample?.sampleNumber).toBe('20261129001');
  });
});

describe('header words', () => {
  it.each([
    ['German', 'Proben-Nr.;Entnahmedatum;Ergebnisdatum;Ergebnis;Einheit;Messstelle;Laborant'],
    [
      'French',
      'N° échantillon;Date de prélèvement;Date d’analyse;Résultat;Unité;Point de prélèvement;Analyste',
    ],
    ['Spanish', 'N° de muestra;Fecha de muestreo;Fecha de análisis;Resultado;Unidad;Punto de toma;Analista'],
    ['English', 'Sample ID;Date sampled;Date reported;Result;Unit;Sample point;Analyst'],
  ])('in %s name all columns', async (_language, header) => {
    const { proposed, at } = await readSamples(
      `${header}\nA-1;28.11.2026 06:10;28.11.2026 09:00;1480,5;°C;KX-09;TH\n`,
    );
    expect(proposed.columns).toEqual({
      sampleNumber: 0,
      takenAt: 1,
      takenTime: null,
      takenFrom: null,
      reportedAt: 2,
      value: 3,
      unit: 4,
      samplePoint: 5,
      analyst: 6,
    });
    expect(at(2)).toMatchObject({ outcome: 'added', sample: { analyst: 'TH' } });
  });

  it('give way to what stands below where they deceive', async () => {
    const rows = Array.from({ length: 5 }, (_, i) => `A-${i};passed;28.11.2026 0${i}:10;148${i},5;KX-09`);
    const { proposed, says } = await readSamples(['Sample;Result;Date;NOx;Where', ...rows].join('\n'));
    expect(proposed.columns).toMatchObject({ value: 3, takenAt: 2, samplePoint: 4 });
    expect(says).toContain('Known by what stands below, not by the name: Where, NOx.');
  });
});

describe('what a person writes anew', () => {
  const broken =
    'No;Taken;Value;Unit;Point\nA;31.11.2026 06:10;14x;;KX-9\nB;28.11.2026 06:10;1480,5;°C;KX-09\n';

  it('is read in place of the cells, in ISO form or with either decimal sign as well', async () => {
    const mends = {
      2: { takenAt: '2026-11-30T06:10:00+01:00', value: '1482.5', unit: 'degC', samplePoint: 'crown 9' },
    };
    const { at, rows } = await readSamples(broken, { mends });
    expect(at(2)).toMatchObject({
      outcome: 'added',
      sample: { value: 1482.5, unit: '°C', samplePointId: 9, takenAt: Date.parse('2026-11-30T05:10:00Z') },
    });
    expect(rows[0]!.row.cells[2]).toBe('14x');
  });

  it('may leave a row out, and be wrong itself', async () => {
    const { at } = await readSamples(broken, {
      mends: { 2: { leaveOut: true }, 3: { value: 'about 1480' } },
    });
    expect(at(2)).toMatchObject({ outcome: 'skipped', words: 'Left out by hand.' });
    expect(at(3).words).toContain('“about 1480” is no number');
  });
});
