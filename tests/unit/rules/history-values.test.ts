import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  absentWords,
  isAbsent,
  readNumber,
  readQuality,
  whyNoNumber,
} from '../../../shared/rules/history-values.ts';

describe('numbers in cells', () => {
  it('come back as they were written, with either decimal sign', () => {
    fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), (given) => {
        // A zero carries no sign in text.
        const value = given === 0 ? 0 : given;
        const text = String(value);
        expect(readNumber(text, '.')).toBe(value);
        expect(readNumber(text.replace('.', ','), ',')).toBe(value);
      }),
    );
  });

  // Common practice of spreadsheets and control systems, no source.
  it.each([
    ['1,234.5', '.', 1234.5],
    ['1.234,5', ',', 1234.5],
    ['1.234.567', ',', 1234567],
    ['1\u00a0234,5', ',', 1234.5],
    ['1’234.5', '.', 1234.5],
    ['−12.5', '.', -12.5],
    [' +3.5e-2 ', '.', 0.035],
    ['.5', '.', 0.5],
    ['5.', '.', 5],
  ] as const)('%s with decimal sign %s is %d', (text, decimal, value) => {
    expect(readNumber(text, decimal)).toBe(value);
  });

  it.each([
    ['0x10', '.'],
    ['1 2', '.'],
    ['1,23,456', '.'],
    ['1,2345', '.'],
    ['1.5', ','],
    ['<0.05', '.'],
    ['1e', '.'],
    ['--5', '.'],
    ['', '.'],
  ] as const)('%s with decimal sign %s is no number', (text, decimal) => {
    expect(readNumber(text, decimal)).toBeNaN();
  });

  it('beyond doubles and words for infinity are infinite, not numbers to store', () => {
    expect(readNumber('1e999', '.')).toBe(Infinity);
    expect(readNumber('-inf', '.')).toBe(-Infinity);
    expect(readNumber('9'.repeat(400), '.')).toBe(Infinity);
    expect(whyNoNumber('1e999', '.')).toBe('not-finite');
    expect(whyNoNumber('1,5', '.')).toBe('decimal-sign');
    expect(whyNoNumber('abc', '.')).toBe('not-a-number');
  });

  // RFC 4180 reference set of the project, item "not-a-number words" (recommendations, not part of the RFC).
  it('and words for no reading are told apart as the reference set has them', () => {
    for (const word of ['NaN', 'Bad', '#N/A', '-']) expect(isAbsent(word)).toBe(true);
    for (const word of ['<0.05', '1e-3', '1E+3', '0x10', '0']) expect(isAbsent(word)).toBe(false);
    expect([readNumber('1e-3', '.'), readNumber('1E+3', '.')]).toEqual([0.001, 1000]);
    for (const word of absentWords) expect(isAbsent(` ${word.toUpperCase()} `)).toBe(true);
  });
});

describe('qualities', () => {
  // OPC Data Access 3.00, section 6.8: the two upper bits of a byte; words of OPC UA Part 8. Values from memory.
  it.each([
    ['Good', 0],
    ['uncertain', 1],
    ['BAD', 2],
    ['Bad: sensor failure', 2],
    ['', 0],
    ['192', 0],
    ['216', 0],
    ['64', 1],
    ['0', 2],
    ['24', 2],
    ['128', null],
    ['300', null],
    ['meh', null],
  ])('%s is %s', (text, quality) => {
    expect(readQuality(text)).toBe(quality);
  });
});

it('no file of the rules reads the clock of the machine', () => {
  const files = [
    'history-values',
    'history-times',
    'history-evidence',
    'history-proposal',
    'history-sentences',
  ];
  for (const file of files)
    expect(readFileSync(`shared/rules/${file}.ts`, 'utf8')).not.toMatch(/Date\.now|new Date\(\)/);
});
