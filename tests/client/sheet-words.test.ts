import { afterEach, describe, expect, test } from 'vitest';
import type { AuditEntry } from '../../shared/contracts/audit.ts';
import type { HealthReason, Judgement, PairedError } from '../../shared/contracts/judging.ts';
import { exampleSheet } from '../../shared/contracts/register-examples.ts';
import type { Sheet } from '../../shared/contracts/register.ts';
import { changedInWords, deedOf } from '../../src/components/register/audit-words.ts';
import {
  currentWords,
  referenceWords,
  standingReasons,
  untilMended,
} from '../../src/components/register/current-words.ts';
import { countedPairs, errorPanel, estimatePanel } from '../../src/components/register/error-panels.ts';
import ExponentialWords from '../../src/components/register/ExponentialWords.vue';
import JudgementFigures from '../../src/components/register/JudgementFigures.vue';
import NotCounted from '../../src/components/register/NotCounted.vue';
import { sheetNames } from '../../src/components/register/sheet-names.ts';
import { allowedWords } from '../../src/components/register/sheet-words.ts';
import { mountPart } from './mount-part.ts';

afterEach(() => (document.body.innerHTML = ''));

const now = new Date('2026-12-01T06:00:00Z');
const status: NonNullable<Sheet['status']> = {
  health: 'unfit',
  reasons: [],
  healthSince: '2026-11-20T06:00:00.000Z',
  bias: 15.3,
  biasLow: 12.2,
  biasHigh: 18.3,
  rmse: 16,
  counted: 12,
  allowedError: 10,
  lastErrors: [],
  lastReferenceAt: '2026-11-29T13:00:00.000Z',
  lastReferenceValue: 1504.2,
  currentAt: '2026-12-01T05:59:00.000Z',
  currentValue: 1528.4,
  currentSd: 2.4,
  judgedAt: '2026-12-01T06:00:00.000Z',
  recalibratedAt: null,
  referencesSince: 12,
};
const sheet: Sheet = { ...exampleSheet, status };

describe('the top of a sheet', () => {
  test('says now, with the 95 % band and no false digits', () => {
    expect(currentWords(sheet, now)).toEqual({ lead: 'Now', value: '1,528\u00a0°C ± 5', age: '' });
    expect(referenceWords(sheet, now)).toBe('last reference 1 d ago');
  });

  test('never calls an old estimate now', () => {
    const old = { ...sheet, status: { ...status, currentAt: '2026-11-02T13:20:00.000Z' } };
    expect(currentWords(old, now)).toMatchObject({ lead: 'Last estimate', age: ', 2 Nov 14:20 (28 d ago)' });
  });

  test('says what to use until it is mended, with the last laboratory value', () => {
    expect(untilMended(sheet, now)).toBe(
      'use the laboratory value (laboratory value 1,504\u00a0°C, 29 Nov 14:00)',
    );
  });

  test('leaves out a bias on its way out beside one that stands', () => {
    const reason = (
      health: HealthReason['health'],
      code: HealthReason['code'],
      leaving?: number,
    ): HealthReason => ({
      code,
      health,
      figures: leaving ? { leaving } : {},
    });
    const standing = reason('unfit', 'bias-beyond-allowed');
    const leaving = reason('watch', 'bias-reaches-allowed', 1);
    expect(standingReasons([standing, leaving])).toEqual([standing]);
    expect(standingReasons([leaving])).toEqual([leaving]);
  });

  test('states the allowed error as its owner did', () => {
    const of = (allowedErrorAbsolute: number | null, allowedErrorPercent: number | null) =>
      allowedWords({ allowedErrorAbsolute, allowedErrorPercent, unit: '°C' });
    expect(of(10, null)).toBe('10\u00a0°C');
    expect(of(0.25, 2)).toBe('0.25\u00a0°C or 2\u00a0% of the value, whichever is larger');
  });
});

const pair = (hour: number, error: number | null, notCounted: string | null = null): PairedError => ({
  sampleId: hour,
  sampleNumber: `S${hour}`,
  takenAt: `2026-11-${String(hour).padStart(2, '0')}T06:00:00.000Z`,
  reportedAt: `2026-11-${String(hour).padStart(2, '0')}T08:00:00.000Z`,
  reference: 1500,
  estimate: error === null ? null : 1500 + error,
  estimateSd: 3,
  error,
  corrected: error,
  allowed: 10,
  notCounted,
  origin: 'recorded',
});
const judgement: Judgement = {
  bias: { ok: true, n: 3, bias: 4, low: -2, high: 10, sd: 2, rmse: 4.4, phi: 0, effectiveN: 3 },
  holdLast: { n: 2, rmse: 3, bias: 0 },
  exponential: { factor: 0.3, n: 3, rmse: 3.8, bias: -2.2 },
  ewma: {
    lambda: 0.2,
    width: 3,
    sd: 2,
    points: [
      { z: 0.4, lower: -1.2, upper: 1.2, signal: false },
      { z: 1, lower: -1.5, upper: 1.5, signal: false },
      { z: 1.9, lower: -1.5, upper: 1.5, signal: true },
    ],
  },
  coverage: { held: 2, of: 3 },
  notCounted: [{ code: 'held', count: 1 }],
};
const pictures = {
  series: { at: [1, 2], value: [1500, 1501], low: [1494, 1495], high: [1506, 1507] },
  errors: [pair(1, 2), pair(2, 25, 'held'), pair(3, 4), pair(4, 6)],
  judgement,
  reproducibility: 9,
  unit: '°C',
  decimals: 0,
};

