import { describe, expect, it } from 'vitest';
import { fitLeastSquares } from '../../shared/numerics/regression.ts';
import { fitRidge } from '../../shared/numerics/ridge.ts';
import { agreeingDigits, answered, expectAllRelative, expectRelative } from './expectations.ts';
import collinearity from './values/collinearity-longley.json';
import filip from './values/strd-filip.json';
import longley from './values/strd-longley.json';
import noIntercept from './values/strd-noint1.json';
import norris from './values/strd-norris.json';
import wampler1 from './values/strd-wampler1.json';
import wampler2 from './values/strd-wampler2.json';
import wampler4 from './values/strd-wampler4.json';

type Certified = {
  inputs: { data: number[][] };
  expected: {
    coefficients: Record<string, number>;
    standard_errors: Record<string, number>;
    residual_sd: number;
    R2: number;
  };
  tolerance: { min_LRE_coefficients: number };
};

const powers = (x: number, degree: number) => Array.from({ length: degree }, (_, k) => x ** (k + 1));
const longleyInputs = ['x1', 'x2', 'x3', 'x4', 'x5', 'x6'];

// Source: NIST Statistical Reference Datasets, linear regression (15 certified digits). Read in a published copy.
const sets: [name: string, set: Certified, inputsOf: (row: number[]) => number[], intercept: boolean][] = [
  ['Norris (lower difficulty)', norris, (row) => powers(row[1]!, 1), true],
  ['NoInt1 (average, no intercept)', noIntercept, (row) => powers(row[1]!, 1), false],
  ['Longley (higher)', longley, (row) => row.slice(1), true],
  ['Filip (higher)', filip, (row) => powers(row[1]!, 10), true],
  ['Wampler1 (higher)', wampler1, (row) => powers(row[1]!, 5), true],
  ['Wampler2 (higher)', wampler2, (row) => powers(row[1]!, 5), true],
  ['Wampler4 (higher)', wampler4, (row) => powers(row[1]!, 5), true],
];

describe('least squares reproduces the certified values of NIST StRD', () => {
  it.each(sets)('%s', (_name, set, inputsOf, intercept) => {
    const inputs = set.inputs.data.map(inputsOf);
    const fit = answered(
      fitLeastSquares({
        columns: inputs[0]!.map((_, j) => inputs.map((row) => row[j]!)),
        names: inputs[0]!.map((_, j) => `x${j + 1}`),
        y: set.inputs.data.map((row) => row[0]!),
        intercept,
      }),
    );
    const withIntercept = (value: number, rest: Float64Array) => (intercept ? [value, ...rest] : [...rest]);
    const coefficients = withIntercept(fit.intercept, fit.coefficients);
    const standardErrors = withIntercept(fit.interceptStandardError, fit.standardErrors);
    const digits = set.tolerance.min_LRE_coefficients;
    for (const [k, certified] of Object.values(set.expected.coefficients).entries()) {
      expect(agreeingDigits(coefficients[k]!, certified)).toBeGreaterThan(digits);
    }
    for (const [k, certified] of Object.values(set.expected.standard_errors).entries()) {
      if (certified > 0) expect(agreeingDigits(standardErrors[k]!, certified)).toBeGreaterThan(digits);
      else expect(standardErrors[k]!).toBeLessThan(1e-6);
    }
    if (set.expected.residual_sd > 0) {
      expect(agreeingDigits(fit.residualSd, set.expected.residual_sd)).toBeGreaterThan(9);
    } else expect(fit.residualSd).toBeLessThan(1e-6);
    expect(agreeingDigits(fit.r2, set.expected.R2)).toBeGreaterThan(11);
  });

  it('names the Longley columns that stand in for one another', () => {
    const inputs = longley.inputs.data.map((row) => row.slice(1));
    const fit = answered(
      fitLeastSquares({
        columns: longleyInputs.map((_, j) => inputs.map((row) => row[j]!)),
        names: longleyInputs,
        y: longley.inputs.data.map((row) => row[0]!),
        intercept: true,
      }),
    );
    expect(fit.collinearGroups.flat()).toEqual(expect.arrayContaining(['x2', 'x5', 'x6']));
    expect(fit.collinearGroups.flat()).not.toContain('x4');
  });
});

// Source: Longley, JASA 62 (1967), R datasets; computed with R 4.2.2 MASS 7.3-58.2; VIFs from memory, reproduced.
describe('collinearity and ridge on the Longley data agree with R', () => {
  const { rows, header, order } = collinearity.inputs;
  const columns = order.map((name) => rows.map((row) => row[header.indexOf(name)]!));
  const y = rows.map((row) => row[header.indexOf('Employed')]!);
  const data = { columns, names: order, y, intercept: true };
  const tolerance = collinearity.tolerance.rel;

  it('variance inflation factors and condition number', () => {
    const fit = answered(fitLeastSquares(data));
    expectAllRelative(fit.vif, collinearity.expected.vif, tolerance);
    expectRelative(fit.conditionNumber, collinearity.expected.condition_number, tolerance);
  });

  it.each(Object.entries(collinearity.expected.ridge_coefficients_intercept_first))(
    'ridge coefficients with penalty %s in the convention of lm.ridge',
    (penalty, expected) => {
      const fit = answered(fitRidge(data, Number(penalty)));
      expectAllRelative([fit.intercept, ...fit.coefficients], expected, tolerance);
    },
  );
});
