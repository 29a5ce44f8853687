import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { discretise } from '../../../shared/numerics/discretise.ts';
import { placeGain } from '../../../shared/numerics/gain-placement.ts';
import { noiseReach, observability } from '../../../shared/numerics/observability.ts';
import { steadyFilter } from '../../../shared/numerics/riccati.ts';
import { thermalNetwork } from '../../../shared/numerics/thermal-network.ts';
import { answered, expectAllRelative } from '../../reference/expectations.ts';
import { randomModel } from './random-models.ts';

describe('what can be seen', () => {
  const blind = answered(
    thermalNetwork({
      unit: '°C',
      nodes: [
        { name: 'seen', heatCapacity: 1000 },
        { name: 'apart', heatCapacity: 2000 },
      ],
      boundaries: [{ name: 'air' }],
      links: [
        { between: ['seen', 'air'], conductance: 2 },
        { between: ['apart', 'air'], conductance: 0.5 },
      ],
      heats: [],
      measured: ['seen'],
      estimated: ['apart'],
    }),
  ).model;

  it('names the state that no output sees and how fast it decays by itself', () => {
    const report = answered(observability(blind));
    const hidden = report.modes.find((mode) => !mode.observable)!;
    expect(report).toMatchObject({ rank: 1, states: 2, observable: false, detectable: true });
    expect(blind.states[hidden.states[0]!.state]!.name).toBe('apart');
    expect(hidden.states).toHaveLength(1);
    expect(hidden.timeConstant).toBeCloseTo(4000, 6);
    expect(report.modes.find((mode) => mode.observable)!.timeConstant).toBeCloseTo(500, 6);
  });

  it('moves only the poles that can be moved, and asks for as many', () => {
    const { model } = answered(discretise(blind, 20));
    expect(
      placeGain(model, [
        { re: 0.5, im: 0 },
        { re: 0.4, im: 0 },
      ]),
    ).toMatchObject({ reason: 'wrong-shape', field: 'poles', needed: 1 });
    const placed = answered(placeGain(model, [{ re: 0.5, im: 0 }]));
    expectAllRelative(placed.poles.map((pole) => pole.re).sort(), [0.5, Math.exp(-20 / 4000)], 1e-9);
    expect(placed.unmoved[0]!.re).toBeCloseTo(Math.exp(-20 / 4000), 12);
    expect(placed.predictorGain[1]).toEqual([0]);
  });

  it('refuses a hidden mode that does not decay', () => {
    const A = [
      [0.9, 0],
      [0, 1],
    ];
    expect(placeGain({ A, C: [[1, 0]], domain: 'discrete', step: 1 }, [{ re: 0.5, im: 0 }])).toMatchObject({
      reason: 'not-detectable',
      field: 'C',
    });
    expect(placeGain({ A, C: [[0, 0]], domain: 'discrete', step: 1 }, [])).toMatchObject({
      reason: 'not-observable',
      field: 'C',
    });
    const steady = {
      A,
      C: [[1, 0]],
      Q: [
        [1, 0],
        [0, 1],
      ],
      R: [[1]],
    };
    expect(steadyFilter(steady)).toMatchObject({ reason: 'not-detectable', field: 'C' });
    expect(
      steadyFilter({
        ...steady,
        C: [[1, 1]],
        Q: [
          [1, 0],
          [0, 0],
        ],
      }),
    ).toMatchObject({ reason: 'not-controllable', field: 'Q' });
    const reach = answered(
      noiseReach({
        A,
        Q: [
          [1, 0],
          [0, 0],
        ],
        domain: 'discrete',
        step: 1,
      }),
    );
    expect(reach.detectable).toBe(false);
  });

  it('does not depend on the unit of time or of the states', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 10_000 }), fc.integer({ min: 2, max: 6 }), (seed, n) => {
        const { A, C } = randomModel(seed, n, 1, 0);
        const plain = answered(observability({ A, C, domain: 'continuous' }));
        const slow = answered(
          observability({ A: A.map((row) => row.map((a) => a * 1e-5)), C, domain: 'continuous' }),
        );
        const s = Array.from({ length: n }, (_, i) => 10 ** ((seed + i) % 3));
        const scaled = A.map((row, i) => row.map((a, j) => (s[i]! * a) / s[j]!));
        const other = answered(
          observability({ A: scaled, C: C.map((row) => row.map((c, i) => c / s[i]!)), domain: 'continuous' }),
        );
        expect([slow.rank, other.rank]).toEqual([plain.rank, plain.rank]);
        expectAllRelative(slow.singularValues, plain.singularValues, 1e-8, 1e-12);
      }),
      { numRuns: 60 },
    );
  });
});
