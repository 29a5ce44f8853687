import { describe, expect, it } from 'vitest';
import { nextNumber, numberStem } from '../../../shared/rules/sample-label.ts';

describe('the number of a sample', () => {
  it('begins with its point and the day on the clock of the site', () => {
    const late = Date.UTC(2026, 11, 1, 23, 30);
    expect(numberStem('KX-09', late, 'UTC')).toBe('KX-09-1201-');
    expect(numberStem('KX-09', late, 'Europe/Copenhagen')).toBe('KX-09-1202-');
  });

  it('is the first that no other bears, and is taken from then on', () => {
    const known = new Set(['KX-09-1201-1', 'KX-09-1201-3']);
    const numbers = Array.from({ length: 3 }, () => nextNumber('KX-09-1201-', known));
    expect(numbers).toEqual(['KX-09-1201-2', 'KX-09-1201-4', 'KX-09-1201-5']);
  });

  it('stays within 80 characters at a point with a long name', () => {
    expect(numberStem('x'.repeat(80), 0, 'UTC').length).toBeLessThan(75);
  });
});
