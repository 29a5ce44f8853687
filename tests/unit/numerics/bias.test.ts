import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { biasWithInterval, effectiveCount, lag1Autocorrelation } from '../../../shared/numerics/bias.ts';
import { answered, expectRelative } from '../../reference/expectations.ts';

const errorsOf = (least: number) =>
  fc.array(fc.double({ min: -1e3, max: 1e3, noNaN: true }), { minLength: least, maxLength: 60 });

describe('bias with its interval', () => {
  it('independent errors with an r₁ of −½ keep φ at its floor and df below n − 1', () => {
    const judged = answered(biasWithInterval([1, -1, 1, -1, 1, -1, 1, -1]));
    // r₁ = −7/8: φ = (−7 + 9)/38.
    expectRelative(judged.phi, 2 / 38, 1e-12);
    expectRelative(judged.effectiveN, effectiveCount(8, 2 / 38), 1e-12);
    expect(judged.bias).toBe(0);
    expectRelative(judged.rmse, 1, 1e-12);
    expectRelative(judged.sd, Math.sqrt(8 / 7), 1e-12);
    expectRelative(judged.low, -judged.high, 1e-12);
  });

  it('moves with a shift and stretches with a change of unit', () => {
    fc.assert(
      fc.property(
        errorsOf(3),
        fc.double({ min: 0.01, max: 100, noNaN: true }),
        fc.integer({ min: -50, max: 50 }),
        (errors, unit, shift) => {
          const before = answered(biasWithInterval(errors));
          const after = answered(biasWithInterval(errors.map((error) => unit * error + shift)));
          const floor = 1e-8 * unit * (1 + Math.abs(shift) + 1e3);
          if (before.sd < 1e-6) return;
          expectRelative(after.bias, unit * before.bias + shift, 1e-9, floor);
          expectRelative(after.sd, unit * before.sd, 1e-6, floor);
          expectRelative(after.high - after.low, unit * (before.high - before.low), 1e-5, floor);
        },
      ),
    );
  });

  it('a positive autocorrelation widens the interval, higher confidence too', () => {
    const errors = Array.from({ length: 30 }, (_, i) => Math.sin(i / 4));
    const shuffled = Array.from({ length: 30 }, (_, i) => errors[(i * 7) % 30]!);
    const width = (values: number[], confidence = 0.95) => {
      const { low, high } = answered(biasWithInterval(values, { confidence }));
      return high - low;
    };
    expect(width(errors)).toBeGreaterThan(2 * width(shuffled));
    expect(width(errors, 0.99)).toBeGreaterThan(width(errors));
  });

  it('says how many errors are missing, and gives equal errors an interval without width', () => {
    expect(biasWithInterval([1, 2])).toEqual({
      ok: false,
      reason: 'not-enough-data',
      field: 'errors',
      needed: 3,
      got: 2,
    });
    expect(answered(biasWithInterval([2, 2, 2]))).toMatchObject({ bias: 2, low: 2, high: 2, sd: 0, rmse: 2 });
    expect(lag1Autocorrelation([2, 2, 2])).toMatchObject({ ok: false, reason: 'no-spread' });
  });

  it('refuses rather than overflow', () => {
    expect(biasWithInterval([1e308, -1e308, 1e308])).toMatchObject({ ok: false, reason: 'out-of-range' });
    expect(biasWithInterval([1, NaN, 2])).toMatchObject({
      ok: false,
      reason: 'non-finite-input',
      field: 'errors',
    });
  });
});
