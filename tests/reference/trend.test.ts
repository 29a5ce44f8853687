import { describe, expect, it } from 'vitest';
import { mannKendall, theilSen } from '../../shared/numerics/trend.ts';
import { answered, expectRelative } from './expectations.ts';
import trend from './values/mann-kendall-sen.json';

type TrendCase = {
  name: string;
  y: number[];
  t: number[];
  S: number;
  varS: number;
  Z: number | null;
  p_two_sided_normal: number | null;
  p_two_sided_exact?: number;
  kendall_tau_b: number | null;
  sen: { slope: number; intercept_median?: number; gilbert_limits?: { lower: number; upper: number } };
};

/**
 * Source: Gilbert (1987) ch. 16; Helsel & Hirsch, data from memory; Nile from R datasets. Computed with scipy 1.10.1,
 * exact enumeration and R 4.2.2 cor.test. The interval is Gilbert's, with interpolated ranks.
 */
describe.each(trend.expected.cases as TrendCase[])('$name', (expected) => {
  it('Mann-Kendall test', () => {
    const test = answered(mannKendall(expected.y));
    expect(test.s).toBe(expected.S);
    expectRelative(test.variance, expected.varS, 1e-12);
    expectRelative(test.z, expected.Z ?? 0, 1e-12);
    if (expected.p_two_sided_normal != null) expectRelative(test.p, expected.p_two_sided_normal, 1e-9);
    if (expected.p_two_sided_exact !== undefined)
      expectRelative(test.pExact!, expected.p_two_sided_exact, 1e-12);
    if (expected.kendall_tau_b != null) expectRelative(test.tau, expected.kendall_tau_b, 1e-12);
  });

  it('Theil-Sen slope and interval', () => {
    const line = answered(theilSen(expected.t, expected.y));
    const { sen } = expected;
    expectRelative(line.slope, sen.slope, 1e-12);
    // Not listed for the constant series: there the line is the constant and its interval has no width.
    expectRelative(line.intercept, sen.intercept_median ?? 5, 1e-12);
    expectRelative(line.low, sen.gilbert_limits?.lower ?? 0, 1e-9);
    expectRelative(line.high, sen.gilbert_limits?.upper ?? 0, 1e-9);
  });
});
