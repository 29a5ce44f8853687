import { describe, expect, it } from 'vitest';
import {
  chronologicalFolds,
  crossValidatePls,
  crossValidateRidge,
} from '../../../shared/numerics/cross-validation.ts';
import { buildValidityRegion, judgePoint } from '../../../shared/numerics/validity-region.ts';
import { fitLeastSquares, quadraticForm } from '../../../shared/numerics/regression.ts';
import { seededRandom } from '../../trials/seeded-random.ts';
import { answered, expectRelative } from '../../reference/expectations.ts';

/** Two inputs that move together and a third of its own. */
function training(seed: number, n: number) {
  const random = seededRandom(seed);
  const a = Float64Array.from({ length: n }, () => 100 + 10 * random.normal());
  const b = a.map((value) => 2 * value + random.normal());
  const c = Float64Array.from({ length: n }, () => random.normal());
  return { columns: [a, b, c], names: ['a', 'b', 'c'] };
}

describe('validity region', () => {
  const { columns, names } = training(1, 200);
  const region = answered(buildValidityRegion(columns, names));

  it('keeps two of the three directions and accepts nearly all of its own training', () => {
    expect(region.kept).toBe(2);
    const judged = Array.from({ length: 200 }, (_, i) =>
      answered(
        judgePoint(
          region,
          columns.map((column) => column[i]!),
        ),
      ),
    );
    expect(judged.filter(({ inside }) => inside).length).toBeGreaterThan(190);
  });

  it('names the input that is beyond its range', () => {
    const judged = answered(judgePoint(region, [100, 200, 9]));
    expect(judged.reasons).toContain('range');
    expect(judged.outside).toEqual([{ name: 'c', value: 9, low: region.low[2], high: region.high[2] }]);
  });

  it('sees two inputs that stop moving together though each is within its range', () => {
    const judged = answered(judgePoint(region, [110, 180, 0]));
    expect(judged.outside).toEqual([]);
    expect(judged.reasons).toContain('spe');
    expect(judged.speContributions[2]).toBeLessThan(0.1);
    expectRelative(
      judged.speContributions.reduce((a, b) => a + b, 0),
      1,
      1e-12,
    );
  });

  it('its leverage is that of a regression on the same inputs', () => {
    const random = seededRandom(2);
    const y = columns[0]!.map((value) => value + random.normal());
    const fit = answered(fitLeastSquares({ columns, names, y, intercept: true }));
    const x = [93, 189, 1.5];
    const away = x.map((value, j) => value - fit.centres[j]!);
    expectRelative(
      answered(judgePoint(region, x)).leverage,
      1 / 200 + quadraticForm(fit.unscaledCovariance, away),
      1e-8,
    );
  });

  it('does not depend on the units of the inputs', () => {
    const scaled = [columns[0]!.map((value) => 1000 * value - 7), columns[1]!, columns[2]!];
    const other = answered(buildValidityRegion(scaled, names));
    const one = answered(judgePoint(region, [110, 215, 1]));
    const two = answered(judgePoint(other, [109_993, 215, 1]));
    expectRelative(two.t2, one.t2, 1e-6);
    expectRelative(two.spe, one.spe, 1e-6);
  });

  it('about 1 in 100 new points of the same kind lies beyond each joint limit', () => {
    const fresh = training(3, 4000).columns;
    const judged = Array.from({ length: 4000 }, (_, i) =>
      answered(
        judgePoint(
          region,
          fresh.map((column) => column[i]!),
        ),
      ),
    );
    const share = (reason: 't2' | 'spe') =>
      judged.filter(({ reasons }) => reasons.includes(reason)).length / 4000;
    expect(share('t2')).toBeLessThan(0.03);
    expect(share('t2')).toBeGreaterThan(0.002);
    expect(share('spe')).toBeLessThan(0.03);
    expect(share('spe')).toBeGreaterThan(0.002);
  });
});

describe('chronological folds', () => {
  it('cover every row once in time order and never train on their own block', () => {
    const { folds } = answered(chronologicalFolds(23, 5, 'contiguous'));
    expect(folds.map(({ from, to }) => to - from)).toEqual([5, 5, 5, 4, 4]);
    for (const { from, to, training } of folds) {
      expect(training.filter((i) => i >= from && i < to)).toEqual([]);
      expect(training.length + to - from).toBe(23);
    }
  });

  it('forward folds train on the past alone', () => {
    const { folds } = answered(chronologicalFolds(23, 5, 'forward'));
    expect(folds).toHaveLength(4);
    for (const { from, training } of folds) expect(Math.max(...training)).toBe(from - 1);
  });

  it('PLS finds the two directions that carry y, ridge prefers some penalty among collinear inputs', () => {
    const { columns, names } = training(4, 80);
    const random = seededRandom(5);
    const y = columns[0]!.map((value, i) => value + 3 * columns[2]![i]! + random.normal());
    const options = { folds: 8, scheme: 'contiguous' as const };
    const pls = answered(crossValidatePls({ columns, names, y }, { ...options, most: 3, scale: true }));
    expect(pls.best).toBeGreaterThanOrEqual(2);
    expect(pls.rmsecv[2]!).toBeLessThan(1.3);
    const ridge = answered(
      crossValidateRidge({ columns, names, y, intercept: true }, { ...options, penalties: [0, 1, 1e6] }),
    );
    expect(ridge.best).toBeLessThan(2);
    expect(ridge.predicted).toBe(80);
  });
});
