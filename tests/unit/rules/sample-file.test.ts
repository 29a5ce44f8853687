import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { decodeFile } from '../../../shared/rules/sample-text.ts';
import { detectDelimiter, headOf, readTable } from '../../../shared/rules/sample-table.ts';
import { createValueReader, detectDecimal } from '../../../shared/rules/sample-number.ts';

const utf8 = (text: string) => new TextEncoder().encode(text);
const bytes = (...values: number[]) => Uint8Array.from(values);
const utf16 = (text: string, mark: boolean) => {
  const units = [...(mark ? '\ufeff' : ''), ...text].map((letter) => letter.charCodeAt(0));
  return Uint8Array.from(units.flatMap((unit) => [unit & 0xff, unit >> 8]));
};
const rowsOf = (text: string, delimiter: Parameters<typeof readTable>[1] = ',') => {
  const table = readTable(text, delimiter);
  if (!table.ok) throw new Error(table.problem.code);
  return table.rows;
};

describe('decoding', () => {
  it('takes UTF-8 with and without a byte order mark, UTF-16 with and without one, and windows-1252', () => {
    const text = 'Probe;Wert °C\nA;µ1\n';
    expect(decodeFile(utf8(text))).toEqual({ ok: true, text, encoding: 'utf-8' });
    expect(decodeFile(utf8(`\ufeff${text}`))).toEqual({ ok: true, text, encoding: 'utf-8' });
    expect(decodeFile(utf16(text, true))).toEqual({ ok: true, text, encoding: 'utf-16le' });
    expect(decodeFile(utf16(text, false))).toEqual({ ok: true, text, encoding: 'utf-16le' });
    const latin = Uint8Array.from([...text].map((letter) => letter.charCodeAt(0)));
    expect(decodeFile(latin)).toEqual({ ok: true, text, encoding: 'windows-1252' });
  });

  it('takes the signs that windows-1252 alone has', () => {
    // Source: WHATWG Encoding Standard, index windows-1252.
    const read = decodeFile(bytes(0x50, 0x80, 0x89, 0x91, 0x96, 0xb0, 0x43));
    expect(read).toEqual({ ok: true, text: 'P€‰‘–°C', encoding: 'windows-1252' });
  });

  it.each([
    ['nothing', bytes(), 'empty'],
    ['blanks', utf8(' \n\t\n'), 'empty'],
    ['a workbook', bytes(0x50, 0x4b, 3, 4, 20, 0), 'spreadsheet'],
    ['an old workbook', bytes(0xd0, 0xcf, 0x11, 0xe0, 0xa1), 'spreadsheet'],
    ['a PDF', utf8('%PDF-1.7'), 'document'],
    ['a web page', utf8('\ufeff\n<!DOCTYPE html><html>'), 'web-page'],
    ['bytes that are no text', bytes(65, 0, 1, 2, 200, 66), 'binary'],
  ])('refuses %s', (_name, content, code) => {
    expect(decodeFile(content)).toEqual({ ok: false, problem: { code } });
  });
});

describe('reading rows', () => {
  // Source: RFC 4180, section 2; its line ends are read alike, and a line break inside quotes comes as one character.
  it.each([
    [
      'two records with a final line break',
      'aaa,bbb,ccc\r\nzzz,yyy,xxx\r\n',
      [
        ['aaa', 'bbb', 'ccc'],
        ['zzz', 'yyy', 'xxx'],
      ],
    ],
    [
      'no final line break',
      'aaa,bbb,ccc\r\nzzz,yyy,xxx',
      [
        ['aaa', 'bbb', 'ccc'],
        ['zzz', 'yyy', 'xxx'],
      ],
    ],
    [
      'quoted fields',
      '"aaa","bbb","ccc"\r\nzzz,yyy,xxx',
      [
        ['aaa', 'bbb', 'ccc'],
        ['zzz', 'yyy', 'xxx'],
      ],
    ],
    [
      'a line break in a field',
      '"aaa","b\r\nbb","ccc"\r\nzzz,yyy,xxx',
      [
        ['aaa', 'b\nbb', 'ccc'],
        ['zzz', 'yyy', 'xxx'],
      ],
    ],
    ['an escaped quote', '"aaa","b""bb","ccc"', [['aaa', 'b"bb', 'ccc']]],
    ['a comma in a field', '"a,a",b', [['a,a', 'b']]],
    ['spaces kept', ' aaa , bbb', [[' aaa ', ' bbb']]],
    ['only quotes', '"","x"""', [['', 'x"']]],
    ['a trailing comma', 'a,b,\r\n', [['a', 'b', '']]],
  ])('%s', (_name, text, cells) => {
    expect(rowsOf(text).map((row) => row.cells)).toEqual(cells);
  });

  it('counts lines of the file, past blank lines and line breaks inside quotes', () => {
    const rows = rowsOf('a;b\r\n\r\n1;"x\r\ny\nz"\r\n2;w\r\n;;\r\n3;v', ';');
    expect(rows.map(({ line, cells }) => [line, cells[0]])).toEqual([
      [1, 'a'],
      [3, '1'],
      [6, '2'],
      [8, '3'],
    ]);
  });

  it('names the line of a quotation mark that never closes, or stands loose', () => {
    expect(readTable('a,b\n1,2\n"3,4\n5,6\n', ',')).toEqual({
      ok: false,
      problem: { code: 'open-quote', line: 3 },
    });
    expect(readTable('a,b\n"1" x,2\n3,4\n', ',')).toEqual({
      ok: false,
      problem: { code: 'stray-quote', line: 2 },
    });
  });

  it('finds the delimiter by rows that agree, not by counting signs', () => {
    expect(detectDelimiter('Probe;Taken;Value\nA;29.11.2026 06:00;1481,0\nB;29.11.2026 07:00;1480,2\n')).toBe(
      ';',
    );
    expect(detectDelimiter('a,b,c\n1,2,3\n')).toBe(',');
    expect(detectDelimiter('a\tb\n1,5\t2\n')).toBe('\t');
    expect(detectDelimiter('a|b\n1|2\n')).toBe('|');
    expect(detectDelimiter('just words\nin lines\n')).toBeNull();
  });

  it('takes whole lines for the head', () => {
    expect(headOf('a\nb\nc', 2)).toBe('a\nb\n');
    expect(headOf('a\nb', 5)).toBe('a\nb');
  });
});

