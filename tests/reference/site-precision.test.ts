import { describe, expect, it } from 'vitest';
import { randomFrom } from '../../seeds/random.ts';
import { tQuantile } from '../../shared/numerics/distributions.ts';
import { interlaboratoryPrecision } from '../../shared/numerics/precision.ts';
import {
  biasOfLaboratory,
  intermediatePrecision,
  oneWay,
  pooledRepeatability,
} from '../../shared/numerics/site-precision.ts';
import { answered, expectRelative } from './expectations.ts';
import e691 from './values/e691-glucose.json';

/**
 * Source: ASTM E691-99 table 1 (glucose in serum, 8 laboratories × 3 replicates), data read in NIST Dataplot
 * GLUCOSE.DAT. Series of one laboratory are laid out as laboratories are, so s_r and s_R must come out as there.
 */
describe('the glucose data of E691 taken as eight series', () => {
  it.each(Object.entries(e691.inputs.data))('material %s', (material, laboratories) => {
    const expected = e691.expected.materials[material as 'A'];
    const series = Object.values(laboratories);
    expectRelative(answered(pooledRepeatability(series)).sd, expected.s_r, 1e-10);
    expect(answered(pooledRepeatability(series)).degreesOfFreedom).toBe(16);
    expectRelative(answered(intermediatePrecision(series)).sd, expected.s_R, 1e-10);
    const { between, within, meanLength } = answered(oneWay(series));
    expect(meanLength).toBe(3);
    expectRelative((between - within!) / meanLength, expected.s_L2, 1e-8);
    const lab = answered(interlaboratoryPrecision(series));
    expectRelative(answered(intermediatePrecision(series)).sd, lab.reproducibilitySd, 1e-12);
  });
});

/**
 * Source: Snedecor & Cochran, Statistical Methods, 13.7: conception to six bulls, series of unequal length. Data and
 * printed mean squares (664, 248), n₀ 5.67 and s_A² 73: values from memory, which agree with each other.
 */
it('mean squares and mean length of series of unequal length', () => {
  const bulls = [
    [46, 31, 37, 62, 30],
    [70, 59],
    [52, 44, 57, 40, 67, 64, 70],
    [47, 21, 70, 46, 14],
    [42, 64, 50, 69, 77, 81, 87],
    [35, 68, 59, 38, 57, 76, 57, 29, 60],
  ];
  const { between, within, meanLength, p, N } = answered(oneWay(bulls));
  expect([p, N, Math.round(between), Math.round(within!)]).toEqual([6, 35, 664, 248]);
  expect(meanLength).toBeCloseTo(5.67, 2);
  expect((between - within!) / meanLength).toBeCloseTo(73.4, 1);
});

