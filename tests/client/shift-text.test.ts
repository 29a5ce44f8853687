import { describe, expect, test } from 'vitest';
import { readShifts, shiftText } from '../../src/components/administration/shift-text.ts';
import { planWords } from '../../src/components/register/sheet-words.ts';

const three = [
  { name: 'Early', from: '06:00' },
  { name: 'Late', from: '14:00' },
  { name: 'Night', from: '22:00' },
];

describe('the shifts of a site as text', () => {
  test('are one to a line, and read back as they were', () => {
    expect(shiftText(three)).toBe('06:00 Early\n14:00 Late\n22:00 Night');
    expect(readShifts(shiftText(three))).toEqual({ shifts: three });
  });

  test('may be written in any order, with blank lines and a single digit', () => {
    expect(readShifts('\n22:00 Night\n 6:00  Early shift \n')).toEqual({
      shifts: [
        { name: 'Early shift', from: '06:00' },
        { name: 'Night', from: '22:00' },
      ],
    });
  });

  test('say which line names none', () => {
    for (const line of ['Early', '06.00 Early', '06:00', '24:00 Night', '12:75 Late']) {
      expect(readShifts(`06:00 Early\n${line}`)).toEqual({
        error: `“${line}” is no shift. One looks like 06:00 Early.`,
      });
    }
  });
});

test('a sampling plan is told in words', () => {
  expect(planWords({ count: 2, per: 'shift' })).toBe('2 a shift');
  expect(planWords(null)).toBe('not by plan');
});
