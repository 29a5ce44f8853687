import { describe, expect, it } from 'vitest';
import { filterSeries } from '../../../shared/numerics/filter-run.ts';
import { stationaryStart } from '../../../shared/numerics/filter-start.ts';
import { answered } from '../../reference/expectations.ts';
import { inputs, noise, sampled } from './furnace-wall.ts';
import { largestDifference, randomModel, randomSeries } from './random-models.ts';
import type { RandomModel } from './random-models.ts';

describe('fast filter over long histories', () => {
  const model = randomModel(11, 3, 2, 1);

  it('holds the gain once P has converged, lets go when the pattern changes and takes hold again', () => {
    const series = randomSeries(3, 3000, 2, 1);
    for (let k = 1000; k < 1200; k++) series.y[2 * k + 1] = NaN;
    for (let k = 2000; k < 2003; k++) series.y.fill(NaN, 2 * k, 2 * k + 2);
    const free = answered(filterSeries(model, model, model, series, { switching: false }));
    const held = answered(filterSeries(model, model, model, series));
    expect(held.fixedGainSteps).toBeGreaterThan(2000);
    expect(held.fixedGainSteps).toBeLessThan(2900);
    expect(largestDifference(held.z, free.z)).toBeLessThan(1e-10);
    expect(largestDifference(held.sd, free.sd)).toBeLessThan(1e-9);
  });

  it('holds the gain of a slow model no sooner than P has converged to 1e-10', () => {
    const slow = { ...sampled, ...noise };
    const N = 4000;
    const y = Float64Array.from({ length: N }, (_, k) => 130 + 3 * Math.sin(k / 200) + Math.sin(k));
    const start = {
      x0: [700, 400, 100],
      P0: [4e4, 1e4, 1e3].map((p, i) => [0, 1, 2].map((j) => (i === j ? p : 0))),
    };
    const series = { u: inputs(N), y };
    const free = answered(filterSeries(slow, slow, start, series, { switching: false }));
    const held = answered(filterSeries(slow, slow, start, series));
    expect(held.fixedGainSteps).toBeGreaterThan(1000);
    expect(largestDifference(held.z, free.z)).toBeLessThan(1e-9);
    expect(largestDifference(held.sd, free.sd)).toBeLessThan(1e-9);
    const atSwitch = N - held.fixedGainSteps;
    expect(Math.abs(free.sd[atSwitch]! / free.sd[N - 1]! - 1)).toBeLessThan(1e-10);
    expect(Math.abs(free.sd[atSwitch - 400]! / free.sd[N - 1]! - 1)).toBeGreaterThan(1e-12);
  });

  it('holds the gain where two sensors read the same thing', () => {
    const twice = { ...model, C: [model.C[0]!, model.C[0]!] };
    const series = randomSeries(9, 600, 2, 1, 0.02);
    const free = answered(filterSeries(twice, twice, twice, series, { switching: false }));
    const held = answered(filterSeries(twice, twice, twice, series));
    expect(held.fixedGainSteps).toBeGreaterThan(0);
    expect(largestDifference(held.z, free.z)).toBeLessThan(1e-10);
    expect(largestDifference(held.nis, free.nis)).toBeLessThan(1e-9);
  });

  it('goes on from the state that it ended with as if it had never stopped', () => {
    const series = randomSeries(4, 900, 2, 1, 0.1);
    const whole = answered(filterSeries(model, model, model, series));
    const cut = 500;
    const first = answered(
      filterSeries(model, model, model, { u: series.u.slice(0, cut), y: series.y.slice(0, 2 * cut) }),
    );
    const second = answered(
      filterSeries(model, model, first.next, { u: series.u.slice(cut), y: series.y.slice(2 * cut) }),
    );
    expect(largestDifference(second.z, whole.z.slice(cut))).toBeLessThan(1e-10);
    expect(Math.abs(first.logLikelihood + second.logLikelihood - whole.logLikelihood)).toBeLessThan(1e-8);
  });

  it('innovations of a true model are white with unit variance, and NaN where nothing was read', () => {
    const series = randomSeries(5, 400, 2, 1, 0.2);
    const { innovations, nis } = answered(filterSeries(model, model, model, series, { innovations: true }));
    for (let k = 0; k < 400; k++) {
      const [a, b] = [innovations[2 * k]!, innovations[2 * k + 1]!];
      expect(Number.isNaN(a)).toBe(Number.isNaN(series.y[2 * k]!));
      const sum = (Number.isNaN(a) ? 0 : a * a) + (Number.isNaN(b) ? 0 : b * b);
      if (Number.isNaN(nis[k]!)) expect(sum).toBe(0);
      else expect(Math.abs(sum - nis[k]!)).toBeLessThan(1e-9 * (1 + sum));
    }
  });

  it('leaves out what is not wanted', () => {
    const run = answered(
      filterSeries(model, model, model, randomSeries(6, 100, 2, 1), { sd: false, nis: false }),
    );
    expect([run.sd.length, run.nis.length, run.innovations.length]).toEqual([0, 0, 0]);
  });

  it('starts a stable model from where it rests', () => {
    const start = answered(stationaryStart(model, model, [2]));
    const still = answered(
      filterSeries(model, model, start, {
        u: new Float64Array(50).fill(2),
        y: new Float64Array(100).fill(NaN),
      }),
    );
    expect(largestDifference(still.z, new Float64Array(50).fill(still.z[0]!))).toBeLessThan(1e-12);
    expect(largestDifference(still.sd, new Float64Array(50).fill(still.sd[0]!))).toBeLessThan(1e-12);
  });
});

