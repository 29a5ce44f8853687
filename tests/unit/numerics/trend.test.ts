import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { mannKendall, theilSen } from '../../../shared/numerics/trend.ts';
import {
  autocorrelations,
  boxPierce,
  ljungBox,
  nisBySize,
  whitenessBySize,
} from '../../../shared/numerics/whiteness.ts';
import { durbinWatson } from '../../../shared/numerics/durbin-watson.ts';
import { autoregression, seededRandom } from '../../trials/seeded-random.ts';
import { answered, expectRelative } from '../../reference/expectations.ts';

const values = fc.array(fc.integer({ min: -50, max: 50 }), { minLength: 4, maxLength: 30 });
const times = (n: number) => Array.from({ length: n }, (_, i) => i);

describe('trend', () => {
  it('Theil-Sen follows changes of unit, shifts and an added slope', () => {
    fc.assert(
      fc.property(
        values,
        fc.integer({ min: 1, max: 20 }),
        fc.integer({ min: -20, max: 20 }),
        (y, unit, slope) => {
          const at = times(y.length);
          const before = answered(theilSen(at, y));
          const after = answered(
            theilSen(
              at,
              y.map((value, i) => unit * value + slope * i + 3),
            ),
          );
          expectRelative(after.slope, unit * before.slope + slope, 1e-9, 1e-9);
          expectRelative(
            answered(
              theilSen(
                at.map((t) => t + 1e6),
                y,
              ),
            ).slope,
            before.slope,
            1e-9,
          );
          expect(before.low).toBeLessThanOrEqual(before.slope);
          expect(before.high).toBeGreaterThanOrEqual(before.slope);
        },
      ),
    );
  });

  it('Mann-Kendall depends on ranks alone, and changes sign when time is turned round', () => {
    fc.assert(
      fc.property(values, (y) => {
        const test = answered(mannKendall(y));
        expect(answered(mannKendall(y.map((value) => Math.exp(value / 10))))).toEqual(test);
        expect(answered(mannKendall(y.toReversed())).s).toBe(test.s === 0 ? 0 : -test.s);
      }),
    );
  });

  it('the exact p agrees with the normal one where that is good', () => {
    const random = seededRandom(3);
    const y = Array.from({ length: 40 }, (_, i) => 0.03 * i + random.normal());
    const test = answered(mannKendall(y));
    expectRelative(test.pExact!, test.p, 0.05);
  });

  it('only the last 400 values count', () => {
    const y = Array.from({ length: 1000 }, (_, i) => (i < 600 ? 1000 - i : i));
    const line = answered(theilSen(times(1000), y));
    expect(line).toMatchObject({ n: 400, slope: 1 });
    expect(answered(mannKendall(y)).s).toBe((400 * 399) / 2);
  });

  it('needs four values, and instants that differ', () => {
    expect(mannKendall([1, 2, 3])).toEqual({
      ok: false,
      reason: 'not-enough-data',
      field: 'values',
      needed: 4,
      got: 3,
    });
    expect(theilSen([5, 5, 5, 5], [1, 2, 3, 4])).toEqual({ ok: false, reason: 'no-spread', field: 'at' });
  });
});

describe('whiteness', () => {
  it('judges by size: r₁ of 0.3 is coloured, white noise is not', () => {
    const random = seededRandom(4);
    expect(answered(whitenessBySize(autoregression(random, 4000, 0.3)))).toMatchObject({
      coloured: true,
      lag: 1,
    });
    expect(answered(whitenessBySize(autoregression(random, 4000, 0))).coloured).toBe(false);
  });

  it('a trifle that a test finds in a long series is not coloured by size', () => {
    const innovations = autoregression(seededRandom(5), 20_000, 0.06);
    expect(answered(ljungBox(innovations, 10)).p).toBeLessThan(1e-6);
    expect(answered(whitenessBySize(innovations)).coloured).toBe(false);
  });

  it('mean NIS beyond twice its dimension is overconfident, below half underconfident', () => {
    expect(answered(nisBySize([5, 5, 5], 2)).verdict).toBe('overconfident');
    expect(answered(nisBySize([2, 2, 3], 2)).verdict).toBe('consistent');
    expect(answered(nisBySize([0.5, 0.9, 1], 2)).verdict).toBe('underconfident');
  });

  it('neither the unit nor a shift matters, and Box-Pierce is below Ljung-Box', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: -9, max: 9 }), { minLength: 12, maxLength: 40 }), (y) => {
        const r = autocorrelations(y, 5);
        if (!r.ok) {
          expect(r.reason).toBe('no-spread');
          return;
        }
        const shifted = answered(
          autocorrelations(
            y.map((value) => 3 * value + 100),
            5,
          ),
        );
        for (let k = 0; k < 5; k++) expectRelative(shifted.r[k]!, r.r[k]!, 1e-9, 1e-12);
        expect(answered(boxPierce(y, 5)).statistic).toBeLessThanOrEqual(answered(ljungBox(y, 5)).statistic);
      }),
    );
  });

  it('Durbin-Watson is 2(1 − r₁) less what the ends carry', () => {
    const e = autoregression(seededRandom(6), 1000, 0.5);
    const centred = e.map((value) => value - e.reduce((a, b) => a + b, 0) / 1000);
    expectRelative(
      answered(durbinWatson(centred)).d,
      2 * (1 - answered(autocorrelations(centred, 1)).r[0]!),
      0.01,
    );
  });

  it('fitted parameters take degrees of freedom', () => {
    const e = autoregression(seededRandom(7), 100, 0);
    expect(answered(ljungBox(e, 10, 2)).degreesOfFreedom).toBe(8);
    expect(ljungBox(e, 10, 10)).toMatchObject({ reason: 'out-of-range', field: 'fitted' });
  });
});
