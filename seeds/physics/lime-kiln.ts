import { type PhysicalModel, type Values, arrhenius } from './physical-model.ts';

/** Dry lime mud t/h, heat MJ per kg of it, moisture %, oxygen %, ambient °C. */
export type KilnInputs = Values<'mud' | 'heat' | 'moisture' | 'oxygen' | 'ambient'>;

const heatOfCalcination = 1.78e6;
const heatOfDrying = 2.6e6;
const capacity = 8e7;
const shellLoss = 2270;
const gasLoss = 4000;
const sensible = 300;
const residenceS = 2400;
const referenceC = 1150;
const referenceRate = 2.98e-3;
const activation = 180_000;

/** Heat in and out in W; states [burning zone °C, carbonate left after the first half, and at discharge]. */
export function kilnFlows(x: readonly number[], u: KilnInputs) {
  const [burning, , left] = x as [number, number, number];
  const mud = (u.mud * 1000) / 3600;
  const wet = (mud * u.moisture) / (100 - u.moisture);
  const fired = mud * u.heat * 1e6;
  return {
    fired,
    flue: fired * (0.16 + 0.012 * (u.oxygen - 2.5)) + gasLoss * (burning - referenceC),
    calcination: mud * heatOfCalcination * (1 - left),
    drying: wet * heatOfDrying,
    lime: mud * sensible * (burning - u.ambient),
    shell: shellLoss * (burning - u.ambient),
  };
}

/** Speed of calcination, 1/s, at a burning-zone temperature in °C. */
export const calcinationRate = (burningC: number): number =>
  referenceRate * arrhenius(burningC, referenceC, activation);

/**
 * Lime kiln: heat balance of the burning zone; carbonate that is left after two stirred halves of the residence time,
 * each losing carbonate at a first-order rate, faster when hotter.
 */
export const limeKiln: PhysicalModel<
  'mud' | 'heat' | 'moisture' | 'oxygen' | 'ambient',
  'carbonate' | 'burning' | 'hood' | 'exit' | 'fuel'
> = {
  longestStepS: 300,
  guess: [1150, 0.12, 0.015],
  derivative(x, u) {
    const [burning, half, left] = x as [number, number, number];
    const q = kilnFlows(x, u);
    const rate = calcinationRate(burning);
    const residence = residenceS * (18 / Math.max(u.mud, 1));
    return [
      (q.fired - q.flue - q.calcination - q.drying - q.lime - q.shell) / capacity,
      (1 - half) / residence - rate * half,
      (half - left) / residence - rate * left,
    ];
  },
  outputs([burning, , left], u) {
    const fired = ((u.mud * 1000) / 3600) * u.heat;
    return {
      carbonate: 100 * left!,
      burning: burning!,
      hood: 0.62 * burning! + 45,
      exit: 210 + 1.6 * (fired - 20) - 2.2 * (u.moisture - 22) + 0.08 * (burning! - referenceC),
      fuel: (fired / 36) * 3600,
    };
  },
};
