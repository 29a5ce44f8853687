import { describe, expect, it } from 'vitest';
import { processNoise, zeroOrderHold } from '../../../shared/numerics/discretise.ts';
import { gridSeries } from '../../../shared/numerics/grid-series.ts';
import { kalmanFilter } from '../../../shared/numerics/kalman.ts';
import { filterRecords } from '../../../shared/numerics/kalman-records.ts';
import { answered, expectRelative } from '../../reference/expectations.ts';

const A = [
  [-0.02, 0.01],
  [0.015, -0.03],
];
const B = [[0.01], [0.002]];
const density = [
  [0.02, 0.001],
  [0.001, 0.01],
];
const start = {
  x0: [3, -1],
  P0: [
    [2, 0.1],
    [0.1, 1],
  ],
};
const sensors = { fast: { row: [1, 0], variance: 0.3 }, slow: { row: [0.5, 1], variance: 0.05 } };

describe('records at any time', () => {
  it('equal the grid where they lie on one, with sensors of different rates', () => {
    const T = 5;
    const N = 60;
    const held = answered(zeroOrderHold(A, B, T));
    const { Q } = answered(
      processNoise(
        A,
        [
          [1, 0],
          [0, 1],
        ],
        density,
        T,
      ),
    );
    const u = Float64Array.from({ length: N }, (_, k) => Math.sin(k / 9));
    const y = Float64Array.from({ length: 2 * N }, (_, i) => {
      const k = i >> 1;
      return i % 2 === 0 ? Math.cos(k / 5) : k % 6 === 0 ? Math.sin(k / 7) : NaN;
    });
    const model = {
      ...held,
      C: [
        [1, 0],
        [0.5, 1],
      ],
    };
    const grid = answered(
      kalmanFilter(
        model,
        {
          Q,
          R: [
            [0.3, 0],
            [0, 0.05],
          ],
        },
        start,
        { u, y },
      ),
    );
    const records = Array.from({ length: N }, (_, k) => [
      { at: k * T, sensor: 'fast', value: y[2 * k]! },
      ...(k % 6 === 0 ? [{ at: k * T, sensor: 'slow', value: y[2 * k + 1]! }] : []),
    ]).flat();
    const inputs = Array.from(u, (value, k) => ({ at: k * T, u: [value] }));
    const run = answered(filterRecords({ A, B, density, sensors }, start, records, inputs));
    expectRelative(run.logLikelihood, grid.logLikelihood, 1e-10);
    const last = run.steps[run.steps.length - 1]!.filtered;
    expectRelative(last.x.get(0, 0), grid.steps[N - 1]!.filtered.x.get(0, 0), 1e-9);
    expectRelative(last.P.get(1, 1), grid.steps[N - 1]!.filtered.P.get(1, 1), 1e-9);
  });

  it('an input that changes between two records acts from its own instant on', () => {
    const records = [
      { at: 0, sensor: 'fast', value: null },
      { at: 30, sensor: 'fast', value: null },
    ];
    const inputs = [
      { at: 0, u: [0] },
      { at: 12, u: [4] },
    ];
    const run = answered(filterRecords({ A, B, density, sensors }, start, records, inputs));
    const first = answered(zeroOrderHold(A, B, 12));
    const second = answered(zeroOrderHold(A, B, 18));
    const apply = (M: number[][], x: number[]) => M.map((row) => row[0]! * x[0]! + row[1]! * x[1]!);
    const expected = apply(second.A, apply(first.A, start.x0)).map((v, i) => v + 4 * second.B[i]![0]!);
    expect(run.steps[1]!.predicted.x.get(0, 0)).toBeCloseTo(expected[0]!, 12);
    expect(run.steps[1]!.predicted.x.get(1, 0)).toBeCloseTo(expected[1]!, 12);
  });

  it.each([
    [
      'records out of order',
      [
        { at: 5, sensor: 'fast', value: 1 },
        { at: 4, sensor: 'fast', value: 1 },
      ],
      'not-sorted',
      'records[1].at',
    ],
    ['an unknown sensor', [{ at: 5, sensor: 'none', value: 1 }], 'out-of-range', 'records[0].sensor'],
    [
      'a value that is no number',
      [{ at: 5, sensor: 'fast', value: NaN }],
      'non-finite-input',
      'records[0].value',
    ],
  ])('refuses %s', (_, records, reason, field) => {
    expect(filterRecords({ A, density, sensors }, start, records)).toMatchObject({
      ok: false,
      reason,
      field,
    });
  });

  it('refuses a sensor without noise and inputs that begin too late', () => {
    const exact = { ...sensors, fast: { row: [1, 0], variance: 0 } };
    expect(filterRecords({ A, density, sensors: exact }, start, [])).toMatchObject({
      reason: 'singular',
      field: 'sensors.fast.variance',
    });
    const late = filterRecords(
      { A, B, density, sensors },
      start,
      [{ at: 0, sensor: 'fast', value: 1 }],
      [{ at: 3, u: [1] }],
    );
    expect(late).toMatchObject({ reason: 'not-sorted', field: 'inputs[0].at' });
  });
});

describe('tags on a grid', () => {
  it('leaves missing outputs missing and holds missing inputs, marking them', () => {
    const packed = answered(
      gridSeries(
        [Float64Array.of(NaN, 2, NaN, 4)],
        [Float64Array.of(1, NaN, 3, 4), Float64Array.of(5, 6, 7, NaN)],
      ),
    );
    expect(Array.from(packed.u)).toEqual([2, 2, 2, 4]);
    expect(Array.from(packed.y)).toEqual([1, 5, NaN, 6, 3, 7, 4, NaN]);
    expect(Array.from(packed.heldInputs)).toEqual([1, 0, 1, 0]);
  });

  it('refuses columns of different length and an input without any value', () => {
    expect(gridSeries([new Float64Array(3)], [new Float64Array(4)])).toMatchObject({
      reason: 'wrong-shape',
      field: 'inputs[0]',
      needed: 4,
      got: 3,
    });
    expect(gridSeries([new Float64Array(4).fill(NaN)], [new Float64Array(4)])).toMatchObject({
      reason: 'no-estimate',
      field: 'inputs[0]',
    });
  });
});
