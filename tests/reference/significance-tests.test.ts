import { describe, expect, it } from 'vitest';
import { agreement } from '../../shared/numerics/agreement.ts';
import { generalisedEsd, grubbsCritical, grubbsTest } from '../../shared/numerics/outliers.ts';
import { algorithmA } from '../../shared/numerics/robust.ts';
import {
  chiSquareVarianceTest,
  fTest,
  pairedTTest,
  pooledTTest,
  welchTTest,
} from '../../shared/numerics/significance-tests.ts';
import { answered, expectAllRelative, expectRelative } from './expectations.ts';
import robust from './values/algorithm-a.json';
import grubbs from './values/grubbs.json';
import sleep from './values/t-f-tests-sleep.json';
import validation from './values/validation-statistics.json';

// Source: Student (1908), R datasets::sleep. Computed with R 4.2.2 t.test and var.test, scipy 1.10.1.
describe("tests on Student's sleep data", () => {
  const { a, b } = sleep.inputs;
  const { paired, pooled, welch, F } = sleep.expected;
  const rel = sleep.tolerance.rel;
  it('paired t', () => {
    const test = answered(pairedTTest(a, b));
    expectAllRelative(
      [test.t, test.p, test.difference, test.low, test.high],
      [paired.t, paired.p, paired.mean_diff, ...paired.ci95],
      rel,
    );
    expect(test.degreesOfFreedom).toBe(paired.df);
  });
  it('pooled and Welch t', () => {
    const equal = answered(pooledTTest(a, b));
    expectAllRelative([equal.t, equal.degreesOfFreedom, equal.p], [pooled.t, pooled.df, pooled.p], rel);
    const unequal = answered(welchTTest(a, b));
    expectAllRelative([unequal.t, unequal.degreesOfFreedom, unequal.p], [welch.t, welch.df, welch.p], rel);
  });
  it('F test of the variances', () => {
    const test = answered(fTest(a, b));
    expectAllRelative([test.statistic, test.p, test.low, test.high], [F.F, F.p_two_sided, ...F.ci95], rel);
  });
});

// Source: χ² table value of 10 values with s² = σ² · 16.919/9 (e.g. NIST e-Handbook 1.3.5.8): upper p is 0.05.
it('the χ² variance test puts the tabled 95 % point at a two-sided p of 0.1', () => {
  const values = [-1, 1, -1, 1, -1, 1, -1, 1, -1, 1];
  const sampleVariance = 10 / 9;
  const test = answered(chiSquareVarianceTest(values, Math.sqrt((sampleVariance * 9) / 16.918977604620448)));
  expectRelative(test.p, 0.1, 1e-9);
});

// Source: Lin, Biometrics 45 (1989); Fearn (2009). Computed with numpy 1.24.2 and scipy 1.10.1 on own data.
it('validation figures', () => {
  const { reference, predicted } = validation.inputs;
  const figures = answered(agreement(reference, predicted));
  const e = validation.expected;
  const line = e.regression_reference_on_predicted;
  expectAllRelative(
    [
      figures.bias,
      figures.rmsep,
      figures.sep,
      figures.r,
      figures.q2,
      figures.ccc,
      figures.rpd,
      figures.biasT,
      figures.biasP,
      figures.biasLimit,
    ],
    [
      e.bias,
      e.rmsep,
      e.sep,
      e.r,
      e.q2_vs_reference_mean,
      e.ccc,
      e.rpd,
      e.bias_t,
      e.bias_p,
      e.bias_confidence_limit_95,
    ],
    validation.tolerance.rel,
  );
  expectAllRelative(
    [
      figures.slope,
      figures.intercept,
      figures.slopeStandardError,
      figures.slopeT,
      figures.slopeP,
      figures.jointF,
      figures.jointP,
    ],
    [
      line.slope,
      line.intercept,
      line.se_slope,
      line.t_slope_minus_1,
      line.p,
      e.joint_F_intercept0_slope1.F,
      e.joint_F_intercept0_slope1.p,
    ],
    validation.tolerance.rel,
  );
  expectAllRelative(
    [figures.meanAbsolute, figures.largestAbsolute],
    [e.mae, e.max_abs],
    validation.tolerance.rel,
  );
});

