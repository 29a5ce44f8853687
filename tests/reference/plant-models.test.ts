import { describe, expect, it } from 'vitest';
import { zeroOrderHold } from '../../shared/numerics/discretise.ts';
import { stirredReactor } from '../../shared/numerics/reactors.ts';
import { gravityTanks } from '../../shared/numerics/tanks.ts';
import { thermalNetwork, wallNodes } from '../../shared/numerics/thermal-network.ts';
import { answered, expectAllRelative, expectRelative } from './expectations.ts';
import wall from './values/wall-conduction.json';
import furnaceWall from './values/zoh-furnace-wall.json';

describe('thermal network', () => {
  // Source: own furnace wall, k 1.4 W/(m·K), L 0.25 m, ρ 2300, c 1000, films 60 and 12 W/(m²·K), two lumps.
  it('builds the matrices of the two-lump furnace wall', () => {
    const { nodes, links } = answered(
      wallNodes({
        name: 'Lining',
        thickness: 0.25,
        conductivity: 1.4,
        density: 2300,
        specificHeat: 1000,
        area: 1,
        lumps: 2,
        inside: { boundary: 'Gas', film: 60 },
        outside: { boundary: 'Air', film: 12 },
      }),
    );
    const { model } = answered(
      thermalNetwork({
        unit: '°C',
        nodes,
        links,
        boundaries: [{ name: 'Gas' }, { name: 'Air' }],
        heats: [],
        measured: ['Lining 2'],
        estimated: ['Lining 1'],
      }),
    );
    expectAllRelative(model.A.flat(), furnaceWall.inputs.A.flat(), 1e-12, 1e-18);
    expectAllRelative(model.B.flat(), furnaceWall.inputs.B.flat(), 1e-12, 1e-18);
    expect(model.C).toEqual(furnaceWall.inputs.C);
    expect(model.states.map((state) => state.name)).toEqual(['Lining 1', 'Lining 2']);
  });

  // Source: Carslaw & Jaeger 1959, secs 3.3–3.4 (slab, insulated back); lumped values computed with scipy 1.10.1.
  for (const { N, last_cell, max_error, exact_last_cell_centre } of wall.expected.lumped.filter(
    (row) => row.N <= 32,
  )) {
    it(`firebrick heated from one side, ${N} lumps, after 10 h`, () => {
      const { nodes, links } = answered(
        wallNodes({
          name: 'Brick',
          thickness: wall.inputs.L,
          conductivity: wall.inputs.k,
          density: wall.inputs.rho,
          specificHeat: wall.inputs.cp,
          area: 3,
          lumps: N,
          inside: { boundary: 'Surface' },
        }),
      );
      const last = `Brick ${N}`;
      const network = { unit: 'K', nodes, links, boundaries: [{ name: 'Surface' }], heats: [] } as const;
      const { model } = answered(
        thermalNetwork({
          ...network,
          boundaries: [{ name: 'Surface' }],
          heats: [],
          measured: [last],
          estimated: [last],
        }),
      );
      const held = answered(zeroOrderHold(model.A, model.B, wall.inputs.t));
      const theta = held.B[N - 1]![0]!;
      expectRelative(theta, last_cell, wall.tolerance.lumped_rel);
      expect(Math.abs(theta - exact_last_cell_centre)).toBeLessThanOrEqual(max_error * (1 + 1e-6));
    });
  }
});

// Source: Johansson, IEEE Trans. Control Syst. Technol. 8 (2000), minimum-phase operating point: time constants 62, 90, 23,
// 30 s (values from memory; there g = 9.81 m/s² and levels 12.4, 12.7, 1.8, 1.4 cm).
describe('quadruple-tank process', () => {
  it('time constants', () => {
    const tank = (name: string, area: number, outlet: number, level: number, drainsInto?: string) => ({
      name,
      area: area * 1e-4,
      outlet: outlet * 1e-4,
      level: level * 1e-2,
      drainsInto,
    });
    const plant = answered(
      gravityTanks({
        tanks: [
          tank('tank 1', 28, 0.071, 12.4),
          tank('tank 2', 32, 0.057, 12.7),
          tank('tank 3', 28, 0.071, 1.8, 'tank 1'),
          tank('tank 4', 32, 0.057, 1.4, 'tank 2'),
        ],
        pumps: [
          {
            name: 'pump 1',
            into: [
              { tank: 'tank 1', share: 0.7 },
              { tank: 'tank 4', share: 0.3 },
            ],
          },
        ],
        measured: ['tank 1', 'tank 2'],
        estimated: ['tank 3'],
      }),
    );
    expectAllRelative(plant.timeConstants, [62, 90, 23, 30], 0.05);
    const T = plant.timeConstants;
    expectRelative(plant.model.A[0]![2]!, 1 / T[2]!, 1e-12);
    expectRelative(plant.model.A[1]![3]!, 1 / T[3]!, 1e-12);
    expectRelative(plant.model.B[3]![0]!, 0.3 / 32e-4, 1e-12);
  });
});

// Source: the exothermic reactor of Henson & Seborg 1997 and Seborg, Edgar & Mellichamp (values from memory): q = V/min,
// k₀ 7.2e10 1/min, E/R 8750 K, −ΔH 5e4 J/mol, ρc_p 239 J/(L·K), UA 5e4 J/(min·K), feed 1 mol/L and 350 K, coolant 300 K.
describe('stirred-tank reactor', () => {
  const reactor = answered(
    stirredReactor({
      volume: 0.1,
      flow: 0.1 / 60,
      frequencyFactor: 7.2e10 / 60,
      activationTemperature: 8750,
      reactionHeat: 5e4,
      heatCapacity: 239e3,
      coolingConductance: 5e4 / 60,
      feedConcentration: 1000,
      feedTemperature: 350,
      temperature: 350,
    }),
  );

  it('rests at 0.5 mol/L, 350 K with the coolant at 300 K', () => {
    expectAllRelative(reactor.operatingPoint.states, [500, 350], 2e-3);
    expectAllRelative(reactor.operatingPoint.inputs, [300, 1000, 350], 2e-3);
  });

  // Elementary: the matrices are the derivatives of the two balances, here taken by finite differences.
  it('has the derivatives of its balances as matrices, and is unstable at that point', () => {
    const balances = ([c, T]: number[], [coolant, feed, feedT]: number[]) => {
      const k = (7.2e10 / 60) * Math.exp(-8750 / T!);
      const cooling = 5e4 / 60 / (0.1 * 239e3);
      return [
        (feed! - c!) / 60 - k * c!,
        (feedT! - T!) / 60 + (5e4 / 239e3) * k * c! + cooling * (coolant! - T!),
      ];
    };
    const { states, inputs } = reactor.operatingPoint;
    const derivative = (f: (v: number[]) => number[], at: number[], j: number) => {
      const moved = (by: number) => f(at.map((v, i) => (i === j ? v + by : v)));
      return moved(0.01).map((value, i) => (value - moved(-0.01)[i]!) / 0.02);
    };
    const { A, B } = reactor.model;
    [0, 1].forEach((j) => {
      const column = derivative((x) => balances(x, inputs), states, j);
      expectAllRelative(
        A.map((row) => row[j]!),
        column,
        1e-6,
      );
    });
    [0, 1, 2].forEach((j) => {
      const column = derivative((u) => balances(states, u), inputs, j);
      expectAllRelative(
        B.map((row) => row[j]!),
        column,
        1e-6,
      );
    });
    expect(A[0]![0]! + A[1]![1]!).toBeGreaterThan(0);
  });
});
