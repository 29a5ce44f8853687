import { describe, expect, it } from 'vitest';
import { biasWithInterval } from '../../../shared/numerics/bias.ts';
import { type CountedError, type HealthInput, biasWindow, healthOf } from '../../../shared/rules/health.ts';
import { randomFrom } from '../../../seeds/random.ts';

const hour = 3_600_000;
const day = 24 * hour;
const now = Date.UTC(2026, 11, 1);

function errorsOf(values: readonly number[], allowed = 10): CountedError[] {
  return values.map((error, i) => {
    const takenMs = now - (values.length - i) * 8 * hour;
    return { takenMs, reportedMs: takenMs + hour, reference: 1500 + 40 * Math.sin(i), error, allowed };
  });
}

function input(errors: readonly CountedError[], own: Partial<HealthInput> = {}): HealthInput {
  return {
    nowMs: now,
    errors,
    uncounted: { count: 0, of: errors.length },
    lastReferenceMs: errors.at(-1)?.takenMs ?? null,
    baseline: 'beginning',
    baselineMs: null,
    runningSinceMs: null,
    lastEstimateMs: now - 60_000,
    promisedReferenceMs: 2 * day,
    historyArrives: 'live',
    historyEveryMs: 60_000,
    residualSd: 3,
    allowedSpread: null,
    ...own,
  };
}

/** Errors of SD 3 about a mean that may change. */
function noisy(n: number, mean: (i: number) => number, seed = 7): number[] {
  const random = randomFrom(seed);
  return Array.from({ length: n }, (_, i) => mean(i) + 3 * random.normal());
}

describe('health', () => {
  it('is fit when the bias is inside the allowed error', () => {
    const judged = healthOf(input(errorsOf(noisy(60, () => 0.5))));
    expect(judged.health).toBe('fit');
    expect(judged.reasons[0]!.code).toBe('within-allowed');
  });

  it('is unfit when the whole bias interval lies beyond the allowed error', () => {
    const judged = healthOf(input(errorsOf(noisy(60, () => -15))));
    expect(judged.health).toBe('unfit');
    expect(judged.reasons[0]).toMatchObject({ code: 'bias-beyond-allowed' });
    expect(judged.reasons[0]!.figures.bias).toBeLessThan(-10);
  });

  it('is on watch when the interval reaches the allowed error and the bias is over half of it', () => {
    expect(healthOf(input(errorsOf(noisy(60, () => 9.5)))).health).toBe('watch');
  });

  it('is never good without news: no reference, an overdue one, few errors, no inputs', () => {
    const good = errorsOf(noisy(60, () => 0));
    const codes = (own: Partial<HealthInput>, errors = good) =>
      healthOf(input(errors, own)).reasons.map(({ code }) => code);
    expect(codes({ lastReferenceMs: null }, [])).toContain('no-reference');
    expect(codes({ lastReferenceMs: now - 3 * day })).toEqual(['reference-overdue']);
    expect(codes({}, good.slice(-7))).toContain('too-few-errors');
    expect(codes({ lastEstimateMs: now - 31 * 60_000 })).toEqual(['no-inputs']);
    expect(codes({ lastEstimateMs: null })).toEqual(['no-inputs']);
    for (const own of [{ lastReferenceMs: now - 3 * day }, { lastEstimateMs: null }]) {
      expect(healthOf(input(good, own)).health).toBe('unproven');
    }
  });

  it('judges an upload-only site by its own promise', () => {
    const good = errorsOf(noisy(60, () => 0));
    const weekly = { historyArrives: 'uploaded', historyEveryMs: 7 * day } as const;
    expect(healthOf(input(good, { ...weekly, lastEstimateMs: now - 8 * day })).health).toBe('fit');
    expect(healthOf(input(good, { ...weekly, lastEstimateMs: now - 11 * day })).health).toBe('unproven');
  });

  it('puts unfit before unproven before watch, and keeps every reason', () => {
    const judged = healthOf(input(errorsOf(noisy(60, () => 15)), { lastReferenceMs: now - 3 * day }));
    expect(judged.reasons.map(({ health }) => health)).toEqual(['unfit', 'unproven']);
  });

  it('waits for a second sample before a reason enters, and for nine before it leaves', () => {
    const lax = { allowedSpread: 1000 };
    const healthAfter = (values: readonly number[]) => healthOf(input(errorsOf(values), lax)).health;
    const A = 10;
    const foundIn = (values: readonly number[]) => {
      const found = biasWithInterval(values.slice(-biasWindow));
      if (!found.ok) throw new Error(found.reason);
      const reaches = (found.high > A || found.low < -A) && Math.abs(found.bias) > A / 2;
      return reaches || found.low > A || found.high < -A;
    };
    const steady = noisy(40, () => 0, 3);
    const high = noisy(40, () => 11, 4);
    const entering = high.map((_, i) => [...steady, ...high.slice(0, i + 1)]);
    const pairFound = entering.findIndex(
      (values, i) => i > 0 && foundIn(values) && foundIn(entering[i - 1]!),
    );
    expect(pairFound).toBeGreaterThan(1);
    expect(entering.findIndex((values) => healthAfter(values) !== 'fit')).toBe(pairFound);
    const low = noisy(60, () => 0, 5);
    const leaving = low.map((_, i) => [...high, ...low.slice(0, i + 1)]);
    const lastFound = leaving.findLastIndex(foundIn);
    expect(leaving.findIndex((values) => healthAfter(values) === 'fit')).toBe(lastFound + 9);
  });

  it('changes health seldom on a healthy sensor', () => {
    const values = noisy(1095, (i) => 0.3 * Math.sin(i / 50), 21);
    let changes = 0;
    let last = '';
    for (let i = 40; i < values.length; i += 12) {
      const { health } = healthOf(input(errorsOf(values.slice(Math.max(0, i - 150), i), 6)));
      if (last && health !== last) changes++;
      last = health;
    }
    expect(changes).toBeLessThanOrEqual(4);
  });

  it('calls nothing fit while more than three in ten samples do not count', () => {
    const good = errorsOf(noisy(60, () => 0));
    expect(healthOf(input(good, { uncounted: { count: 10, of: 30 } })).health).toBe('watch');
    expect(healthOf(input(good, { uncounted: { count: 9, of: 30 } })).health).toBe('fit');
  });
});
