import { attempt, giveUp } from './attempt.ts';
import { largestDimension, readNumber, readPositive } from './linear-algebra.ts';
import type { Result } from './result.ts';
import type { ContinuousModel, Quantity } from './state-space.ts';

/** Acceleration of free fall, m/s² (standard value). */
const gravity = 9.80665;

/** Values of states and inputs about which a nonlinear balance was linearised; the model's variables are deviations. */
export type OperatingPoint = { states: number[]; inputs: number[] };

/**
 * `count` well-mixed tanks in series with the same flow: Vᵢ dcᵢ/dt = q (cᵢ₋₁ − cᵢ) − k Vᵢ cᵢ, c₀ the feed (input).
 * `volumes` in m³, `flow` q in m³/s, `decay` k ≥ 0 in 1/s (first-order reaction; 0 for mixing alone). Concentration or
 * temperature alike. The last tank is measured; `estimated` is the number (from 1) of the tank that is estimated.
 */
export type MixedTanks = {
  quantity: Quantity;
  volumes: number[];
  flow: number;
  decay: number;
  estimated: number;
};

/** The model of {@link MixedTanks}. Refuses `out-of-range` for volumes or a flow that are not above zero. */
export function mixedTanks(tanks: MixedTanks): Result<{ model: ContinuousModel }> {
  return attempt(() => {
    const n = tanks?.volumes?.length;
    if (!Array.isArray(tanks?.volumes) || n < 1 || n > largestDimension)
      giveUp('wrong-shape', { field: 'volumes' });
    const flow = readPositive(tanks.flow, 'flow');
    const decay = readNumber(tanks.decay, 'decay');
    if (decay < 0) giveUp('out-of-range', { field: 'decay', figure: decay });
    const { estimated } = tanks;
    if (!Number.isInteger(estimated) || estimated < 1 || estimated > n)
      giveUp('out-of-range', { field: 'estimated' });
    const rate = tanks.volumes.map((volume, i) => flow / readPositive(volume, `volumes[${i}]`));
    const A = rate.map((r, i) => rate.map((_, j) => (j === i ? -r - decay : j === i - 1 ? r : 0)));
    const row = (at: number) => rate.map((_, j) => (j === at ? 1 : 0));
    const inTank = (i: number) => ({
      name: `${tanks.quantity?.name} in tank ${i + 1}`,
      unit: tanks.quantity?.unit,
    });
    return {
      model: {
        domain: 'continuous',
        A,
        B: rate.map((r, i) => [i === 0 ? r : 0]),
        C: [row(n - 1)],
        D: [[0]],
        H: [row(estimated - 1)],
        F: [[0]],
        states: rate.map((_, i) => inTank(i)),
        inputs: [{ name: `${tanks.quantity?.name} of the feed`, unit: tanks.quantity?.unit }],
        outputs: [inTank(n - 1)],
        estimates: [inTank(estimated - 1)],
      },
    };
  });
}

/**
 * Tanks that drain by gravity through an outlet: Aᵢ dhᵢ/dt = −aᵢ √(2 g hᵢ) + Σⱼ aⱼ √(2 g hⱼ) + Σ share · q over the
 * tanks j that drain into i. `area` A and `outlet` a in m², operating `level` h in m, pump flows q in m³/s.
 */
export type GravityTanks = {
  tanks: { name: string; area: number; outlet: number; level: number; drainsInto?: string }[];
  pumps: { name: string; into: { tank: string; share: number }[] }[];
  measured: string[];
  estimated: string[];
};

/**
 * Linearises {@link GravityTanks} about the operating levels: dh/dt = A h + B q in deviations, time constants
 * Tᵢ = (Aᵢ/aᵢ) √(2 hᵢ/g) (Johansson, The quadruple-tank process, IEEE Trans. Control Syst. Technol. 8 (2000) 456–465).
 */
export function gravityTanks(
  plant: GravityTanks,
): Result<{ model: ContinuousModel; timeConstants: number[] }> {
  return attempt(() => {
    for (const field of ['tanks', 'pumps', 'measured', 'estimated'] as const) {
      const list: unknown = plant?.[field];
      if (!Array.isArray(list) || list.some((item) => item === null || item === undefined)) {
        giveUp('wrong-shape', { field });
      }
    }
    const { tanks, pumps } = plant;
    if (tanks.length < 1 || tanks.length > largestDimension) giveUp('wrong-shape', { field: 'tanks' });
    const numberOf = (name: string | undefined, field: string) => {
      const i = tanks.findIndex((tank) => tank.name === name);
      return i < 0 ? giveUp('out-of-range', { field }) : i;
    };
    const areas = tanks.map((tank, i) => readPositive(tank.area, `tanks[${i}].area`));
    const timeConstants = tanks.map((tank, i) => {
      const outlet = readPositive(tank.outlet, `tanks[${i}].outlet`);
      return (areas[i]! / outlet) * Math.sqrt((2 * readPositive(tank.level, `tanks[${i}].level`)) / gravity);
    });
    const A = tanks.map((_, i) => tanks.map((__, j) => (i === j ? -1 / timeConstants[i]! : 0)));
    tanks.forEach((tank, j) => {
      if (tank.drainsInto === undefined) return;
      const i = numberOf(tank.drainsInto, `tanks[${j}].drainsInto`);
      A[i]![j]! += areas[j]! / (areas[i]! * timeConstants[j]!);
    });
    const B = tanks.map(() => pumps.map(() => 0));
    pumps.forEach((pump, j) => {
      if (!Array.isArray(pump.into)) giveUp('wrong-shape', { field: `pumps[${j}].into` });
      pump.into.forEach((part, i) => {
        const at = numberOf(part?.tank, `pumps[${j}].into[${i}].tank`);
        B[at]![j]! += readNumber(part.share, `pumps[${j}].into[${i}].share`) / areas[at]!;
      });
    });
    return { model: levels(plant, A, B, numberOf), timeConstants };
  });
}

function levels(
  plant: GravityTanks,
  A: number[][],
  B: number[][],
  numberOf: (name: string, field: string) => number,
): ContinuousModel {
  const rows = (names: string[], field: string) => {
    if (names.length === 0) giveUp('not-enough-data', { field, needed: 1, got: 0 });
    return names.map((name, i) => {
      const at = numberOf(name, `${field}[${i}]`);
      return A.map((_, j) => (j === at ? 1 : 0));
    });
  };
  const level = (name: string): Quantity => ({ name: `Level of ${name}`, unit: 'm' });
  return {
    domain: 'continuous',
    A,
    B,
    C: rows(plant.measured, 'measured'),
    D: plant.measured.map(() => plant.pumps.map(() => 0)),
    H: rows(plant.estimated, 'estimated'),
    F: plant.estimated.map(() => plant.pumps.map(() => 0)),
    states: plant.tanks.map((tank) => level(tank.name)),
    inputs: plant.pumps.map((pump) => ({ name: pump.name, unit: 'm³/s' })),
    outputs: plant.measured.map(level),
    estimates: plant.estimated.map(level),
  };
}