describe('fast filter: refusals name what is at fault', () => {
  const model = randomModel(11, 2, 2, 1);
  const series = randomSeries(3, 40, 2, 1);
  const refusal = (change: Partial<RandomModel>, data = series) =>
    filterSeries({ ...model, ...change }, { ...model, ...change }, { ...model, ...change }, data);

  it.each([
    [
      'singular R',
      refusal({
        R: [
          [1, 1],
          [1, 1],
        ],
      }),
      'singular',
      'R',
    ],
    [
      'R of zero',
      refusal({
        R: [
          [1, 0],
          [0, 0],
        ],
      }),
      'singular',
      'R',
    ],
    [
      'negative Q',
      refusal({
        Q: [
          [1, 0],
          [0, -0.1],
        ],
      }),
      'not-positive-semidefinite',
      'Q',
    ],
    [
      'skew Q',
      refusal({
        Q: [
          [1, 0.5],
          [0, 1],
        ],
      }),
      'not-symmetric',
      'Q',
    ],
    [
      'negative P0',
      refusal({
        P0: [
          [-1, 0],
          [0, 1],
        ],
      }),
      'not-positive-semidefinite',
      'P0',
    ],
    [
      'NaN in A',
      refusal({
        A: [
          [NaN, 0],
          [0, 1],
        ],
      }),
      'non-finite-input',
      'A',
    ],
    ['ragged C', refusal({ C: [[1, 0], [1]] }), 'wrong-shape', 'C'],
    ['short x0', refusal({ x0: [1] }), 'wrong-shape', 'x0'],
    [
      'NaN in u',
      refusal({}, { ...series, u: series.u.map((v, i) => (i === 7 ? NaN : v)) }),
      'non-finite-input',
      'u',
    ],
    [
      'infinity in y',
      refusal({}, { ...series, y: series.y.map((v, i) => (i === 7 ? Infinity : v)) }),
      'non-finite-input',
      'y',
    ],
    ['u too short', refusal({}, { ...series, u: new Float64Array(3) }), 'wrong-shape', 'u'],
    ['no readings', refusal({}, { u: new Float64Array(0), y: new Float64Array(0) }), 'not-enough-data', 'y'],
    [
      'a model that runs away',
      refusal({
        A: [
          [1e200, 0],
          [0, 1e200],
        ],
      }),
      'unstable',
      'A',
    ],
  ])('%s', (_, result, reason, field) => {
    expect(result).toMatchObject({ ok: false, reason, field });
  });
});
