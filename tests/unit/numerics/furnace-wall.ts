/* A furnace wall of three lumps, the shell measured, the hot face estimated: the plant of the observer tests. */

import { discretise } from '../../../shared/numerics/discretise.ts';
import { placeGain, settlingPoles } from '../../../shared/numerics/gain-placement.ts';
import { thermalNetwork } from '../../../shared/numerics/thermal-network.ts';
import { answered } from '../../reference/expectations.ts';

export const wall = answered(
  thermalNetwork({
    unit: '°C',
    nodes: [
      { name: 'hot face', heatCapacity: 3e5 },
      { name: 'middle', heatCapacity: 4e5 },
      { name: 'shell', heatCapacity: 2e5 },
    ],
    boundaries: [{ name: 'gas' }, { name: 'air' }],
    links: [
      { between: ['gas', 'hot face'], conductance: 40 },
      { between: ['hot face', 'middle'], conductance: 12 },
      { between: ['middle', 'shell'], conductance: 12 },
      { between: ['shell', 'air'], conductance: 15 },
    ],
    heats: [],
    measured: ['shell'],
    estimated: ['hot face'],
  }),
).model;
export const { model: sampled } = answered(discretise(wall, 60));
export const noise = {
  Q: [
    [4, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ],
  R: [[0.25]],
};
export const inputs = (N: number) =>
  Float64Array.from({ length: 2 * N }, (_, i) => (i % 2 ? 25 : 900 + 50 * Math.sin(i / 99)));

/** Runs the plant x[k+1] = A x + B u itself and returns its readings and states. */
export function simulate(
  model: {
    A: readonly (readonly number[])[];
    B: readonly (readonly number[])[];
    C: readonly (readonly number[])[];
  },
  x0: number[],
  u: Float64Array,
) {
  const p = model.B[0]!.length;
  const N = u.length / p;
  const y: number[] = [];
  const states: number[][] = [];
  let x = x0;
  for (let k = 0; k < N; k++) {
    states.push(x);
    model.C.forEach((row) => y.push(row.reduce((sum, c, i) => sum + c * x[i]!, 0)));
    x = model.A.map((row, i) => {
      const own = row.reduce((sum, a, j) => sum + a * x[j]!, 0);
      return own + model.B[i]!.reduce((sum, b, j) => sum + b * u[k * p + j]!, 0);
    });
  }
  return { y: Float64Array.from(y), states };
}

export const gainFor = (hours: number) => {
  const { poles } = answered(settlingPoles({ count: 3, settling: hours * 3600, damping: 0.8 }, sampled));
  return answered(placeGain(sampled, poles));
};
