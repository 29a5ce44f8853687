import { describe, expect, it } from 'vitest';
import { mixedTanks } from '../../../shared/numerics/tanks.ts';
import { thermalNetwork } from '../../../shared/numerics/thermal-network.ts';
import { answered } from '../../reference/expectations.ts';

describe('plant models refuse what can’t be', () => {
  it('a network with an unknown node, a capacity of zero, a name twice', () => {
    const network = {
      unit: 'K' as const,
      nodes: [{ name: 'a', heatCapacity: 10 }],
      boundaries: [{ name: 'air' }],
      links: [{ between: ['a', 'air'] as [string, string], conductance: 1 }],
      heats: [{ name: 'heater', into: 'a', share: 0.5 }],
      measured: ['a'],
      estimated: ['a'],
    };
    expect(answered(thermalNetwork(network)).model.B).toEqual([[0.1, 0.05]]);
    expect(thermalNetwork({ ...network, links: [{ between: ['a', 'b'], conductance: 1 }] })).toMatchObject({
      reason: 'out-of-range',
      field: 'links[0].between',
    });
    expect(thermalNetwork({ ...network, nodes: [{ name: 'a', heatCapacity: 0 }] })).toMatchObject({
      reason: 'out-of-range',
      field: 'nodes[0].heatCapacity',
    });
    expect(thermalNetwork({ ...network, boundaries: [{ name: 'a' }] })).toMatchObject({
      reason: 'out-of-range',
      field: 'nodes[1].name',
    });
    expect(thermalNetwork({ ...network, measured: ['x'] })).toMatchObject({
      reason: 'out-of-range',
      field: 'measured[0]',
    });
  });

  it('mixed tanks keep a constant feed constant and consume it where there is a reaction', () => {
    const tanks = {
      quantity: { name: 'Brine', unit: 'g/L' },
      volumes: [2, 3],
      flow: 0.01,
      decay: 0,
      estimated: 1,
    };
    const { A, B } = answered(mixedTanks(tanks)).model;
    A.forEach((row, i) => expect(row[0]! + row[1]! + B[i]![0]!).toBeCloseTo(0, 15));
    const reacting = answered(mixedTanks({ ...tanks, decay: 0.002 })).model.A;
    expect(reacting[1]![1]! - A[1]![1]!).toBeCloseTo(-0.002, 15);
    expect(mixedTanks({ ...tanks, volumes: [2, -3] })).toMatchObject({
      reason: 'out-of-range',
      field: 'volumes[1]',
    });
  });
});
