import { describe, expect, it } from 'vitest';
import type { SampleMapping } from '../../../shared/contracts/sample-import.ts';
import {
  columnNames,
  type KnownProfile,
  nameFrom,
  profileOf,
  recogniseFile,
  signatureOf,
} from '../../../shared/rules/import-profile.ts';
import { refusedColumns } from '../../../shared/rules/sample-refused.ts';

const header = ['Probe no.', 'Taken', 'Result', 'Result', ''];
const mapping = {
  delimiter: ';',
  sheet: null,
  decimal: ',',
  headerLine: 3,
  dateOrder: 'day-month-year',
  zone: 'Europe/Copenhagen',
  columns: {
    sampleNumber: 0,
    takenAt: 1,
    reportedAt: null,
    value: 3,
    unit: null,
    samplePoint: null,
    analyst: null,
    takenFrom: null,
  },
  samplePointId: 4,
  methodId: null,
  unit: '°C',
  missingWords: ['n/a'],
} as unknown as SampleMapping;
const profile: KnownProfile = {
  id: 7,
  name: 'pyrometry',
  signature: signatureOf(header),
  mapping: profileOf(mapping, header),
};
const cut = (...rows: string[][]) => ({
  delimiter: ';' as const,
  sheet: null,
  rows: rows.map((cells, index) => ({ line: index + 1, cells })),
});
const recognise = (...rows: string[][]) => recogniseFile([cut(...rows)], [profile]);

describe('the names of columns', () => {
  it('differ in nothing but what a person reads, and repeated ones are numbered', () => {
    expect(columnNames(['Probe_no.', ' VALUE ', 'value', '', ''])).toEqual([
      'probe no',
      'value',
      'value 2',
      '',
      '',
    ]);
  });
});

describe('recognising a file', () => {
  it('reads it as one with the same columns was read before', () => {
    expect(recognise(header)!.mapping).toEqual({ ...mapping, headerLine: 1 });
  });

  it('finds the header below any title lines', () => {
    expect(recognise(['Weekly export'], ['printed by the balance'], header)!.mapping.headerLine).toBe(3);
  });

  it('follows columns that have moved', () => {
    const moved = ['Result', 'Taken', 'Result', 'Probe no.', ''];
    const { columns } = recognise(moved)!.mapping;
    expect(columns).toMatchObject({ sampleNumber: 3, takenAt: 1, value: 2 });
  });

  it('knows the download of refused rows by the file it came from', () => {
    const { columns } = recognise([...refusedColumns, ...header])!.mapping;
    expect(columns).toMatchObject({ sampleNumber: 2, takenAt: 3, value: 5 });
  });

  it('does not take a file with one more, one less or another column for it', () => {
    expect(recognise([...header, 'Remark'])).toBeNull();
    expect(recognise(header.slice(1))).toBeNull();
    expect(recognise(['Probe no.', 'Reported', 'Result', 'Result', ''])).toBeNull();
  });
});

describe('the first name of a profile', () => {
  it('is that of the file without its dates and numbers', () => {
    expect(nameFrom('furnace-pyrometry-wk48.csv')).toBe('furnace pyrometry');
    expect(nameFrom('2026-11-30.xlsx')).toBe('2026-11-30');
  });
});
