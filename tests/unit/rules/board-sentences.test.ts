import { describe, expect, it } from 'vitest';
import type { Board, BoardRow } from '../../../shared/contracts/board.ts';
import {
  boardHeadline,
  changeWords,
  countsWords,
  dutyWords,
  standingWords,
  whatChanged,
} from '../../../shared/rules/board-sentences.ts';

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
type Site = Board['sites'][number];
const site = (months: Site['months'], now: Partial<Site> = {}): Site => ({
  ...{ siteId: 1, name: 'Tarnby Works', zone: 'Europe/Copenhagen', months },
  ...{ total: 52, fit: 41, watch: 6, unfit: 3, unproven: 2, stopped: 0 },
  ...now,
});

describe('better or worse than last month', () => {
  const sites = [
    site([
      { month: '2026-10', unfit: 1, unproven: 4 },
      { month: '2026-11', unfit: 3, unproven: 2 },
      { month: '2026-12', unfit: 3, unproven: 2 },
    ]),
    site([{ month: '2026-10', unfit: 1, unproven: 0 }], { unfit: 0, unproven: 0 }),
  ];

  it('is over all sites that have a record of that month', () => {
    const young = site([{ month: '2026-12', unfit: 9, unproven: 9 }], { unfit: 9, unproven: 9 });
    expect(changeWords({ sites: [...sites, young] }, '2026-11-20T06:00:00.000Z')).toBe(
      '1 more unfit and 2 fewer unproven than at the end of October.',
    );
  });

  it('passes over a month that ended within the week: nothing can have changed since', () => {
    expect(changeWords({ sites }, now)).toContain('October');
    expect(changeWords({ sites }, '2026-12-07T23:00:00.000Z')).toContain('October');
    expect(changeWords({ sites }, '2026-12-08T06:00:00.000Z')).toBe(
      'As many unfit and unproven as at the end of November.',
    );
  });

  it('says nothing where nobody was judged then, over the turn of a year too', () => {
    expect(changeWords({ sites: [site([])] }, now)).toBeNull();
    const old = [site([{ month: '2025-12', unfit: 3, unproven: 3 }])];
    expect(changeWords({ sites: old }, '2026-01-12T06:00:00.000Z')).toBe(
      '1 fewer unproven than at the end of December.',
    );
  });
});

describe('counts in words', () => {
  it('leave out what there is none of', () => {
    expect(countsWords({ ...counts, stopped: 1, watch: 0 })).toBe('3 unfit, 2 unproven, 41 fit, 1 stopped');
    expect(countsWords({ total: 0, fit: 0, watch: 0, unfit: 0, unproven: 0, stopped: 0 })).toBe(
      'none in service',
    );
  });

  it('say how many of the unfit are in closed loop', () => {
    const head = (unfit: number, unfitInClosedLoop: number) =>
      boardHeadline({ ...counts, unfit, unfitInClosedLoop }).split('relied on')[1];
    expect([head(3, 0), head(3, 1), head(1, 1), head(2, 2), head(3, 3)]).toEqual([
      '.',
      ', 1 of them in closed loop.',
      '; it is in closed loop.',
      ', both in closed loop.',
      ', all in closed loop.',
    ]);
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
    expect(dutyWords(duty, '2026-12-01')).toEqual({ late: true, words: 'recalibration 9\u00a0d\u00a0late' });
    expect(dutyWords(duty, '2026-11-22')).toEqual({ late: false, words: 'recalibration due today' });
    expect(dutyWords({ kind: 'review', dueOn: '2027-01-10' }, '2026-12-01').words).toBe(
      'review in\u00a040\u00a0d',
    );
  });
});