describe('numbers under one decimal sign', () => {
  const point = createValueReader('.');
  const comma = createValueReader(',');

  it('reads the same text by the sign of the file, never by the cell', () => {
    expect(point('1,234')).toEqual({ kind: 'value', value: 1234 });
    expect(comma('1,234')).toEqual({ kind: 'value', value: 1.234 });
    expect(comma('1.234,5')).toEqual({ kind: 'value', value: 1234.5 });
    expect(point('1,23')).toEqual({ kind: 'text' });
    expect(comma('1.23')).toEqual({ kind: 'text' });
  });

  it('takes signs, exponents, no-break spaces and the Unicode minus', () => {
    expect(point('−4.5')).toEqual({ kind: 'value', value: -4.5 });
    expect(point('1e-3')).toEqual({ kind: 'value', value: 0.001 });
    expect(point('1E+3')).toEqual({ kind: 'value', value: 1000 });
    expect(comma('1\u00a0204,5')).toEqual({ kind: 'value', value: 1204.5 });
    expect(point('.5')).toEqual({ kind: 'value', value: 0.5 });
  });

  it('keeps a result beyond the range of the method as a limit', () => {
    expect(point('<0.05')).toEqual({ kind: 'censored', qualifier: '<', value: 0.05 });
    expect(comma('> 1200')).toEqual({ kind: 'censored', qualifier: '>', value: 1200 });
  });

  it.each(['', '-', 'N/A', '#N/A', 'pend', 'NaN', ' – '])('“%s” is missing, not zero', (cell) => {
    expect(point(cell)).toEqual({ kind: 'missing' });
  });

  it.each(['=1+1', '0x10', '1 234', '12 °C', '1e999', 'Bad', '12,34,567', '<', '--5'])(
    '“%s” is text',
    (cell) => {
      expect(point(cell)).toEqual({ kind: 'text' });
    },
  );

  it('is shown by a file as a whole, and left open by thousands alone', () => {
    expect(detectDecimal(['1,234', '2,500'])).toBeNull();
    expect(detectDecimal(['1,234', '2,5'])).toBe(',');
    expect(detectDecimal(['1.234', '0.125'])).toBe('.');
    expect(detectDecimal(['1.234,5'])).toBe(',');
    expect(detectDecimal(['1.234.567'])).toBe(',');
    expect(detectDecimal(['1,5', '1.5'])).toBeNull();
    expect(detectDecimal([...Array.from({ length: 9 }, () => '1,5'), '1.5'])).toBe(',');
    expect(detectDecimal(['7', '8', 'n/a', '<9'])).toBe('.');
    expect(detectDecimal(['<0,05', 'pend'])).toBe(',');
  });
});

const cell = fc
  .string({ unit: fc.constantFrom(...'aZ09 ,;|\t"\n.-<=°µ€'), maxLength: 8 })
  .filter((text) => text.trim() !== '');
const value = fc.double({ min: -1e6, max: 1e6, noNaN: true }).map((number) => number.toFixed(2));

it('gives back any table of samples, written with any delimiter, decimal sign and line end, quoted or not', () => {
  fc.assert(
    fc.property(
      fc.array(fc.tuple(cell, value, cell), { minLength: 1, maxLength: 20 }),
      fc.constantFrom(',' as const, ';' as const, '\t' as const, '|' as const),
      fc.constantFrom('.' as const, ',' as const),
      fc.constantFrom('\n', '\r\n', '\r'),
      fc.boolean(),
      (samples, delimiter, decimal, lineEnd, always) => {
        const quote = (text: string) =>
          always || /["\n\r]/.test(text) || text.includes(delimiter)
            ? `"${text.replaceAll('"', '""')}"`
            : text;
        const lines = samples.map(([number, result, remark]) => [
          number,
          result.replace('.', decimal),
          remark,
        ]);
        const text = lines.map((cells) => cells.map(quote).join(delimiter)).join(lineEnd);
        const rows = rowsOf(text, delimiter);
        expect(rows.map(({ cells }) => cells)).toEqual(lines);
        const read = createValueReader(decimal);
        expect(rows.map(({ cells }) => read(cells[1]!))).toEqual(
          samples.map(([, result]) => ({ kind: 'value', value: Number(result) })),
        );
        let line = 1;
        for (const [index, row] of rows.entries()) {
          expect(row.line).toBe(line);
          line += lines[index]!.join('').split('\n').length;
        }
      },
    ),
    { numRuns: 500 },
  );
});