describe('the pictures of an estimate', () => {
  test('draw every reference with the whisker of one result, R/√2', () => {
    const panel = estimatePanel(pictures);
    const references = panel.marks.find(({ kind }) => kind === 'references')!;
    expect(references).toMatchObject({ values: [1500, 1500, 1500, 1500] });
    // ISO 5725-6: R limits the difference of two results, so one stands for R/√2.
    expect((references as { halfWidth: number }).halfWidth).toBeCloseTo(6.364, 3);
    expect(panel.caption).toContain('it held 2 of the last 3 references');
  });

  test('say so where no band and no whisker can be drawn', () => {
    const none = {
      ...pictures,
      reproducibility: null,
      series: { ...pictures.series, low: [null, null], high: [null, null] },
    };
    const panel = estimatePanel(none);
    expect(panel.marks.map(({ kind }) => kind)).not.toContain('band');
    expect(panel.caption).toContain('there is no band');
    expect(panel.caption).toContain('no whisker');
  });

  test('put each point of the weighted mean at the sample that counted', () => {
    const { marks } = errorPanel(pictures);
    const counted = countedPairs(pictures.errors).map(({ takenAt }) => takenAt);
    expect(marks.find(({ label }) => label === 'Weighted mean')).toMatchObject({
      at: counted,
      values: [0.4, 1, 1.9],
    });
    expect(marks.find(({ kind }) => kind === 'signals')).toMatchObject({ at: [counted[2]], values: [1.9] });
  });

  test('shade the allowed error once, or in steps where it follows the value', () => {
    const allowed = (errors: PairedError[]) => errorPanel({ ...pictures, errors }).marks[0];
    expect(allowed(pictures.errors)).toMatchObject({ kind: 'allowed', low: -10, high: 10 });
    const steps = allowed([pair(1, 2), { ...pair(3, 4), allowed: 12 }, pair(4, 6)]);
    expect(steps).toMatchObject({ low: [-10, -12, -10], high: [10, 12, 10] });
  });
});

describe('how wrong it was, in words', () => {
  test('prints the sign rule, the interval and the share that the band held', () => {
    const part = mountPart(JudgementFigures, { props: { judgement, unit: '°C', decimals: 0 } });
    const text = part.text();
    expect(text).toContain('error = estimate − reference');
    expect(text).toContain('+4.0\u00a0°C');
    expect(text).toContain('95 % interval −2.0 to +10.0');
    expect(text).toContain('2 of 3');
    expect(text).toContain('better than the estimate');
  });

  test('says what an exponential update would have given, and refuses a factor above 1 beside it', async () => {
    const part = mountPart(ExponentialWords, {
      props: { exponential: judgement.exponential, unit: '°C', decimals: 0, start: '1 Nov' },
    });
    expect(part.text()).toContain('would have given RMSE 3.8\u00a0°C and bias −2.2\u00a0°C');
    expect(part.text()).toContain('corrections starting at zero on 1 Nov');
    const input = part.get('input');
    await input.setValue('1.4');
    await input.trigger('keydown', { key: 'Enter' });
    expect(part.get('[role=alert]').text()).toContain('at most 1');
    expect(part.emitted('factor')).toBeUndefined();
    await input.setValue('0.5');
    await input.trigger('keydown', { key: 'Enter' });
    expect(part.emitted('factor')).toEqual([[0.5]]);
  });

  test('names why samples do not count, with their share', () => {
    const part = mountPart(NotCounted, { props: { reasons: judgement.notCounted, of: 4 } });
    expect(part.text()).toContain('1 of 4 samples does not count (25 %)');
    expect(part.text()).toContain('held for a re-test');
  });
});

describe('a change of a data sheet', () => {
  const { fields } = exampleSheet;
  const entry: AuditEntry = {
    id: 1,
    at: '2026-11-30T10:00:00.000Z',
    siteId: 1,
    siteName: 'Tarnby Works',
    personName: 'Marco Castellane',
    fromAddress: '',
    action: 'change',
    entity: 'softSensor',
    entityId: '1',
    entityName: 'TY-1402',
    before: { ...fields },
    after: { ...fields, ownerId: 4, promisedReferenceMs: 86_400_000 },
    reason: '',
    requestId: '',
  };

  test('is told field by field, with names instead of numbers', () => {
    expect(changedInWords(entry, sheetNames(exampleSheet))).toEqual([
      { label: 'A reference at least every', before: '7 d', after: '1 d' },
      { label: 'Owner', before: 'Marco Castellane', after: 'Jun Brightwell' },
    ]);
  });

  test('says the deed: registered, suspended, approved', () => {
    expect(deedOf({ ...entry, action: 'add', before: null })).toBe('registered it');
    expect(deedOf({ ...entry, after: { life: 'suspended' } })).toBe('suspended it');
    const decided = {
      ...entry,
      action: 'decide',
      entityName: 'TY-1402, revision',
      after: { number: 4, decision: 'declined' },
    };
    expect(deedOf(decided)).toBe('declined revision 4');
  });
});
