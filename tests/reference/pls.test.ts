import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { crossValidatePls } from '../../shared/numerics/cross-validation.ts';
import { fitPls, plsPredictions } from '../../shared/numerics/pls.ts';
import { answered, expectAllRelative } from './expectations.ts';
import gasoline from './values/pls-gasoline.json';

/**
 * Source: Mevik & Wehrens, J. Stat. Softw. 18(2) 2007; data Kalivas 1997. R 4.2.2 pls 2.8-1; published 0.2966 and 0.2445
 * read in a public script, other published digits from memory.
 */
describe('PLS of gasoline octane on 401 near-infrared channels', () => {
  const [, ...lines] = readFileSync(new URL('./values/gasoline.csv', import.meta.url), 'utf8')
    .trim()
    .split('\n');
  const rows = lines.map((line) => line.split(',').map(Number));
  const dataOf = (part: number[][]) => ({
    columns: part[0]!.slice(1).map((_, j) => Float64Array.from(part, (row) => row[j + 1]!)),
    names: part[0]!.slice(1).map((_, j) => `channel ${j + 1}`),
    y: Float64Array.from(part, (row) => row[0]!),
  });
  const calibration = dataOf(rows.slice(0, 50));
  const tests = rows.slice(50);
  const rel = gasoline.tolerance.rel;
  const { expected } = gasoline;

  it('leave-one-out RMSEP for 0 to 10 components', () => {
    const loo = answered(
      crossValidatePls(calibration, { most: 10, scale: false, folds: 50, scheme: 'contiguous' }),
    );
    expectAllRelative(loo.rmsecv, expected.rmsep_loo_cv, rel);
    for (const [a, printed] of expected.published.cv.entries()) {
      expect(Math.abs(loo.rmsecv[a]! - printed)).toBeLessThanOrEqual(a < 2 ? 0.0006 : 0.00006);
    }
  });

  it('predictions of the ten test samples and their RMSEP', () => {
    const model = answered(fitPls(calibration, { components: 10, scale: false }));
    const predictions = tests.map((row) => plsPredictions(model, row.slice(1)));
    expectAllRelative(
      predictions.map((path) => path[2]!),
      expected.prediction_2comp_test,
      rel,
    );
    const rmsep = expected.rmsep_test.map((_, a) =>
      Math.sqrt(
        predictions.reduce((sum, path, i) => sum + (path[a]! - tests[i]![0]!) ** 2, 0) / tests.length,
      ),
    );
    expectAllRelative(rmsep, expected.rmsep_test, rel);
  });

  it('explained variance of the channels', () => {
    const model = answered(fitPls(calibration, { components: 10, scale: false }));
    expectAllRelative(
      model.xExplained.map((share) => 100 * share),
      expected.x_explained_variance_percent,
      rel,
    );
  });
});
