import { describe, expect, it } from 'vitest';
import { fitNoise } from '../../../shared/numerics/noise-fit.ts';
import type { VarianceParameter } from '../../../shared/numerics/noise-fit.ts';
import { hessianOf, maximise } from '../../../shared/numerics/maximise.ts';
import { answered } from '../../reference/expectations.ts';
import { normal } from './random-models.ts';

const model = {
  A: [
    [0.95, 0.03],
    [0.02, 0.9],
  ],
  C: [[0, 1]],
};
const nothing = {
  Q: [
    [0, 0],
    [0, 0],
  ],
  R: [[0]],
};
const start = {
  x0: [0, 0],
  P0: [
    [1, 0],
    [0, 1],
  ],
};
const parameters: VarianceParameter[] = [
  {
    name: 'process',
    in: 'Q',
    pattern: [
      [1, 0],
      [0, 1],
    ],
    start: 0.1,
    low: 1e-6,
    high: 100,
  },
  { name: 'sensor', in: 'R', pattern: [[1]], start: 0.1, low: 1e-6, high: 100 },
];

/** N readings of the model with process variance q and sensor variance r. */
function history(seed: number, N: number, q: number, r: number) {
  const next = normal(seed);
  let x = [0, 0];
  const y = new Float64Array(N);
  for (let k = 0; k < N; k++) {
    y[k] = x[1]! + Math.sqrt(r) * next();
    x = model.A.map((row) => row[0]! * x[0]! + row[1]! * x[1]! + Math.sqrt(q) * next());
  }
  return { u: new Float64Array(0), y };
}

describe('noise variances from history', () => {
  it('are found within their intervals, gaps included', () => {
    const series = history(4, 3000, 0.04, 0.25);
    series.y.fill(NaN, 500, 620);
    const fit = answered(fitNoise(model, nothing, parameters, start, series));
    const [process, sensor] = [fit.parameters[0]!, fit.parameters[1]!];
    expect(process.low).toBeLessThan(0.04);
    expect(process.high).toBeGreaterThan(0.04);
    expect(sensor.low).toBeLessThan(0.25);
    expect(sensor.high).toBeGreaterThan(0.25);
    expect(fit.Q[0]![0]).toBe(fit.parameters[0]!.variance);
    expect(fit.readings).toBe(2880);
  });

  it('are refused where the history shows no process noise at all', () => {
    const result = fitNoise(model, nothing, parameters, start, history(5, 400, 1e-9, 0.25));
    expect(result).toMatchObject({ ok: false, reason: 'cannot-tell', field: 'parameters[0]' });
  });

  it('are refused where two of them do the same', () => {
    const twice = [parameters[0]!, { ...parameters[0]!, name: 'again' }, parameters[1]!];
    const result = fitNoise(model, nothing, twice, start, history(6, 600, 0.04, 0.25));
    expect(result).toMatchObject({ ok: false, reason: 'cannot-tell' });
  });

  it('are refused where a bound keeps the likelihood from its top', () => {
    const tight = [parameters[0]!, { ...parameters[1]!, start: 0.05, high: 0.08 }];
    const result = fitNoise(model, nothing, tight, start, history(8, 2000, 0.04, 0.25));
    expect(result).toMatchObject({
      ok: false,
      reason: 'cannot-tell',
      field: 'parameters[1]',
      figure: expect.closeTo(0.08, 3),
    });
  });

  it('want 20 readings each, and sound bounds', () => {
    expect(fitNoise(model, nothing, parameters, start, history(7, 30, 0.1, 0.1))).toMatchObject({
      reason: 'not-enough-data',
      field: 'y',
      needed: 40,
      got: 30,
    });
    const upside = [{ ...parameters[0]!, low: 2, high: 1 }];
    expect(fitNoise(model, nothing, upside, start, history(7, 300, 0.1, 0.1))).toMatchObject({
      reason: 'out-of-range',
      field: 'parameters[0].high',
    });
    const outside = [{ ...parameters[0]!, start: 1000 }];
    expect(fitNoise(model, nothing, outside, start, history(7, 300, 0.1, 0.1))).toMatchObject({
      reason: 'out-of-range',
      field: 'parameters[0].start',
    });
  });
});

describe('search for a maximum', () => {
  const hill = ([a, b]: readonly number[]) => -((a! - 1) ** 2) - 3 * (b! + 2) ** 2 - (a! - 1) * (b! + 2);

  it('finds the top, or the best point of the box', () => {
    const top = maximise(hill, [4, 4], { low: [-9, -9], high: [9, 9] });
    expect(top.x[0]!).toBeCloseTo(1, 4);
    expect(top.x[1]!).toBeCloseTo(-2, 4);
    const edge = maximise(hill, [4, 4], { low: [2, 0], high: [9, 9] });
    expect(edge.x).toEqual([2, 0]);
  });

  it('second derivatives', () => {
    const [[aa, ab], [ba, bb]] = hessianOf(hill, [0.3, 0.4]) as [[number, number], [number, number]];
    expect([aa, ab, ba, bb].map((value) => Number(value.toFixed(6)))).toEqual([-2, -1, -1, -6]);
  });
});
