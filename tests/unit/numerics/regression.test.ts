import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { fitLeastSquares, predictAt, quadraticForm } from '../../../shared/numerics/regression.ts';
import { fitRidge } from '../../../shared/numerics/ridge.ts';
import { fitPls } from '../../../shared/numerics/pls.ts';
import { seededRandom } from '../../trials/seeded-random.ts';
import { answered, expectAllRelative, expectRelative } from '../../reference/expectations.ts';

function randomData(seed: number, n: number, p: number) {
  const random = seededRandom(seed);
  const columns = Array.from({ length: p }, (_, j) =>
    Float64Array.from({ length: n }, () => 10 * j + random.normal()),
  );
  const y = Float64Array.from(
    { length: n },
    (_, i) => columns.reduce((sum, column, j) => sum + (j + 1) * column[i]!, 3) + random.normal(),
  );
  return { columns, names: columns.map((_, j) => `x${j + 1}`), y, intercept: true };
}

describe('least squares', () => {
  it('follows a change of unit of an input, and predicts the same', () => {
    fc.assert(
      fc.property(
        fc.integer(),
        fc.double({ min: 1e-3, max: 1e3, noNaN: true }),
        fc.integer({ min: -100, max: 100 }),
        (seed, unit, shift) => {
          const data = randomData(seed, 30, 3);
          const before = answered(fitLeastSquares(data));
          const converted = data.columns.with(
            0,
            data.columns[0]!.map((value) => unit * value + shift),
          );
          const after = answered(fitLeastSquares({ ...data, columns: converted }));
          expectRelative(after.coefficients[0]! * unit, before.coefficients[0]!, 1e-6);
          expectRelative(after.residualSd, before.residualSd, 1e-8);
          expectRelative(after.r2, before.r2, 1e-8);
          expectRelative(after.leverageMax, before.leverageMax, 1e-6);
          expectAllRelative(after.fitted, before.fitted, 1e-6);
        },
      ),
      { numRuns: 40 },
    );
  });

  it('residuals are orthogonal to every column and fitted values are the predictions', () => {
    const data = randomData(3, 40, 4);
    const fit = answered(fitLeastSquares(data));
    for (const column of data.columns) {
      expect(Math.abs(fit.residuals.reduce((sum, value, i) => sum + value * column[i]!, 0))).toBeLessThan(
        1e-8,
      );
    }
    for (let i = 0; i < 40; i++) {
      expectRelative(
        predictAt(
          fit,
          data.columns.map((column) => column[i]!),
        ),
        fit.fitted[i]!,
        1e-10,
      );
    }
  });

  it('leverages from the covariance sum to the number of parameters', () => {
    const data = randomData(4, 25, 3);
    const fit = answered(fitLeastSquares(data));
    let sum = 0;
    for (let i = 0; i < 25; i++) {
      const away = data.columns.map((column, j) => column[i]! - fit.centres[j]!);
      sum += 1 / 25 + quadraticForm(fit.unscaledCovariance, away);
    }
    expectRelative(sum, 4, 1e-10);
  });

  it('refuses an input that repeats another and names both, and keeps two such pairs apart', () => {
    const data = randomData(5, 30, 5);
    const [a, b, c] = data.columns as [Float64Array, Float64Array, Float64Array];
    const twins = { ...data, columns: [a, b, c, a.map((value) => 2 * value + 1), b.map((value) => -value)] };
    const fit = fitLeastSquares(twins);
    expect(fit).toMatchObject({ ok: false, reason: 'collinear', field: 'columns' });
    if (!fit.ok)
      expect(fit.collinearGroups).toEqual([
        ['x1', 'x4'],
        ['x2', 'x5'],
      ]);
  });

  it('names three inputs that add up to a constant', () => {
    const data = randomData(6, 30, 3);
    const [a, b] = data.columns as [Float64Array, Float64Array];
    const shares = [a, b, a.map((value, i) => 100 - value - b[i]!)];
    const fit = fitLeastSquares({ ...data, columns: shares });
    expect(fit).toMatchObject({ ok: false, reason: 'collinear', collinearGroups: [['x1', 'x2', 'x3']] });
  });

  it('warns of nearly equal inputs without refusing', () => {
    const data = randomData(7, 60, 3);
    const random = seededRandom(8);
    const near = data.columns[0]!.map((value) => value + 0.02 * random.normal());
    const fit = answered(
      fitLeastSquares({ ...data, columns: [...data.columns, near], names: [...data.names, 'x4'] }),
    );
    expect(fit.collinearGroups).toEqual([['x1', 'x4']]);
    expect(fit.vif[0]).toBeGreaterThan(100);
    expect(fit.vif[1]).toBeLessThan(2);
  });

  it('keeps two nearly equal pairs apart although all four move together a little', () => {
    const random = seededRandom(14);
    const common = Float64Array.from({ length: 80 }, () => random.normal());
    const one = common.map((value) => value + random.normal());
    const two = common.map((value) => value + random.normal());
    const near = (column: Float64Array) => column.map((value) => value + 0.05 * random.normal());
    const y = one.map((value, i) => value - two[i]! + random.normal());
    const columns = [one, two, near(one), near(two)];
    const fit = answered(fitLeastSquares({ columns, names: ['a', 'b', 'c', 'd'], y, intercept: true }));
    expect(fit.collinearGroups).toEqual([
      ['a', 'c'],
      ['b', 'd'],
    ]);
  });

  it('refuses a constant input by name, and says how many rows are missing', () => {
    const data = randomData(9, 10, 2);
    expect(
      fitLeastSquares({ ...data, columns: [data.columns[0]!, new Float64Array(10).fill(7)] }),
    ).toMatchObject({
      reason: 'no-spread',
      field: 'x2',
    });
    expect(fitLeastSquares(randomData(1, 3, 2))).toEqual({
      ok: false,
      reason: 'not-enough-data',
      field: 'y',
      needed: 4,
      got: 3,
    });
  });

  it('without an intercept passes through zero', () => {
    const fit = answered(
      fitLeastSquares({ columns: [[1, 2, 3, 4]], names: ['x'], y: [2.1, 3.9, 6.2, 7.8], intercept: false }),
    );
    expect(fit.intercept).toBe(0);
    expectRelative(fit.coefficients[0]!, (2.1 + 7.8 + 18.6 + 31.2) / 30, 1e-12);
    expect(predictAt(fit, [0])).toBe(0);
  });
});

