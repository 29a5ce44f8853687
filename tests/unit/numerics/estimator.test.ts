import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { regressionEstimator } from '../../../shared/numerics/estimator.ts';
import { gridWithin, holdOnGrid } from '../../../shared/numerics/grid.ts';

const series = (points: [number, number, number?][]) => ({
  at: Float64Array.from(points, ([at]) => at),
  value: Float64Array.from(points, ([, value]) => value),
  quality: Uint8Array.from(points, ([, , quality]) => quality ?? 0),
});

describe('the grid rule', () => {
  it('takes the latest reading at or before each instant, up to the hold limit', () => {
    const grid = { startMs: 0, stepMs: 10, n: 6 };
    const column = holdOnGrid(
      series([
        [0, 1],
        [19, 2],
        [20, 3],
      ]),
      grid,
      15,
    );
    expect([...column.value]).toEqual([1, 1, 3, 3, NaN, NaN]);
    expect([...column.quality]).toEqual([0, 0, 0, 0, 2, 2]);
  });

  it('lets a Bad reading stand for nothing, and no older one through it', () => {
    const column = holdOnGrid(
      series([
        [0, 1],
        [10, 5, 2],
        [20, 3, 1],
      ]),
      { startMs: 0, stepMs: 10, n: 3 },
      100,
    );
    expect([...column.value]).toEqual([1, NaN, 3]);
    expect([...column.quality]).toEqual([0, 2, 1]);
  });

  it('lies on the same instants whichever period is computed', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 1e12 }),
        fc.integer({ min: 1, max: 1e6 }),
        fc.integer({ min: 1, max: 86_400_000 }),
        (from, span, step) => {
          const grid = gridWithin(from, from + span, step);
          expect(grid.startMs % step).toBe(0);
          if (grid.n > 0) expect(grid.startMs + (grid.n - 1) * step).toBeLessThanOrEqual(from + span);
          expect(grid.startMs + grid.n * step).toBeGreaterThan(from + span);
        },
      ),
    );
  });
});

describe('a regression', () => {
  const estimator = regressionEstimator({
    intercept: 5,
    coefficients: [2, -3],
    residualSd: 0.4,
    holdLimitMs: 100,
  });

  it('adds up its terms, and has no estimate where an input is absent', () => {
    const grid = { startMs: 0, stepMs: 10, n: 3 };
    const a = holdOnGrid(
      series([
        [0, 1],
        [10, 2],
        [20, 3],
      ]),
      grid,
      5,
    );
    const b = holdOnGrid(
      series([
        [0, 1],
        [20, 1, 1],
      ]),
      grid,
      5,
    );
    const { estimate } = estimator.run(grid, [a, b], estimator.start());
    expect([...estimate.value]).toEqual([4, NaN, 8]);
    expect([...estimate.quality]).toEqual([0, 2, 1]);
    expect(estimate.sd).toBe(0.4);
  });

  it('gives the same run in two parts as at once', () => {
    fc.assert(
      fc.property(
        fc.array(fc.tuple(fc.integer({ min: 0, max: 500 }), fc.double({ min: -50, max: 50, noNaN: true })), {
          maxLength: 40,
        }),
        fc.integer({ min: 0, max: 20 }),
        (points, cut) => {
          const readings = series(
            [...new Map(points.map((point) => [point[0], point])).values()].sort((x, y) => x[0] - y[0]),
          );
          const whole = { startMs: 0, stepMs: 25, n: 20 };
          const first = { ...whole, n: cut };
          const second = { startMs: cut * 25, stepMs: 25, n: 20 - cut };
          const run = (grid: typeof whole) => {
            const column = holdOnGrid(readings, grid, 60);
            return [...estimator.run(grid, [column, column], estimator.start()).estimate.value];
          };
          expect([...run(first), ...run(second)]).toEqual(run(whole));
        },
      ),
    );
  });
});
