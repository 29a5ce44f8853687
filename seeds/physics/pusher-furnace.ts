import { type PhysicalModel, type Values, radiation } from './physical-model.ts';

/** Temperatures of the three zones °C, throughput t/h. */
export type PusherInputs = Values<'zone1' | 'zone2' | 'zone3' | 'throughput'>;

const massOfZone = 9000;
const heatOfSteel = 650;
const area = 8;
const conductance = 6500;
const chargedC = 40;
/** Heat capacity of one lump (surface or core of the load in one zone), J/K. */
export const lumpCapacity = (massOfZone * heatOfSteel) / 2;

/** Radiated into each zone, and carried out with the load, in W; states [surface, core] of each zone in °C. */
export function pusherFlows(x: readonly number[], u: PusherInputs) {
  const carried = ((u.throughput * 1000) / 3600) * (heatOfSteel / 2);
  const zones = [u.zone1, u.zone2, u.zone3];
  return {
    absorbed: zones.map((zone, i) => radiation(zone, x[2 * i]!, area)),
    conducted: zones.map((_, i) => conductance * (x[2 * i]! - x[2 * i + 1]!)),
    /** Enthalpy flow of one half of the load, W per °C. */
    carried,
    carriedOut: carried * (x[4]! - chargedC + x[5]! - chargedC),
  };
}

/** Pusher furnace for heat treatment: the load in each of three zones is one surface and one core lump, pushed on. */
export const pusherFurnace: PhysicalModel<
  'zone1' | 'zone2' | 'zone3' | 'throughput',
  'core' | 'surface' | 'fuel'
> = {
  longestStepS: 300,
  guess: [600, 450, 900, 800, 1030, 990],
  derivative(x, u) {
    const q = pusherFlows(x, u);
    return x.map((now, i) => {
      const zone = i >> 1;
      const before = zone === 0 ? chargedC : x[i - 2]!;
      const heat = i % 2 === 0 ? q.absorbed[zone]! - q.conducted[zone]! : q.conducted[zone]!;
      return (heat + q.carried * (before - now)) / lumpCapacity;
    });
  },
  outputs(x, u) {
    const heat = pusherFlows(x, u).absorbed.reduce((sum, watts) => sum + watts, 0);
    return { surface: x[4]!, core: x[5]!, fuel: Math.max(0, (heat / 0.55 / 36e6) * 3600) };
  },
};
