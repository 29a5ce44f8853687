import { type PhysicalModel, type Values, kelvin, radiation } from './physical-model.ts';

/** Steam t/h, oxygen in the flue gas %, over-fire air %, NOx from nitrogen in the fuel mg/Nm³, moisture of bark %. */
export type BoilerInputs = Values<'steam' | 'oxygen' | 'overFire' | 'fuelNox' | 'moisture'>;

const heatOfSteam = 2.7e6;
const heatOfGas = 1250;
const radiatingArea = 94;
const wallC = 307;
const capacity = 3e7;
const firingLagS = 150;
const duct = { noxS: 100, coS: 80 };
const referenceK = 1548;
/** Temperature sensitivity of thermal NOx within the few hundred kelvin of a furnace, K. */
const thermal = 20_000;

/** Fired heat and where it goes, W, at a firing rate in kg/s of steam and a flame temperature in °C. */
export function boilerFlows(firing: number, flame: number, u: BoilerInputs) {
  const fired = firing * heatOfSteam;
  const gas = (fired / 1e6) * 0.4 * (21 / (21 - u.oxygen));
  return {
    fired,
    water: fired * 0.0025 * (u.moisture - 45),
    gas: gas * heatOfGas * (flame - 25),
    radiated: radiation(flame, wallC, radiatingArea),
  };
}

/**
 * Power boiler: firing follows the load, the flame its heat balance. NOx is a thermal part (Arrhenius in flame
 * temperature, root of oxygen, less with over-fire air) and what the fuel brings; both gases pass the duct with a lag.
 */
export const boiler: PhysicalModel<
  'steam' | 'oxygen' | 'overFire' | 'fuelNox' | 'moisture',
  'nox' | 'co' | 'unburned' | 'furnaceExit' | 'airFlow'
> = {
  longestStepS: 60,
  guess: [41.7, 1275, 170, 60],
  derivative(x, u) {
    const [firing, flame, nox, co] = x as [number, number, number, number];
    const q = boilerFlows(firing, flame, u);
    return [
      ((u.steam * 1000) / 3600 - firing) / firingLagS,
      (q.fired - q.water - q.gas - q.radiated) / capacity,
      (noxMade(flame, u) - nox) / duct.noxS,
      (coMade(flame, u) - co) / duct.coS,
    ];
  },
  outputs([firing, flame, nox, co], u) {
    return {
      nox: nox!,
      co: co!,
      unburned: 6 * Math.exp(-(flame! - 1275) / 160 - (u.oxygen - 3.5) / 4 + (u.moisture - 45) / 30),
      furnaceExit: 0.74 * flame! + 20,
      airFlow: firing! * 2.7 * 0.37 * (21 / (21 - u.oxygen)) * 3.6,
    };
  },
};

/** NOx as it leaves the flame, mg/Nm³. */
export const noxMade = (flameC: number, u: BoilerInputs): number =>
  110 *
    Math.exp(thermal * (1 / referenceK - 1 / kelvin(flameC))) *
    Math.sqrt(Math.max(u.oxygen, 0.1) / 3.5) *
    (1 - 0.012 * (u.overFire - 20)) +
  u.fuelNox;

const coMade = (flameC: number, u: BoilerInputs): number =>
  60 * Math.exp(-(u.oxygen - 3.5) / 1.1 + 0.02 * (u.overFire - 20) - (flameC - 1275) / 220);