/** Source: worked by hand, as the tables of χ² and t print their quantiles. */
describe('by hand', () => {
  const pairs = (half: number, n: number) => Array.from({ length: n }, () => [10 - half, 10 + half]);

  it('pairs that differ by 2 have the SD √2, with the interval of χ² at 10 degrees of freedom', () => {
    // χ² at 10 degrees of freedom: 20.483 at 0.975, 3.247 at 0.025.
    const found = answered(pooledRepeatability(pairs(1, 10)));
    expectRelative(found.sd, Math.SQRT2, 1e-12);
    expect(found.degreesOfFreedom).toBe(10);
    expect(found.low).toBeCloseTo(Math.sqrt(20 / 20.483), 4);
    expect(found.high).toBeCloseTo(Math.sqrt(20 / 3.247), 3);
    // 1.96 √2 · √2 = 3.92
    expect(found.limit).toBeCloseTo(3.92, 10);
  });

  it('the components add up: pairs apart by 2 around means that scatter', () => {
    // Means −3 … 3: their variance is 28/6; MS_between = 2 · 28/6, MS_within = 2; s_L² = 28/6 − 1; s² = 28/6 + 1.
    const series = Array.from({ length: 7 }, (_, i) => [i - 3 - 1, i - 3 + 1]);
    const found = answered(intermediatePrecision(series));
    expectRelative(found.sd, Math.sqrt(28 / 6 + 1), 1e-12);
    // Satterthwaite: s⁴ / ((28/6)²/6 + 1²/7).
    expectRelative(found.degreesOfFreedom, (28 / 6 + 1) ** 2 / ((28 / 6) ** 2 / 6 + 1 / 7), 1e-12);
  });

  it('single results only: their plain SD', () => {
    const found = answered(intermediatePrecision([[1], [2], [3], [4], [5], [6], [7]]));
    expectRelative(found.sd, Math.sqrt(28 / 6), 1e-12);
    expect(found.degreesOfFreedom).toBe(6);
  });

  it('means that scatter less than the repeats leave the repeatability alone', () => {
    const series = Array.from({ length: 8 }, (_, i) => [i % 2 ? 9 : 9.1, i % 2 ? 11 : 10.9]);
    const found = answered(intermediatePrecision(series));
    expectRelative(found.sd, answered(pooledRepeatability(series)).sd, 1e-12);
    expect(found.degreesOfFreedom).toBe(8);
  });

  it('the bias of a laboratory is judged on the means of its series', () => {
    const series = Array.from({ length: 7 }, (_, i) => [i + 1, i + 1, i + 1]);
    const found = answered(biasOfLaboratory(series, 3));
    // Mean 4, SD of the means √(28/6), standard error that over √7; t at 6 degrees of freedom 2.4469.
    expect(found).toMatchObject({ mean: 4, bias: 1, series: 7 });
    expect(found.high - found.bias).toBeCloseTo((2.4469 * Math.sqrt(28 / 6)) / Math.sqrt(7), 3);
    expectRelative(found.bias - found.low, (tQuantile(0.975, 6) * Math.sqrt(28 / 6)) / Math.sqrt(7), 1e-12);
  });

  it('says how much is missing rather than a figure', () => {
    expect(pooledRepeatability(pairs(1, 5))).toMatchObject({
      ok: false,
      reason: 'not-enough-data',
      needed: 6,
      got: 5,
    });
    expect(pooledRepeatability([])).toMatchObject({ ok: false, reason: 'not-enough-data', got: 0 });
    expect(intermediatePrecision(pairs(1, 6))).toMatchObject({ ok: false, needed: 7, got: 6 });
    expect(biasOfLaboratory(pairs(1, 6), 10)).toMatchObject({ ok: false, needed: 7, got: 6 });
    expect(pooledRepeatability(pairs(0, 8))).toMatchObject({ ok: false, reason: 'no-spread' });
  });
});

/** Checked by simulation from known components: no source beside the definitions. */
describe('over many laboratories of known precision', () => {
  it('finds the SDs, and its 95 % intervals hold them about 95 times in 100', () => {
    const random = randomFrom(691);
    const [within, between, runs] = [2, 3, 2000];
    const truth = Math.hypot(within, between);
    let [variance, insideSr, insideSite, insideBias] = [0, 0, 0, 0];
    for (let run = 0; run < runs; run++) {
      const series = Array.from({ length: 12 }, (_, i) => {
        const shift = between * random.normal();
        return Array.from({ length: 1 + (i % 3) }, () => 50 + shift + within * random.normal());
      });
      const sr = answered(pooledRepeatability(series));
      const site = answered(intermediatePrecision(series));
      const bias = answered(biasOfLaboratory(series, 50));
      variance += site.sd ** 2 / runs;
      if (sr.low <= within && within <= sr.high) insideSr++;
      if (site.low <= truth && truth <= site.high) insideSite++;
      if (bias.low <= 0 && 0 <= bias.high) insideBias++;
    }
    expect(Math.abs(variance / truth ** 2 - 1)).toBeLessThan(0.03);
    for (const inside of [insideSr, insideSite, insideBias]) {
      expect(inside / runs).toBeGreaterThan(0.93);
      expect(inside / runs).toBeLessThan(0.975);
    }
  });
});
