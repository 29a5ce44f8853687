import { describe, expect, it } from 'vitest';
import { chartConstants } from '../../shared/numerics/chart-constants.ts';
import {
  cusumIntervalFor,
  cusumRunLength,
  ewmaRunLength,
  ewmaWidthFor,
  oneSidedCusumRunLength,
  shewhartWidthFor,
  siegmundRunLength,
} from '../../shared/numerics/run-length.ts';
import { runRulesRunLength } from '../../shared/numerics/run-rules-length.ts';
import { westernElectricRules } from '../../shared/numerics/run-rules.ts';
import { answered, expectAllRelative, expectRelative } from './expectations.ts';
import cusum from './values/arl-cusum.json';
import rules from './values/arl-runrules.json';
import constants from './values/chart-constants.json';

/** Source: Montgomery, SQC, table 9.3 (Lucas & Crosier 1982). Computed with R 4.2.2 spc 0.6.7; row from memory. */
describe('CUSUM run lengths', () => {
  const { two_sided, one_sided, fir_half_headstart, siegmund, published } = cusum.expected;
  it.each(two_sided)('two-sided, h = $h, shift $shift', ({ k, h, shift, arl }) => {
    const { runLength } = answered(cusumRunLength({ k, h, shift }));
    expectRelative(runLength, arl, 1e-8);
    const printed = published.arl[String(h) as '4'][published.shifts.indexOf(shift)]!;
    expectRelative(runLength, printed, 0.005);
  });
  it.each(one_sided)('one-sided, h = $h, shift $shift', ({ k, h, shift, arl }) => {
    expectRelative(answered(oneSidedCusumRunLength({ k, h, shift })).runLength, arl, 1e-8);
  });
  it.each(fir_half_headstart)('half head start, h = $h, shift $shift', ({ k, h, headstart, shift, arl }) => {
    expectRelative(answered(cusumRunLength({ k, h, shift, headStart: headstart })).runLength, arl, 1e-8);
  });
  it.each(siegmund)(
    'Siegmund, h = $h, shift $shift',
    ({ k, h, shift, arl_upper, arl_lower, arl_two_sided }) => {
      const own = answered(siegmundRunLength({ k, h, shift }));
      const tolerance = cusum.tolerance.siegmund_rel;
      expectAllRelative(
        [own.upper, own.lower, own.runLength],
        [arl_upper, arl_lower, arl_two_sided],
        tolerance,
      );
    },
  );
  it('the interval for a wanted run length is found again', () => {
    expectRelative(answered(cusumIntervalFor(465.443506032, 0.5)).h, 5, 1e-7);
  });
});

/** Source: Lucas & Saccucci, Technometrics 32 (1990), and Crowder (1987), as tabled by Montgomery; values from memory. */
describe('EWMA run lengths', () => {
  it.each([
    [0.4, 3.054, 500, 14.3],
    [0.25, 2.998, 500, 11.1],
    [0.2, 2.962, 500, 10.5],
    [0.1, 2.814, 500, 10.3],
    [0.05, 2.615, 500, 11.4],
  ])('λ = %s, width %s', (lambda, width, inControl, shifted) => {
    expectRelative(answered(ewmaRunLength({ lambda, width })).runLength, inControl, 0.002);
    expectRelative(answered(ewmaRunLength({ lambda, width, shift: 1 })).runLength, shifted, 0.005);
  });
  it('λ = 1 is the Shewhart chart', () => {
    expectRelative(answered(ewmaRunLength({ lambda: 1, width: 3 })).runLength, 370.3983473449564, 1e-9);
    expectRelative(answered(shewhartWidthFor(370.3983473449564)).width, 3, 1e-9);
  });
  it('the width for a wanted run length is found again', () => {
    const { runLength } = answered(ewmaRunLength({ lambda: 0.2, width: 2.7 }));
    expectRelative(answered(ewmaWidthFor(runLength, 0.2)).width, 2.7, 1e-6);
  });
});

/** Source: Champ & Woodall, Technometrics 29 (1987). Computed by a separate Markov chain; eight values from memory. */
describe('run lengths of a Shewhart chart with run rules', () => {
  it.each(rules.expected.table)(
    'Western Electric rules $rules',
    ({ rules: names, arl, remembered_published_arl0 }) => {
      const chosen = [...names].map((name) => westernElectricRules[Number(name) - 1]!);
      for (const [shift, expected] of Object.entries(arl)) {
        expectRelative(
          answered(runRulesRunLength(chosen, Number(shift))).runLength,
          expected,
          rules.tolerance.rel,
        );
      }
      const { runLength } = answered(runRulesRunLength(chosen));
      expectRelative(runLength, remembered_published_arl0, 0, rules.tolerance.published_abs);
    },
  );
  it.each([
    [7, rules.expected.run7_only],
    [8, rules.expected.run8_only],
    [9, rules.expected.run9_only],
  ])('%s in a row on one side alone: 2ⁿ − 1', (n, expected) => {
    const run = [{ code: 'run', kind: 'beyond', count: n, of: n, sigma: 0, sides: 'same' } as const];
    expectRelative(answered(runRulesRunLength(run)).runLength, expected, 1e-9);
    expectRelative(expected, 2 ** n - 1, 1e-9);
  });
  it('one beyond 3 σ or nine in a row', () => {
    const run = { code: 'run', kind: 'beyond', count: 9, of: 9, sigma: 0, sides: 'same' } as const;
    const { runLength } = answered(runRulesRunLength([westernElectricRules[0]!, run]));
    expectRelative(runLength, rules.expected.rule1_plus_9_in_a_row_arl0, 1e-9);
  });
});

// Source: ASTM MNL7, Montgomery app. VI. Computed by numerical integration with scipy 1.10.1; tables from memory.
it.each(constants.expected.rows)('chart constants for subgroups of $n', ({ n, ...expected }) => {
  const own = answered(chartConstants(n));
  for (const [name, value] of Object.entries(expected)) {
    expectRelative(own[name as 'd2'], value, constants.tolerance.rel, 1e-8);
  }
  expect(own.d2).toBeGreaterThan(1);
});
