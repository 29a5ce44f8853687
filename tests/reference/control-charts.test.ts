import { describe, expect, it } from 'vitest';
import {
  cusumChart,
  ewmaChart,
  individualsChart,
  individualsLimits,
} from '../../shared/numerics/control-charts.ts';
import { nelsonRules, runRules, westernElectricRules } from '../../shared/numerics/run-rules.ts';
import type { RunRule } from '../../shared/numerics/run-rules.ts';
import { answered, expectAllRelative, expectRelative } from './expectations.ts';
import cusum from './values/nist-cusum.json';
import ewma from './values/nist-ewma.json';
import imr from './values/nist-imr.json';
import runSeries from './values/run-rules-series.json';

// Source: NIST/SEMATECH e-Handbook 6.3.2.4. Read in a published copy, recomputed with exact rationals.
describe('EWMA chart of the NIST handbook', () => {
  const { x, lam, ewma0, s, k } = ewma.inputs;
  const chart = answered(ewmaChart(x, { sd: s, lambda: lam, target: ewma0, width: k }));

  it('statistics', () => {
    const z = chart.points.map((point) => point.z);
    expectAllRelative(z, ewma.expected.ewma.slice(1), 0, ewma.tolerance.ewma_recomputed_abs);
    expectAllRelative(z, ewma.expected.published_ewma_2dp.slice(1), 0, ewma.tolerance.ewma_abs);
  });

  it('exact limits that widen with n, and no signal', () => {
    for (const { i, ucl, lcl } of ewma.expected.exact_time_varying_limits) {
      expectRelative(chart.points[i - 1]!.upper, ucl, 1e-12);
      expectRelative(chart.points[i - 1]!.lower, lcl, 1e-12);
    }
    expect(chart.firstSignal).toBeNull();
  });

  it('limits tend to the published asymptotic ones', () => {
    const long = answered(
      ewmaChart(new Float64Array(200).fill(50), { sd: s, lambda: lam, target: ewma0, width: k }),
    );
    expectRelative(long.points.at(-1)!.upper, ewma.expected.published_ucl, 0, ewma.tolerance.limits_abs);
    expectRelative(long.points.at(-1)!.lower, ewma.expected.published_lcl, 0, ewma.tolerance.limits_abs);
  });
});

// Source: NIST/SEMATECH e-Handbook 6.3.2.3. Read in a published copy, recomputed with exact rationals.
describe('tabular CUSUM of the NIST handbook', () => {
  const { x, target, k, h } = cusum.inputs;
  const chart = answered(cusumChart(x, { sd: 1, k, h, target }));

  it('upper and lower sums', () => {
    const { S_hi, S_lo, published_S_hi_2dp, published_S_lo_2dp } = cusum.expected;
    const high = chart.points.map((point) => point.high);
    const low = chart.points.map((point) => point.low);
    expectAllRelative(high, S_hi, 0, 1e-11);
    expectAllRelative(low, S_lo, 0, 1e-11);
    expectAllRelative(high, published_S_hi_2dp, 0, cusum.tolerance.published_abs);
    expectAllRelative(low, published_S_lo_2dp, 0, cusum.tolerance.published_abs);
  });

  it('signals from point 14 on, with the onset at point 13 where the sum left zero', () => {
    const signalled = chart.points.flatMap((point, i) => (point.signal === 'high' ? [i + 1] : []));
    expect(signalled).toEqual(cusum.expected.signals);
    expect(chart.firstSignal).toBe(cusum.expected.first_signal - 1);
    expect(chart.points[13]!.onset).toBe(12);
  });
});

// Source: NIST/SEMATECH e-Handbook 6.3.2.2. Read in a published copy and recomputed.
describe('individuals and moving range chart of the NIST handbook', () => {
  const { x, d2, D4 } = imr.inputs;

  it('with the rounded table constants', () => {
    const limits = answered(individualsLimits(x, { d2, D4 }));
    expectRelative(limits.centre, imr.expected.mean, 1e-12);
    expectRelative(limits.meanMovingRange, imr.expected.mr_bar, 1e-12);
    expectRelative(limits.sigma, imr.expected.sigma_mr, 1e-12);
    expectRelative(limits.upper, imr.expected.published.ucl, 0, imr.tolerance.abs);
    expectRelative(limits.lower, imr.expected.published.lcl, 0, imr.tolerance.abs);
    expectRelative(limits.movingRangeUpper, imr.expected.ucl_mr, 1e-12);
    const chart = answered(individualsChart(x, limits));
    expectAllRelative(
      chart.points.slice(1).map((point) => point.movingRange!),
      imr.expected.mr,
      1e-12,
    );
    expect(chart.points.filter((point) => point.signal || point.rangeSignal)).toEqual([]);
  });

  it('with the exact constants', () => {
    const limits = answered(individualsLimits(x));
    expectRelative(limits.upper, imr.expected.ucl_exact_d2, 1e-12);
    expectRelative(limits.lower, imr.expected.lcl_exact_d2, 1e-12);
  });
});

/**
 * Source: Nelson, J. Quality Technology 16 (1984); Western Electric Handbook (1956). Rule definitions from memory;
 * constructed series judged by a separate evaluator. The keys of the expected values name the rule.
 */
const rulesByKey: Record<string, RunRule> = {
  '1: one point beyond 3 sigma': westernElectricRules[0]!,
  ...Object.fromEntries(
    [7, 8, 9].map((n) => [
      `2: ${n} in a row same side`,
      { code: `${n}`, kind: 'beyond', count: n, of: n, sigma: 0, sides: 'same' },
    ]),
  ),
  '3: 6 points steadily increasing or decreasing': nelsonRules[2]!,
  '3: 7 points steadily increasing or decreasing': { code: '7', kind: 'trend', points: 7 },
  '4: 14 in a row alternating up and down': nelsonRules[3]!,
  '5: 2 of 3 beyond 2 sigma same side (last point one of them)': westernElectricRules[1]!,
  '5b: 2 of 3 beyond 2 sigma same side (any window)': {
    code: '5b',
    kind: 'beyond',
    count: 2,
    of: 3,
    sigma: 2,
    sides: 'same',
    anyWindow: true,
  },
  '6: 4 of 5 beyond 1 sigma same side (last point one of them)': westernElectricRules[2]!,
  '6b: 4 of 5 beyond 1 sigma same side (any window)': {
    code: '6b',
    kind: 'beyond',
    count: 4,
    of: 5,
    sigma: 1,
    sides: 'same',
    anyWindow: true,
  },
  '7: 15 in a row within 1 sigma': nelsonRules[6]!,
  '8: 8 in a row all beyond 1 sigma, either side': nelsonRules[7]!,
};

describe('run rules on constructed series', () => {
  it.each(Object.entries(runSeries.inputs.series))('%s', (name, z) => {
    const expected = (runSeries.expected as Record<string, Record<string, number[]>>)[name]!;
    for (const [key, rule] of Object.entries(rulesByKey)) {
      const { signals } = answered(runRules(z, [rule]));
      expect(
        signals[rule.code]!.map((i) => i + 1),
        key,
      ).toEqual(expected[key] ?? []);
    }
    expect(Object.keys(expected).filter((key) => !(key in rulesByKey))).toEqual([]);
  });
});
