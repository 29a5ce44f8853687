import { describe, expect, it } from 'vitest';
import { placeGain } from '../../shared/numerics/gain-placement.ts';
import { runObserver } from '../../shared/numerics/observer.ts';
import { answered, expectAllRelative } from './expectations.ts';
import item from './values/observer-trajectory.json';

// Source: own numbers, exact rational arithmetic (sympy); Luenberger 1971.
describe('Luenberger observer of a two-lump wall, one reading missing', () => {
  const { Ad: A, Bd: B, C, poles, x0, u, y } = item.inputs;
  const series = { u: Float64Array.from(u.flat()), y: Float64Array.from(y.map((value) => value ?? NaN)) };
  const gain = item.expected.L.map((value) => [value]);

  it('gain for poles 0.8 and 0.7', () => {
    const wanted = poles.map((re) => ({ re, im: 0 }));
    const placed = answered(placeGain({ A, C, domain: 'discrete', step: 60 }, wanted));
    expectAllRelative(placed.predictorGain.flat(), item.expected.L, item.tolerance.rel);
  });

  for (const i of [0, 1]) {
    it(`trajectory of lump ${i + 1}`, () => {
      const H = [[1 - i, i]];
      const run = answered(runObserver({ A, B, C, H }, { form: 'predictor', gain }, x0, series));
      const expected = item.expected.trajectory.map(({ xhat }) => xhat[i]!);
      expectAllRelative([...run.z, run.x[i]!], expected, item.tolerance.rel);
    });
  }

  it('runs open loop with gain 0', () => {
    const run = answered(
      runObserver({ A, B, C, H: [[1, 0]] }, { form: 'predictor', gain: [[0], [0]] }, x0, series),
    );
    const expected = item.expected.trajectory.map(({ open_loop }) => open_loop[0]!);
    expectAllRelative([...run.z, run.x[0]!], expected, item.tolerance.rel);
    expect(run.z.length).toBe(12);
  });
});
