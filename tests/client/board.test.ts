import { describe, expect, test } from 'vitest';
import type { BoardRow } from '../../shared/contracts/board.ts';
import { filterWords, narrowRows, rowsForPaper } from '../../src/components/board/board-filter.ts';
import { biasFinding, rowFinding, twelveMonths, usedFor } from '../../src/components/board/board-words.ts';
import { stripErrors } from '../../src/components/board/strip-errors.ts';

const row: BoardRow = {
  softSensorId: 1,
  siteId: 1,
  siteName: 'Tarnby Works',
  unitName: 'Melting furnace 1',
  tagName: 'TY-1402',
  name: 'Crown interior temperature',
  unit: '°C',
  decimals: 0,
  importanceClass: 'A',
  consumers: [
    { kind: 'display', name: 'control room' },
    { kind: 'closed-loop', name: 'furnace pressure loop' },
  ],
  health: 'unfit',
  reasons: [
    {
      code: 'bias-beyond-allowed',
      health: 'unfit',
      figures: { bias: 15.3, low: 12.25, high: 18.35, n: 12, allowed: 10 },
    },
  ],
  bias: 15.3,
  biasLow: 12.25,
  biasHigh: 18.35,
  counted: 12,
  allowedError: 10,
  lastErrors: [],
  lastReferenceAt: '2026-11-29T06:00:00.000Z',
  owner: 'Marco Castellane',
  healthBefore: 'watch',
  healthSince: '2026-11-27T06:00:00.000Z',
  stoppedSince: null,
  recalibratedAt: null,
  referencesSince: 12,
  confirmable: false,
  duty: { kind: 'recalibration', dueOn: '2026-11-22' },
};

describe('a row of the board', () => {
  test('says the bias in words, half its interval and the allowed error', () => {
    expect(biasFinding(row)).toEqual({ strong: '15.3\u00a0°C high', rest: '(±\u00a03.1), allowed\u00a010' });
    expect(biasFinding({ ...row, bias: -6, biasLow: -7.6, biasHigh: -4.4 })).toEqual({
      strong: '6.0\u00a0°C low',
      rest: '(±\u00a01.6), allowed\u00a010',
    });
  });

  test('says neither high nor low where the bias rounds to nothing', () => {
    expect(biasFinding({ ...row, bias: -0.04, biasLow: -1, biasHigh: 1 })!.strong).toBe(
      'neither high nor low',
    );
  });

  test('puts what is missing before a bias that proves nothing any more', () => {
    const overdue: BoardRow = {
      ...row,
      health: 'unproven',
      reasons: [
        {
          code: 'reference-overdue',
          health: 'unproven',
          figures: { ageMs: 46 * 86_400_000, promisedMs: 7 * 86_400_000 },
        },
      ],
    };
    expect(rowFinding(overdue)).toEqual({
      strong: 'no reference for 46 days',
      rest: '(promised every 7 days)',
    });
  });

  test('keeps the bias beside a reason that speaks of something else', () => {
    const spread: BoardRow = {
      ...row,
      health: 'watch',
      reasons: [
        { code: 'spread-beyond-allowed', health: 'watch', figures: { spread: 22, allowedSpread: 12, n: 30 } },
      ],
    };
    const finding = rowFinding(spread);
    expect(finding.strong).toBe('15.3\u00a0°C high');
    expect(finding.rest).toContain('Single errors spread ±\u00a022.0\u00a0°C');
  });

  test('names the weightiest use first and counts the others', () => {
    expect(usedFor(row)).toBe('closed loop + 1 (A)');
    expect(usedFor({ ...row, consumers: [], importanceClass: 'C' })).toBe('no consumer named (C)');
  });

  test('draws errors as multiples of the allowed error at their own value', () => {
    const at = '2026-11-29T06:00:00.000Z';
    const lastErrors = [
      { at, error: 12, allowed: 10 },
      { at, error: -3, allowed: 12 },
    ];
    expect(stripErrors({ lastErrors, recalibratedAt: null })).toEqual([{ ratio: 1.2 }, { ratio: -0.25 }]);
  });

  test('leaves a gap between the last error before a recalibration and the first after it', () => {
    const on = (day: number) => `2026-11-0${day}T06:00:00.000Z`;
    const lastErrors = [1, 2, 3, 4].map((day) => ({ at: on(day), error: day, allowed: 10 }));
    const gaps = (recalibratedAt: string) =>
      stripErrors({ lastErrors, recalibratedAt }).map(({ recalibratedBefore = false }) => recalibratedBefore);
    expect(gaps('2026-11-02T18:00:00.000Z')).toEqual([false, false, true, false]);
    expect(gaps('2026-10-02T18:00:00.000Z')).toEqual([false, false, false, false]);
  });
});

describe('what a list is narrowed to', () => {
  const loop = row;
  const screen: BoardRow = { ...row, importanceClass: 'B', consumers: [{ kind: 'display', name: 'hall' }] };
  const none = { find: '', importance: '', use: '' };

  test('is a class and a kind of consumer, any of several that a soft sensor has', () => {
    expect(narrowRows([loop, screen], none)).toHaveLength(2);
    expect(narrowRows([loop, screen], { ...none, use: 'display' })).toHaveLength(2);
    expect(narrowRows([loop, screen], { ...none, use: 'closed-loop' })).toEqual([loop]);
    expect(narrowRows([loop, screen], { ...none, importance: 'B' })).toEqual([screen]);
  });

  test('is typed words too on paper, and is said there', () => {
    const other: BoardRow = { ...screen, tagName: 'AY-2207', unitName: 'Lime kiln' };
    expect(rowsForPaper([loop, other], { ...none, find: 'kiln' })).toEqual([other]);
    expect(filterWords({ find: 'kiln', importance: 'B', use: 'display' })).toBe('class B, display, “kiln”');
    expect(filterWords(none)).toBe('');
  });
});

describe('unfit and unproven by month', () => {
  test('are twelve months up to now, so that sites stand above each other', () => {
    const months = twelveMonths([{ month: '2026-11', unfit: 2, unproven: 1 }], '2026-12-01T06:00:00.000Z');
    expect(months).toHaveLength(12);
    expect(months[0]).toEqual({ month: '2026-01', unfit: 0, unproven: 0 });
    expect(months.at(-2)).toEqual({ month: '2026-11', unfit: 2, unproven: 1 });
    expect(months.at(-1)!.month).toBe('2026-12');
  });

  test('go back over the turn of the year', () => {
    expect(twelveMonths([], '2027-02-03T00:00:00.000Z').map(({ month }) => month)[0]).toBe('2026-03');
  });
});
