import { describe, expect, it } from 'vitest';
import { readTypedList, readTypedNumber, readTypedResult } from '../../../shared/rules/typed-result.ts';

const valueOf = (text: string) => {
  const read = readTypedResult(text);
  return read.ok ? read.value : read.message;
};

describe('a result typed by hand', () => {
  it.each([
    ['1482,5', 1482.5],
    ['1482.5', 1482.5],
    ['1.482,5', 1482.5],
    ['1,482.5', 1482.5],
    ['1 482,5', 1482.5],
    ['1\u00a0482.5', 1482.5],
    ['1’482.5', 1482.5],
    ['−3,2', -3.2],
    ['-3.2', -3.2],
    ['1.482', 1.482],
    ['0,125', 0.125],
    ['1.2e-3', 0.0012],
    ['  7 ', 7],
  ])('%s is %d', (text, value) => {
    expect(valueOf(text)).toBe(value);
  });

  it('with a lone comma before three digits is asked back, never guessed', () => {
    expect(valueOf('1,482')).toBe('Write 1.482 or 1482: a comma before three digits can mean either.');
  });

  it('that is none says so', () => {
    expect(valueOf('')).toBe('Write a number, such as 12.5 or 12,5.');
    expect(valueOf('pend')).toBe('Write a number, such as 12.5 or 12,5.');
    expect(valueOf('about 5')).toBe('“about 5” is no number. One looks like 12.5 or 12,5.');
    expect(valueOf('1,2,3')).toMatch(/is no number/);
  });

  it('may be a limit, where a limit is a result', () => {
    expect(readTypedResult('< 0,05')).toEqual({ ok: true, value: 0.05, qualifier: '<' });
    expect(readTypedResult('≥1200')).toEqual({ ok: true, value: 1200, qualifier: '>' });
    expect(readTypedNumber('<5')).toEqual({ ok: false, message: 'Write a number without < or >.' });
  });
});

describe('results typed one to a line or between semicolons', () => {
  it('are read in their order', () => {
    expect(readTypedList('5,41; 5,38\n\n5.40')).toEqual({ ok: true, values: [5.41, 5.38, 5.4] });
  });

  it('on one line, parted by blanks alone, are asked back: they might be one', () => {
    const message = 'Write each result on a line of its own, or part them with semicolons.';
    expect(readTypedList('5,41 5,38')).toEqual({ ok: false, message });
    expect(readTypedList('148 490')).toEqual({ ok: false, message });
    expect(readTypedList('5 −3')).toEqual({ ok: false, message });
  });

  it('say which is no number, how many are too many, and that none is none', () => {
    expect(readTypedList('5; x')).toMatchObject({ ok: false, message: expect.stringContaining('“x”') });
    expect(readTypedList(' ;\n')).toEqual({ ok: false, message: 'Write at least one result.' });
    expect(readTypedList(Array.from({ length: 51 }, () => '1').join('\n'))).toEqual({
      ok: false,
      message: 'One series holds 50 results at most; these are 51.',
    });
  });
});
