import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { agreement } from '../../../shared/numerics/agreement.ts';
import { demingRegression } from '../../../shared/numerics/deming.ts';
import { generalisedEsd, grubbsTest } from '../../../shared/numerics/outliers.ts';
import { passingBablok } from '../../../shared/numerics/passing-bablok.ts';
import {
  interlaboratoryPrecision,
  repeatabilityFromReplicates,
  sitePrecision,
} from '../../../shared/numerics/precision.ts';
import { algorithmA } from '../../../shared/numerics/robust.ts';
import {
  fTest,
  oneSampleTTest,
  pairedTTest,
  welchTTest,
} from '../../../shared/numerics/significance-tests.ts';
import { seededRandom } from '../../trials/seeded-random.ts';
import { answered, expectRelative } from '../../reference/expectations.ts';

function pairs(seed: number, n: number) {
  const random = seededRandom(seed);
  const truth = Array.from({ length: n }, () => 20 + 6 * random.normal());
  return {
    x: truth.map((value) => value + random.normal()),
    y: truth.map((value) => 1.5 * value + random.normal()),
  };
}
const units = fc.tuple(fc.integer(), fc.constantFrom(0.01, 3, 250), fc.integer({ min: -40, max: 40 }));

describe('comparisons follow a change of unit', () => {
  it('Deming and Passing-Bablok lines', () => {
    fc.assert(
      fc.property(units, ([seed, unit, shift]) => {
        const { x, y } = pairs(seed, 20);
        const scaled = y.map((value) => unit * value + shift);
        const before = answered(demingRegression(x, y, { varianceRatio: 1 }));
        const after = answered(demingRegression(x, scaled, { varianceRatio: 1 / unit ** 2 }));
        expectRelative(after.slope, unit * before.slope, 1e-7);
        expectRelative(after.intercept, unit * before.intercept + shift, 1e-6, 1e-6 * (1 + unit));
      }),
      { numRuns: 30 },
    );
  });

  it('Passing-Bablok under a shift of either side', () => {
    const { x, y } = pairs(1, 25);
    const before = answered(passingBablok(x, y));
    const after = answered(
      passingBablok(
        x.map((value) => value + 7),
        y.map((value) => value - 2),
      ),
    );
    expectRelative(after.slope, before.slope, 1e-9);
    expectRelative(after.intercept, before.intercept - 2 - 7 * before.slope, 1e-9);
    expect(before.slopeLow).toBeLessThan(1.5);
    expect(before.slopeHigh).toBeGreaterThan(1.5);
  });

  it('agreement figures', () => {
    const { x, y } = pairs(2, 20);
    const before = answered(agreement(x, y));
    const after = answered(
      agreement(
        x.map((value) => 4 * value + 1),
        y.map((value) => 4 * value + 1),
      ),
    );
    expectRelative(after.bias, 4 * before.bias, 1e-9);
    expectRelative(after.ccc, before.ccc, 1e-9);
    expectRelative(after.q2, before.q2, 1e-9);
    expectRelative(after.slope, before.slope, 1e-9);
    expect(before.rmsep ** 2).toBeCloseTo(before.bias ** 2 + (before.sep ** 2 * 19) / 20, 9);
  });

  it('robust mean and outliers', () => {
    fc.assert(
      fc.property(units, ([seed, unit, shift]) => {
        const values = [...pairs(seed, 15).x, 90];
        const scaled = values.map((value) => unit * value + shift);
        const before = answered(algorithmA(values));
        const after = answered(algorithmA(scaled));
        expectRelative(after.mean, unit * before.mean + shift, 1e-8, 1e-9);
        expectRelative(after.sd, unit * before.sd, 1e-8);
        expect(answered(grubbsTest(scaled, { alpha: 0.05, sides: 'two' }))).toMatchObject({
          index: 15,
          outlier: true,
        });
        expect(answered(generalisedEsd(scaled, { most: 3, alpha: 0.05 })).outliers).toContain(15);
      }),
      { numRuns: 30 },
    );
  });

  it('t and F tests', () => {
    const { x, y } = pairs(3, 12);
    const turned = answered(welchTTest(y, x));
    const test = answered(welchTTest(x, y));
    expectRelative(turned.t, -test.t, 1e-12);
    expectRelative(turned.p, test.p, 1e-12);
    expectRelative(answered(fTest(x, y)).statistic, 1 / answered(fTest(y, x)).statistic, 1e-12);
    expectRelative(answered(fTest(x, y)).p, answered(fTest(y, x)).p, 1e-9);
    expectRelative(
      answered(
        pairedTTest(
          x.map((value) => 9 * value),
          y.map((value) => 9 * value),
        ),
      ).t,
      answered(pairedTTest(x, y)).t,
      1e-9,
    );
  });
});

describe('what the sides of a test mean', () => {
  const values = [10, 10.1, 9.9, 10.05, 9.95, 10, 12];
  it('Grubbs looks where it is told', () => {
    expect(answered(grubbsTest(values, { alpha: 0.05, sides: 'upper' })).outlier).toBe(true);
    expect(answered(grubbsTest(values, { alpha: 0.05, sides: 'lower' }))).toMatchObject({
      index: 2,
      outlier: false,
    });
    const two = answered(grubbsTest(values, { alpha: 0.05, sides: 'two' })).critical;
    expect(two).toBeGreaterThan(answered(grubbsTest(values, { alpha: 0.05, sides: 'upper' })).critical);
  });

  it('a robust mean hardly moves with the outlier, and equal values have no spread', () => {
    expectRelative(answered(algorithmA(values)).mean, 10.02, 0.005);
    expect(algorithmA([1, 1, 1, 1])).toMatchObject({ ok: false, reason: 'no-spread' });
    expect(answered(algorithmA([1, 1, 1, 1, 1, 2])).sd).toBeGreaterThan(0);
    expect(oneSampleTTest([2, 2, 2], 1)).toMatchObject({ reason: 'no-spread' });
  });
});

describe('precision', () => {
  it('duplicates: pooled SD is √(Σd²/2m)', () => {
    const own = answered(repeatabilityFromReplicates([[10, 12], [20, 21], [5]]));
    expectRelative(own.sd, Math.sqrt((4 + 1) / 4), 1e-12);
    expect(own.degreesOfFreedom).toBe(2);
    expectRelative(own.limit, 2.77 * own.sd, 1e-12);
  });
  it('reproducibility is never below repeatability', () => {
    const alike = answered(
      interlaboratoryPrecision([
        [1, 3],
        [3, 1.001],
        [1, 3.001],
      ]),
    );
    expect(alike.betweenVariance).toBeLessThan(0);
    expect(alike.reproducibilitySd).toBe(alike.repeatabilitySd);
  });
  it('ragged replicates and a single check result are refused', () => {
    expect(
      interlaboratoryPrecision([
        [1, 2],
        [1, 2, 3],
        [1, 2],
      ]),
    ).toMatchObject({ reason: 'wrong-shape', field: 'results[1]' });
    expect(sitePrecision([1])).toEqual({
      ok: false,
      reason: 'not-enough-data',
      field: 'checkResults',
      needed: 2,
      got: 1,
    });
  });
});
