import Papa from 'papaparse';
import { describe, expect, test } from 'vitest';
import { csvText } from '../../src/composables/use-csv-download.ts';

/** The text of one cell as written, before any spreadsheet reads it. */
function written(cell: string | number | null): string {
  return (Papa.parse<string[]>(csvText(['cell', 'end'], [[cell, 'x']])).data[1] ?? [])[0] ?? '';
}

// Cells that spreadsheets run as formulas: common practice, the list of the OWASP page on CSV injection (from memory).
describe('a cell of a CSV file', () => {
  test.each([
    '=1+1',
    '+cmd|x',
    '-2+3',
    '@SUM(A1)',
    '\t=1',
    '\r=1',
    '-',
    '=HYPERLINK("http://x")',
    '+1 d',
    '--1',
  ])('that a spreadsheet would run is made harmless: %j', (cell) => {
    expect(written(cell)).toBe(`'${cell}`);
  });

  test.each(['-15.3', '+9.8', '-1e-5', '+.5', '-3.'])(
    'that is a number in text stays as it is: %s',
    (cell) => {
      expect(written(cell)).toBe(cell);
    },
  );

  test('that is a number keeps every digit and its sign', () => {
    expect(written(-15.3)).toBe('-15.3');
    expect(written(0.1 + 0.2)).toBe('0.30000000000000004');
  });

  test('that shows a true minus sign is no formula', () => {
    expect(written('−15.3 °C')).toBe('−15.3 °C');
  });

  test('without a value is empty', () => {
    expect(written(null)).toBe('');
  });
});

test('a CSV file quotes commas, quotes and line breaks and ends lines as RFC 4180 wants', () => {
  expect(csvText(['a,b', 'c'], [['say "x"', 'two\nlines']])).toBe('"a,b",c\r\n"say ""x""","two\nlines"');
});

test('headers too are made harmless', () => {
  expect(csvText(['=x'], [])).toBe(`"'=x"`);
});
