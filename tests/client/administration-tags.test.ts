import { describe, expect, it } from 'vitest';
import { readPeriod } from '../../src/components/administration/removal-period.ts';
import { readTagList } from '../../src/components/administration/tag-list.ts';
import { figureWords, rangeWords } from '../../src/components/administration/tag-words.ts';

const none = new Set<string>();
const read = (text: string, decimalComma = false, known: ReadonlySet<string> = none) =>
  readTagList(text, decimalComma, known);

describe('a list of tags', () => {
  it('is read as a spreadsheet copies it', () => {
    expect(read('TI-1401\tShell temperature\t°C\t0\t600\nFI-1402\tFuel flow\tt/h\n')).toEqual([
      {
        line: 1,
        name: 'TI-1401',
        problems: [],
        tag: { name: 'TI-1401', description: 'Shell temperature', unit: '°C', rangeLow: 0, rangeHigh: 600 },
      },
      {
        line: 2,
        name: 'FI-1402',
        problems: [],
        tag: { name: 'FI-1402', description: 'Fuel flow', unit: 't/h', rangeLow: null, rangeHigh: null },
      },
    ]);
  });

  it('may be names alone, CSV with quotes, or semicolons', () => {
    expect(read('TI-1\nTI-2').map(({ name }) => name)).toEqual(['TI-1', 'TI-2']);
    expect(read('TI-1,"Shell, north",°C')[0]!.tag.description).toBe('Shell, north');
    expect(read('TI-1;Shell, north;°C;0;1')[0]!.tag).toMatchObject({
      description: 'Shell, north',
      rangeHigh: 1,
    });
  });

  it('passes over a line of headings and blank lines, and counts lines as they were pasted', () => {
    const rows = read('\ufeffTag\tDescription\r\n\r\nTI-1\tShell\r\n\t\r\nTI-2\r\n');
    expect(rows.map(({ line, name }) => [line, name])).toEqual([
      [3, 'TI-1'],
      [5, 'TI-2'],
    ]);
  });

  it('takes a decimal comma only where the person says so', () => {
    const text = 'PI-1\tPressure\tbar\t0,5\t1.000,5';
    expect(read(text)[0]!.problems[0]).toBe('Range from: 0,5 has a comma. Choose the decimal comma above.');
    expect(read(text, true)[0]).toMatchObject({ problems: [], tag: { rangeLow: 0.5, rangeHigh: 1000.5 } });
  });

  it('says of each line what can’t be used', () => {
    const text = [
      'TI-1\t\t°C\t5\t5',
      'ti-2\tknown',
      'TI-3',
      'ti-3\tagain',
      '\tno name',
      'x'.repeat(61),
      'TI-4\t\t°C\tlow\t9',
      'TI-5\t\t°C\t0\t9\tmore',
    ].join('\n');
    expect(read(text, false, new Set(['ti-2'])).map(({ line, problems }) => [line, ...problems])).toEqual([
      [1, 'The upper end of the range must be above the lower.'],
      [2, 'There is a tag ti-2 at this site already.'],
      [3],
      [4, 'Stands in line 3 already.'],
      [5, 'Write the tag’s name.'],
      [6, 'Keep the tag’s name under 60 characters.'],
      [7, 'Range from: “low” is no number. One looks like 12.5.'],
      [8, 'Has more than 5 columns; “more” has no place.'],
    ]);
  });
});

describe('a period to remove', () => {
  const copenhagen = (from: string, to: string) => readPeriod({ from, to }, 'Europe/Copenhagen');

  it('is read on the clock of the site', () => {
    expect(copenhagen('29 Nov 2026 14:00', '29.11.2026 18:00')).toEqual({
      ok: true,
      from: '2026-11-29T13:00:00.000Z',
      to: '2026-11-29T17:00:00.000Z',
    });
  });

  it('must not end before it begins', () => {
    expect(copenhagen('29 Nov 2026 14:00', '29 Nov 2026 13:59')).toEqual({
      ok: false,
      errors: { to: 'The end must not be before the beginning.' },
    });
  });

  // Clock changes of 2026 in the European Union: 29 March and 25 October (tz database).
  it('names the way out of an hour that the clocks skip or show twice', () => {
    const wrong = copenhagen('29 Mar 2026 02:30', '25 Oct 2026 02:30');
    expect(wrong).toEqual({
      ok: false,
      errors: {
        from: 'The clocks skip this time. Write 29 Mar 2026 03:30 instead.',
        to: 'The clocks show this time twice. Write 25 Oct 2026 02:30+02:00 or 25 Oct 2026 02:30+01:00.',
      },
    });
    const right = copenhagen('29 Mar 2026 03:30', '25 Oct 2026 02:30+01:00');
    expect(right).toMatchObject({
      ok: true,
      from: '2026-03-29T01:30:00.000Z',
      to: '2026-10-25T01:30:00.000Z',
    });
  });

  it.each([
    ['', 'Write it as day, month, year and time: 29 Nov 2026 14:00.'],
    ['29 Nov 2026', 'Write the time of day too, such as 29 Nov 2026 14:00.'],
    ['31 Nov 2026 14:00', 'There is no such day.'],
    ['29 Nov 2026 25:00', 'There is no such time of day.'],
  ])('says what is wrong with “%s”', (text, says) => {
    expect(copenhagen(text, '1 Jan 2030 00:00')).toEqual({ ok: false, errors: { from: says } });
  });
});

describe('figures whose decimals nobody stated', () => {
  it.each([
    [299.83123, '299.8'],
    [9.850632, '9.851'],
    [1506.49, '1,506'],
    [0.00012347, '0.0001235'],
    [-15, '−15'],
    [0, '0'],
    [null, '–'],
  ])('%s reads %s', (value, words) => {
    expect(figureWords(value)).toBe(words);
  });

  it('give a range in words', () => {
    expect(rangeWords({ rangeLow: 0, rangeHigh: 600 })).toBe('0 to 600');
    expect(rangeWords({ rangeLow: -0.5, rangeHigh: null })).toBe('above −0.5');
    expect(rangeWords({ rangeLow: null, rangeHigh: 12 })).toBe('below 12');
    expect(rangeWords({ rangeLow: null, rangeHigh: null })).toBe('–');
  });
});