describe('ridge and PLS', () => {
  it('ridge without penalty is least squares; a larger penalty shrinks', () => {
    const data = randomData(10, 30, 3);
    const plain = answered(fitLeastSquares(data));
    expectAllRelative(answered(fitRidge(data, 0)).coefficients, plain.coefficients, 1e-9);
    const size = (penalty: number) => Math.hypot(...answered(fitRidge(data, penalty)).coefficients);
    expect(size(10)).toBeLessThan(size(1));
    expect(answered(fitRidge(data, 10)).effectiveParameters).toBeLessThan(3);
  });

  it('ridge solves what least squares refuses', () => {
    const data = randomData(11, 30, 2);
    const twins = { ...data, columns: [data.columns[0]!, data.columns[0]!] };
    expect(fitRidge(twins, 0)).toMatchObject({ ok: false, reason: 'ill-conditioned' });
    const fit = answered(fitRidge(twins, 1));
    expectRelative(fit.coefficients[0]!, fit.coefficients[1]!, 1e-9);
  });

  it('PLS with every component is least squares, and its residuals shrink with each', () => {
    const data = randomData(12, 30, 3);
    const plain = answered(fitLeastSquares(data));
    const model = answered(fitPls(data, { components: 3, scale: true }));
    expectAllRelative(model.coefficients, plain.coefficients, 1e-8);
    expectRelative(model.intercept, plain.intercept, 1e-8);
    for (let a = 1; a <= 3; a++) expect(model.rmsec[a]!).toBeLessThan(model.rmsec[a - 1]!);
  });

  it('PLS stops where the inputs have nothing left to give', () => {
    const data = randomData(13, 30, 1);
    const model = answered(
      fitPls(
        {
          ...data,
          columns: [data.columns[0]!, data.columns[0]!.map((value) => 3 * value)],
          names: ['a', 'b'],
        },
        { components: 2, scale: true },
      ),
    );
    expect(model.components).toBe(1);
  });
});
