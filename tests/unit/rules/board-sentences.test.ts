import { describe, expect, it } from 'vitest';
import type { Board, BoardRow } from '../../../shared/contracts/board.ts';
import { changeWords, dutyWords, standingWords, whatChanged } from '../../../shared/rules/board-sentences.ts';

const now = '2026-12-01T06:00:00.000Z';
const counts: Board['counts'] = {
  total: 52,
  fit: 41,
  watch: 6,
  unfit: 3,
  unproven: 2,
  unfitInClosedLoop: 1,
  notInService: 0,
  stopped: 0,
  overdue: 0,
  unowned: 0,
};
const site = (months: Board['sites'][number]['months']) => ({
  siteId: 1,
  name: 'Tarnby Works',
  zone: 'Europe/Copenhagen',
  total: 52,
  months,
});

describe('better or worse than last month', () => {
  it('compares with the end of the month before, over all sites', () => {
    const sites = [
      site([
        { month: '2026-10', unfit: 9, unproven: 9 },
        { month: '2026-11', unfit: 1, unproven: 4 },
        { month: '2026-12', unfit: 3, unproven: 2 },
      ]),
      site([{ month: '2026-11', unfit: 1, unproven: 0 }]),
    ];
    expect(changeWords({ counts, sites }, now)).toBe(
      '1 more unfit, 2 fewer unproven since the end of November.',
    );
    expect(changeWords({ counts: { ...counts, unfit: 2, unproven: 4 }, sites }, now)).toBe(
      'As many unfit and unproven as at the end of November.',
    );
  });

  it('says nothing where nobody was judged then, over the turn of a year too', () => {
    expect(changeWords({ counts, sites: [site([])] }, now)).toBeNull();
    const sites = [site([{ month: '2025-12', unfit: 3, unproven: 3 }])];
    expect(changeWords({ counts, sites }, '2026-01-02T06:00:00.000Z')).toBe(
      '1 fewer unproven since the end of December.',
    );
  });
});

describe('what healths leave out', () => {
  it('is late duties, missing owners and stopped units', () => {
    expect(standingWords({ ...counts, overdue: 2, unowned: 1, stopped: 1 })).toBe(
      '2 recalibrations and reviews late, 1 soft sensor without an owner or deputy, 1 stopped with its unit.',
    );
    expect(standingWords(counts)).toBe('No recalibration or review is late, and everything has an owner.');
  });
});

describe('a row', () => {
  const row = {
    health: 'watch',
    healthBefore: 'fit',
    healthSince: '2026-11-28T09:00:00.000Z',
    recalibratedAt: '2026-11-20T09:00:00.000Z',
  } as BoardRow;

  it('says what changed since somebody last looked', () => {
    const say = (since: string) =>
      whatChanged(row, since, 'Europe/Copenhagen', now).replaceAll('\u00a0', ' ');
    expect(say('2026-11-27T00:00:00.000Z')).toBe('Watch since 28 Nov, was Fit');
    expect(say('2026-11-28T10:00:00.000Z')).toBe('Recalibrated 20 Nov');
  });

  it('counts days to its next duty by the calendar of the site', () => {
    const duty = { kind: 'recalibration' as const, dueOn: '2026-11-22' };
    expect(dutyWords(duty, '2026-12-01')).toEqual({ late: true, words: 'recalibration 9 d late' });
    expect(dutyWords(duty, '2026-11-22')).toEqual({ late: false, words: 'recalibration due today' });
    expect(dutyWords({ kind: 'review', dueOn: '2027-01-10' }, '2026-12-01').words).toBe('review in 40 d');
  });
});
