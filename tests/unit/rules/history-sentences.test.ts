import { describe, expect, it } from 'vitest';
import { historyRefusalCode } from '../../../shared/contracts/history.ts';
import {
  explainHistoryOutcome,
  sayHistoryOutcome,
  sayHistoryRefusal,
} from '../../../shared/rules/history-sentences.ts';

const counts = { added: 0, unchanged: 0, replaced: 0, keptDifferent: 0, refused: 0 };

describe('what became of a file', () => {
  it('is said with every figure that is not zero', () => {
    expect(sayHistoryOutcome({ ...counts, added: 330_597, refused: 12 })).toBe(
      '330,597 readings added, 12 refused.',
    );
    expect(sayHistoryOutcome({ ...counts, added: 1, replaced: 2, unchanged: 3, keptDifferent: 4 })).toBe(
      '1 reading added, 2 replaced, 7 skipped.',
    );
  });

  it('is said to be nothing where nothing came of it', () => {
    expect(sayHistoryOutcome(counts)).toBe('This file holds no readings.');
    expect(sayHistoryOutcome({ ...counts, unchanged: 1200 })).toBe(
      'Nothing new: all 1,200 readings were stored already.',
    );
  });

  it('explains what was skipped and what was replaced', () => {
    expect(explainHistoryOutcome({ ...counts, added: 5, unchanged: 3, keptDifferent: 4 })).toBe(
      '3 skipped: stored already with the same value. 4 skipped: another value is stored for that instant, and it was kept.',
    );
    expect(explainHistoryOutcome({ ...counts, unchanged: 3 })).toBe('');
  });
});

describe('why something was refused', () => {
  it('is one or two whole sentences for every code, with what was found wherever that helps', () => {
    const saidOnce = new Set(
      historyRefusalCode.options.map((code) => sayHistoryRefusal({ code, found: 'x9' })),
    );
    expect(saidOnce.size).toBe(historyRefusalCode.options.length);
    for (const sentence of saidOnce) expect(sentence).toMatch(/^[A-Z“].*\.$/);
  });

  it('names the numbers of cells', () => {
    expect(sayHistoryRefusal({ code: 'cell-count', found: '5 of 3' })).toMatch(
      /5 cells under a header of 3. .*quotation marks/,
    );
    expect(sayHistoryRefusal({ code: 'cell-count', found: '1 of 3' })).toMatch(
      /1 cell under a header of 3: .*cut off/,
    );
  });
});