// Source: Grubbs (1969); NIST e-Handbook 1.3.5.17.1; ISO 5725-2:1994 table 5. Computed with scipy 1.10.1; tables from memory.
describe('Grubbs', () => {
  it.each(Object.entries(grubbs.expected.critical))('critical values, n = %s', (n, expected) => {
    const critical = (alpha: number, sides: 'two' | 'upper') =>
      answered(grubbsCritical(Number(n), alpha, sides)).critical;
    expectAllRelative(
      [critical(0.05, 'upper'), critical(0.05, 'two'), critical(0.01, 'upper'), critical(0.01, 'two')],
      [expected.one_sided_05, expected.two_sided_05, expected.one_sided_01, expected.two_sided_01],
      grubbs.tolerance.recomputed_rel,
    );
  });
  it.each(Object.entries(grubbs.expected.iso5725_2_table5_published))(
    'the ISO 5725-2 table is two-sided, n = %s',
    (n, table) => {
      expectRelative(
        answered(grubbsCritical(Number(n), 0.05, 'two')).critical,
        table.upper_5pct,
        0,
        grubbs.tolerance.published_abs,
      );
      expectRelative(
        answered(grubbsCritical(Number(n), 0.01, 'two')).critical,
        table.upper_1pct,
        0,
        grubbs.tolerance.published_abs,
      );
    },
  );
  it('finds 245.57 among the uranium isotope data', () => {
    const { G, G_crit_one_sided_05, G_crit_two_sided_05 } = grubbs.expected.example;
    const upper = answered(grubbsTest(grubbs.inputs.example, { alpha: 0.05, sides: 'upper' }));
    expectAllRelative([upper.g, upper.critical], [G, G_crit_one_sided_05], 1e-9);
    expect([upper.index, upper.outlier]).toEqual([7, true]);
    expectRelative(
      answered(grubbsTest(grubbs.inputs.example, { alpha: 0.05, sides: 'two' })).critical,
      G_crit_two_sided_05,
      1e-9,
    );
  });
});

/** Source: Rosner, Technometrics 25 (1983), as in NIST e-Handbook 1.3.5.17.3; values from memory. */
it('generalised ESD finds three outliers in Rosner’s 54 values though the first two steps do not signal', () => {
  const values = [
    -0.25, 0.68, 0.94, 1.15, 1.2, 1.26, 1.26, 1.34, 1.38, 1.43, 1.49, 1.49, 1.55, 1.56, 1.58, 1.65, 1.69, 1.7,
    1.76, 1.77, 1.81, 1.91, 1.94, 1.96, 1.99, 2.06, 2.09, 2.1, 2.14, 2.15, 2.23, 2.24, 2.26, 2.35, 2.37, 2.4,
    2.47, 2.54, 2.62, 2.64, 2.9, 2.92, 2.92, 2.93, 3.21, 3.26, 3.3, 3.59, 3.68, 4.3, 4.64, 5.34, 5.42, 6.01,
  ];
  const test = answered(generalisedEsd(values, { most: 10, alpha: 0.05 }));
  expectAllRelative(
    test.steps.map(({ r }) => r),
    [3.118, 2.942, 3.179, 2.81, 2.815, 2.848, 2.279, 2.31, 2.101, 2.067],
    0,
    0.001,
  );
  expectAllRelative(
    test.steps.slice(0, 6).map(({ critical }) => critical),
    [3.158, 3.151, 3.143, 3.136, 3.128, 3.12],
    0,
    0.001,
  );
  expect(test.outliers.map((i) => values[i])).toEqual([6.01, 5.42, 5.34]);
});

// Source: ISO 13528:2015 annex C.3 (algorithm from memory); AMC, Analyst 114 (1989). Computed with numpy.
describe('Algorithm A', () => {
  it.each(Object.entries(robust.expected.algorithm_A))('%s', (name, { x, s }) => {
    const values = robust.inputs[name as 'chem' | 'abbey' | 'seven'];
    const fit = answered(algorithmA(values));
    expectAllRelative([fit.mean, fit.sd], [x, s], robust.tolerance.algorithm_A_rel);
  });
  it('keeps the published H15 figures of the copper determinations to their two decimals (3.21 and 0.67)', () => {
    const fit = answered(algorithmA(robust.inputs.chem));
    expect(fit.mean.toFixed(2)).toBe('3.21');
    expect(fit.sd.toFixed(2)).toBe('0.67');
  });
});
