import { describe, expect, it } from 'vitest';
import {
  filteredInput,
  laggedInput,
  productInput,
  transformedInput,
} from '../../../shared/numerics/input-transforms.ts';
import { bestLag } from '../../../shared/numerics/lag-hint.ts';
import {
  steadyStateStart,
  steadyStateStep,
  steadyStateTest,
  usualSteadyState,
} from '../../../shared/numerics/steady-state.ts';
import { autoregression, seededRandom } from '../../trials/seeded-random.ts';
import { answered, expectAllRelative, expectRelative } from '../../reference/expectations.ts';

const minute = 60_000;
const series = (values: number[], quality?: number[], at?: number[]) => ({
  at: Float64Array.from(at ?? values.map((_, i) => i * minute)),
  value: Float64Array.from(values),
  quality: Uint8Array.from(quality ?? values.map(() => 0)),
});
const filter = { timeConstantMs: 10 * minute, holdLimitMs: 5 * minute };

describe('inputs before a regression', () => {
  it('a first-order filter answers a step with 1 − e^(−t/τ), at any spacing of the readings', () => {
    const at = [0, 1, 3, 4, 8, 9, 14].map((m) => m * minute);
    const own = answered(filteredInput(series([0, 1, 1, 1, 1, 1, 1], undefined, at), filter));
    // The step is seen with the reading at one minute and held from there on.
    expectAllRelative(
      own.value.slice(1),
      at.slice(1).map((t) => 1 - Math.exp(-(t - minute) / (10 * minute))),
      1e-12,
    );
  });

  it('bridges a Bad reading within the hold limit and starts again after a longer gap', () => {
    const own = answered(
      filteredInput(
        series(
          [5, 99, 5, 7],
          [0, 2, 0, 0],
          [0, 1, 2, 30].map((m) => m * minute),
        ),
        filter,
      ),
    );
    expect([...own.quality]).toEqual([0, 2, 0, 0]);
    expect([...own.value]).toEqual([5, 5, 5, 7]);
  });

  it('an Uncertain input makes an Uncertain output', () => {
    expect([...answered(filteredInput(series([1, 2, 3], [0, 1, 0]), filter)).quality]).toEqual([0, 1, 1]);
  });

  it('a lag moves the instants, a transform the values; where it is not defined the reading turns Bad', () => {
    expect([...answered(laggedInput(series([1, 2]), 90_000)).at]).toEqual([90_000, 150_000]);
    const logs = answered(transformedInput(series([1, Math.E, 0, -1]), 'log'));
    expectAllRelative(logs.value, [0, 1, 0, -1], 1e-15);
    expect([...logs.quality]).toEqual([0, 0, 2, 2]);
    expect([...answered(transformedInput(series([4, 0]), 'reciprocal')).value]).toEqual([0.25, 0]);
  });

  it('a product meets the second input between its readings', () => {
    const own = answered(
      productInput(series([2, 3], undefined, [30_000, 10 * minute]), series([10, 20]), 5 * minute),
    );
    expect([...own.value]).toEqual([30, 3]);
    expect([...own.quality]).toEqual([0, 2]);
  });

  it('the correlation hint finds the delay of one series behind another', () => {
    const a = autoregression(seededRandom(1), 400, 0.7);
    const b = a.map((_, i) => -2 * (a[Math.max(0, i - 4)] ?? 0));
    const hint = answered(bestLag(a, b, 10));
    expect(hint.lag).toBe(4);
    expectRelative(hint.r, -1, 1e-9);
  });
});

describe('steady state', () => {
  it('one reading at a time agrees with the series', () => {
    const readings = autoregression(seededRandom(2), 100, 0.4);
    const { points } = answered(steadyStateTest(readings));
    let state = steadyStateStart(readings[0]!);
    for (const [i, point] of points.entries()) {
      const step = steadyStateStep(state, readings[i + 1]!, usualSteadyState);
      state = step.state;
      expect(step.point).toEqual(point);
    }
  });

  it('is about 1 on white noise, far above on a ramp, and a motionless signal is steady', () => {
    const noise = autoregression(seededRandom(3), 5000, 0);
    const ratios = answered(steadyStateTest(noise))
      .points.slice(100)
      .map(({ ratio }) => ratio!);
    expectRelative(ratios.reduce((a, b) => a + b, 0) / ratios.length, 1, 0.08);
    const ramp = noise.map((value, i) => value + 0.7 * i);
    const late = answered(steadyStateTest(ramp)).points.slice(100);
    expect(late.filter(({ steady }) => steady).length / late.length).toBeLessThan(0.01);
    expect(
      answered(steadyStateTest([3, 3, 3, 3])).points.every(({ steady, ratio }) => steady && ratio === null),
    ).toBe(true);
  });

  it('does not depend on unit or level', () => {
    const noise = autoregression(seededRandom(4), 50, 0);
    const one = answered(steadyStateTest(noise)).points.map(({ ratio }) => ratio!);
    const two = answered(steadyStateTest(noise.map((value) => 8 * value + 1024))).points.map(
      ({ ratio }) => ratio!,
    );
    expectAllRelative(two, one, 1e-9);
  });
});
