import { describe, expect, it } from 'vitest';
import { mergeMends, partsToMend } from '../../../shared/rules/row-mend.ts';

describe('what a refused row asks to be written anew', () => {
  it('is the part that each reason speaks of, once', () => {
    expect(
      partsToMend([
        { code: 'text-value', figures: { written: 'abc' } },
        { code: 'no-unit', figures: { expected: '°C' } },
        { code: 'no-value', figures: { written: '' } },
      ]),
    ).toEqual(['value', 'unit']);
  });

  it('tells the time of taking from that of reporting', () => {
    expect(partsToMend([{ code: 'double-hour', figures: { column: 'taken' } }])).toEqual(['takenAt']);
    expect(partsToMend([{ code: 'ahead', figures: { column: 'reported' } }])).toEqual(['reportedAt']);
  });

  it('is nothing where only leaving the row out helps', () => {
    expect(partsToMend([{ code: 'ragged', figures: { expected: 4, found: 2 } }])).toEqual([]);
  });
});

describe('mends given one after the other', () => {
  it('keep those of other lines, replace those of the same line, and are taken back by an empty one', () => {
    const before = { '4': { value: '1' }, '5': { unit: '°C' } };
    expect(mergeMends(before, { '4': { takenAt: '2026-11-29 06:00' }, '6': { leaveOut: true } })).toEqual({
      '4': { takenAt: '2026-11-29 06:00' },
      '5': { unit: '°C' },
      '6': { leaveOut: true },
    });
    expect(mergeMends(before, { '4': {} })).toEqual({ '5': { unit: '°C' } });
  });
});
