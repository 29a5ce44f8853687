import { describe, expect, it } from 'vitest';
import { kvFactor, relativeAccuracy, variabilityTest } from '../../shared/numerics/emission.ts';
import { interlaboratoryPrecision, mandelCritical, sitePrecision } from '../../shared/numerics/precision.ts';
import { answered, expectAllRelative, expectRelative } from './expectations.ts';
import e691 from './values/e691-glucose.json';
import en14181 from './values/en14181-variability.json';
import rata from './values/rata-bias.json';

/** Source: ASTM E691-99 table 1, data read in NIST Dataplot GLUCOSE.DAT; printed summary from memory, reproduced. */
describe('interlaboratory precision of glucose in serum', () => {
  const materials = Object.entries(e691.inputs.data);
  it.each(materials)('material %s', (material, laboratories) => {
    const expected = e691.expected.materials[material as 'A'];
    const own = answered(interlaboratoryPrecision(Object.values(laboratories)));
    expectAllRelative(
      [
        own.mean,
        own.sdOfMeans,
        own.repeatabilitySd,
        own.reproducibilitySd,
        own.betweenVariance,
        own.r,
        own.R,
      ],
      [expected.mean, expected.s_xbar, expected.s_r, expected.s_R, expected.s_L2, expected.r, expected.R],
      e691.tolerance.recomputed_rel,
    );
    expectAllRelative(own.h, Object.values(expected.h), 1e-9);
    expectAllRelative(own.k, Object.values(expected.k), 1e-9);
  });
  it('printed summary', () => {
    const { published } = e691.expected;
    const all = materials.map(([, rows]) => answered(interlaboratoryPrecision(Object.values(rows))));
    const abs = e691.tolerance.published_abs;
    expectAllRelative(
      all.map(({ mean }) => mean),
      published.mean,
      0,
      abs,
    );
    expectAllRelative(
      all.map(({ repeatabilitySd }) => repeatabilitySd),
      published.s_r,
      0,
      abs,
    );
    expectAllRelative(
      all.map(({ reproducibilitySd }) => reproducibilitySd),
      published.s_R,
      0,
      abs,
    );
  });
  it('critical h and k', () => {
    const { h, k } = answered(mandelCritical(8, 3));
    expectAllRelative([h, k], [e691.expected.h_critical_0_5pct, e691.expected.k_critical_0_5pct], 1e-8);
  });
  it('a mistyped 148.30 for 138.30 shows in k of laboratory 4', () => {
    const { variant } = e691;
    const rows = Object.values(e691.inputs.data.C).map((row) => [...row]);
    rows[variant.lab - 1]![variant.index - 1] = variant.value;
    const own = answered(interlaboratoryPrecision(rows));
    expectAllRelative(
      [own.mean, own.repeatabilitySd, own.reproducibilitySd, own.k[variant.lab - 1]!],
      [variant.mean, variant.s_r, variant.s_R, variant.k_lab4],
      1e-10,
    );
    expect(own.k[variant.lab - 1]!).toBeGreaterThan(answered(mandelCritical(8, 3)).k);
  });
});

it('site precision R′ is 2.77 standard deviations (ASTM D6299)', () => {
  expectRelative(answered(sitePrecision([10, 12])).limit, 2.77 * Math.SQRT2, 1e-12);
});

/** Source: 40 CFR 60 App. B PS-2, PS-16 and 40 CFR 75, FORMULAS FROM MEMORY; own data computed with scipy 1.10.1. */
describe('relative accuracy (formulas from memory)', () => {
  const { twelve_runs, unbiased, reads_high } = rata.inputs;
  const { rejected_1based } = rata.expected.nine_runs;
  const kept = (values: number[]) => values.filter((_, i) => !rejected_1based.includes(i + 1));
  it.each([
    ['twelve runs', twelve_runs, rata.expected.twelve_runs],
    [
      'nine of the twelve',
      { reference: kept(twelve_runs.reference), monitor: kept(twelve_runs.monitor) },
      rata.expected.nine_runs,
    ],
    ['without bias', unbiased, rata.expected.unbiased],
    ['reading high', reads_high, rata.expected.reads_high],
  ])('%s', (_name, { reference, monitor }, expected) => {
    const own = answered(relativeAccuracy(reference, monitor));
    expectAllRelative(
      [
        own.meanDifference,
        own.sd,
        own.confidenceCoefficient,
        own.relativeAccuracy,
        own.r,
        own.f,
        own.fCritical,
      ],
      [
        expected.mean_diff,
        expected.sd,
        expected.cc,
        expected.RA_percent,
        expected.r,
        expected.F,
        expected.F_crit_95,
      ],
      rata.tolerance.rel,
    );
    expect(own.readsLow).toBe(expected.biased_low);
    expectRelative(own.biasAdjustment, expected.BAF, rata.tolerance.rel);
    expect(own.meanError).toBe(-own.meanDifference);
  });
});

/** Source: EN 14181, formulas and k_v table FROM MEMORY, standard not read; recomputed with scipy 1.10.1. */
describe('variability and validity after EN 14181 (formulas from memory)', () => {
  it.each(Object.entries(en14181.expected.kv))('k_v for %s parallel tests', (n, kv) => {
    const own = answered(kvFactor(Number(n))).kv;
    expectRelative(own, kv, en14181.tolerance.recomputed_rel);
    const table = en14181.expected.remembered_table as Record<string, number>;
    expectRelative(own, table[n]!, 0, en14181.tolerance.kv_abs);
  });
  it('example', () => {
    const { D, emission_limit, P } = en14181.inputs.example;
    const { sigma0, sD, kv, mean, validity_limit } = en14181.expected.example;
    const own = answered(variabilityTest(D, { emissionLimit: emission_limit, permittedFraction: P }));
    expectAllRelative(
      [own.sigma0, own.sd, own.kv, own.meanDifference, own.validityLimit],
      [sigma0, sD, kv, mean, validity_limit],
      en14181.tolerance.recomputed_rel,
    );
    expect([own.variabilityPassed, own.validityPassed]).toEqual([true, true]);
  });
});
