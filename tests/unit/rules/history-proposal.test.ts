import { describe, expect, it } from 'vitest';
import { type HistoryHead, proposeHistory, splitUnit } from '../../../shared/rules/history-proposal.ts';
import { findTimes } from '../../../shared/rules/history-evidence.ts';
import { historyTimeReader } from '../../../shared/rules/history-times.ts';

const zone = 'Europe/Copenhagen';
const latestMs = Date.UTC(2026, 11, 1);
const tags = [
  { id: 1, name: 'TI-1', computed: false },
  { id: 2, name: 'FI-2', computed: false },
  { id: 3, name: 'TY-3', computed: true },
];
const propose = (header: string[], rows: string[][], delimiter: HistoryHead['delimiter'] = ',') =>
  proposeHistory({ delimiter, headerLine: 1, header, rows, every: rows }, tags, zone, latestMs);

describe('times', () => {
  const orderOf = (cells: string[]) =>
    findTimes(
      cells.map((cell) => [cell]),
      zone,
      latestMs,
    );

  it('are read day before month, month before day, as ISO, or as seconds and milliseconds since 1970', () => {
    expect(orderOf(['13/11/2026 10:00', '14/11/2026 10:00'])).toMatchObject({
      dateOrder: 'day-month-year',
      doubtful: false,
    });
    expect(orderOf(['11/13/2026 10:00', '11/14/2026 10:00'])).toMatchObject({
      dateOrder: 'month-day-year',
      doubtful: false,
    });
    expect(orderOf(['2026-11-13 10:00', '2026-11-14 10:00'])).toMatchObject({
      dateOrder: 'iso',
      doubtful: false,
    });
    expect(orderOf(['13-Nov-2026 10:00'])).toMatchObject({ doubtful: false });
    expect(orderOf(['1794564000000', '1794564060000'])).toMatchObject({ dateOrder: 'epoch-ms' });
    expect(orderOf(['1794564000', '1794564060'])).toMatchObject({ dateOrder: 'epoch-s' });
  });

  it('are in doubt where day and month may stand either way, and not where one way leaps or lies ahead', () => {
    expect(orderOf(['03/04/2026 10:00', '03/04/2026 10:01'])?.doubtful).toBe(true);
    // Month before day would step by whole months.
    expect(orderOf(['01/03/2026 10:00', '02/03/2026 10:00', '03/03/2026 10:00'])).toMatchObject({
      dateOrder: 'day-month-year',
      doubtful: false,
    });
    expect(orderOf(['12/01/2026 10:00'])).toMatchObject({ dateOrder: 'day-month-year', doubtful: false });
  });

  it('are not seen in small numbers', () => {
    expect(orderOf(['301', '302'])).toBeNull();
  });
});

describe('what columns hold', () => {
  it('follows from names in the header, in any case and with a unit behind; what Cupel computes is left out', () => {
    const { proposed, unknownTags, computedTags } = propose(
      ['Note', 'Time', 'ti-1 [°C]', 'TI-1', 'Feed (t/h)', 'TY-3'],
      [
        ['start', '2026-11-13 10:00', '1.5', '2', '3', '4'],
        ['', '2026-11-13 10:01', '', '2', '-', '4'],
      ],
    );
    expect(proposed).toMatchObject({ shape: 'wide', timeColumn: 1, columns: [{ column: 2, tagId: 1 }] });
    expect(unknownTags).toEqual([{ column: 4, name: 'Feed', unit: 't/h' }]);
    expect(computedTags).toEqual(['TY-3']);
  });

  it('is a row for each reading where a column holds names of tags', () => {
    const { proposed, unknownTags } = propose(
      ['when', 'id', 'q', 'v'],
      [
        ['2026-11-13 10:00', 'TI-1', 'Good', '1,5'],
        ['2026-11-13 10:00', 'XI-7', 'Bad', '2,5'],
      ],
      ';',
    );
    expect(proposed).toMatchObject({
      shape: 'long',
      timeColumn: 0,
      tagColumn: 1,
      qualityColumn: 2,
      valueColumn: 3,
      decimal: ',',
    });
    expect(unknownTags).toEqual([{ column: null, name: 'XI-7', unit: '' }]);
  });

  it('meets names in rows that are too many to judge everything by', () => {
    const rows = [['2026-11-13 10:00', 'TI-1', '1.5']];
    const every = [...rows, ['2026-11-13 10:00', 'XI-8', '2.5']];
    const head = { delimiter: ',' as const, headerLine: 1, header: ['time', 'what', 'value'], rows, every };
    expect(proposeHistory(head, tags, zone, latestMs).unknownTags).toMatchObject([{ name: 'XI-8' }]);
  });

  it('leaves the decimal sign in doubt where every comma may part thousands', () => {
    const rows = [
      ['2026-11-13 10:00', '1,234'],
      ['2026-11-13 10:01', '1,235'],
    ];
    expect(propose(['time', 'TI-1'], rows, ';')).toMatchObject({
      doubts: ['decimal'],
      proposed: { decimal: ',' },
    });
    expect(propose(['time', 'TI-1'], [...rows, ['2026-11-13 10:02', '0,5']], ';').doubts).toEqual([]);
  });

  it('has no column of times where the file has none', () => {
    expect(propose(['date', 'TI-1'], [['2026-11-13', '1.5']]).proposed.timeColumn).toBeNull();
  });
});

it('a unit in brackets is parted from the name', () => {
  expect(splitUnit('TI-1 [°C]')).toEqual({ name: 'TI-1', unit: '°C' });
  expect(splitUnit('Feed (t/h)')).toEqual({ name: 'Feed', unit: 't/h' });
  expect(splitUnit('(odd)')).toEqual({ name: '(odd)', unit: '' });
});

describe('a reader of times', () => {
  const read = historyTimeReader({ dateOrder: 'iso', zone, latestMs });

  // Clock changes of the IANA zone database for Europe/Copenhagen: 29 March and 25 October 2026.
  it('refuses the hour that spring skips and the one that autumn repeats, and no other', () => {
    const codes = new Map<string, number>();
    for (let ms = Date.UTC(2026, 0, 1); ms < Date.UTC(2026, 11, 1); ms += 15 * 60_000) {
      const local = new Date(ms).toISOString().slice(0, 16);
      const found = read(local);
      if (typeof found !== 'number')
        codes.set(`${local.slice(0, 13)} ${found}`, (codes.get(`${local.slice(0, 13)} ${found}`) ?? 0) + 1);
    }
    expect([...codes]).toEqual([
      ['2026-03-29T02 hour-skipped', 4],
      ['2026-10-25T02 hour-twice', 4],
    ]);
  });

  it('says why there is no instant', () => {
    expect(read('')).toBe('time-missing');
    expect(read('noon')).toBe('time-unreadable');
    expect(read('2026-11-13')).toBe('time-without-clock');
    expect(read('2026-02-30 10:00')).toBe('no-such-time');
    expect(read('1969-12-31 10:00')).toBe('before-1970');
    expect(read('2026-12-01 01:00:00.001')).toBe('in-the-future');
    expect(read('2026-12-01 01:00')).toBe(latestMs);
  });
});
