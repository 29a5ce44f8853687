import { describe, expect, it } from 'vitest';
import { filterSeries } from '../../../shared/numerics/filter-run.ts';
import { runObserver } from '../../../shared/numerics/observer.ts';
import { steadyFilter } from '../../../shared/numerics/riccati.ts';
import { answered } from '../../reference/expectations.ts';
import { largestDifference, randomModel, randomSeries } from './random-models.ts';

describe('fixed-gain observer', () => {
  it('equals the filter whose gain has converged', () => {
    const model = randomModel(21, 4, 2, 2);
    const series = randomSeries(21, 800, 2, 2);
    const { filterGain, predictedCovariance } = answered(steadyFilter(model));
    const filter = answered(filterSeries(model, model, { x0: model.x0, P0: predictedCovariance }, series));
    const observer = answered(runObserver(model, { form: 'filter', gain: filterGain }, model.x0, series));
    expect(largestDifference(observer.z, filter.z)).toBeLessThan(1e-9);
  });

  it('runs on by the model where a reading is missing, channel by channel', () => {
    const model = randomModel(22, 3, 2, 1, { feedthrough: true });
    const series = randomSeries(22, 300, 2, 1, 0.3);
    const { filterGain: L } = answered(steadyFilter(model));
    const run = answered(runObserver(model, { form: 'filter', gain: L }, model.x0, series));
    let x = model.x0;
    for (let k = 0; k < 300; k++) {
      const u = series.u[k]!;
      const v = model.C.map((row, j) => {
        const expected = row.reduce((sum, c, i) => sum + c * x[i]!, model.D[j]![0]! * u);
        const y = series.y[2 * k + j]!;
        return Number.isNaN(y) ? 0 : y - expected;
      });
      const filtered = x.map((value, i) => value + L[i]![0]! * v[0]! + L[i]![1]! * v[1]!);
      const z = model.H[0]!.reduce((sum, h, i) => sum + h * filtered[i]!, model.F[0]![0]! * u);
      expect(Math.abs(run.z[k]! - z)).toBeLessThan(1e-9);
      x = model.A.map((row, i) => row.reduce((sum, a, j) => sum + a * filtered[j]!, model.B[i]![0]! * u));
    }
  });
});
