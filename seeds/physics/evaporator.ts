import { type PhysicalModel, type Values } from './physical-model.ts';
import { boilingPoint } from './vapour-pressure.ts';

/** Feed kg/s and its solids %, steam °C, pressure of the vapour bar, heat transfer kW/K. */
export type EvaporatorInputs = Values<'feed' | 'feedSolids' | 'steam' | 'vapour' | 'transfer'>;

const holdUp = 20_000;
const heatOfEvaporation = 2.2e6;
/** Boiling-point rise at 50 % solids, °C; the rise goes with solids over water. */
const riseAtHalf = 7;

export const boilingPointRise = (solids: number): number => (riseAtHalf * solids) / (1 - solids);

/** Water boiled off, kg/s, at a share of solids in the liquor. */
export function evaporation(solids: number, u: EvaporatorInputs): number {
  const boils = boilingPoint('water', u.vapour) + boilingPointRise(solids);
  return Math.max(0, (u.transfer * 1000 * (u.steam - boils)) / heatOfEvaporation);
}

/** Concentrator of black liquor: a solids balance over a constant hold-up; what boils off follows the boiling-point rise. */
export const evaporator: PhysicalModel<
  'feed' | 'feedSolids' | 'steam' | 'vapour' | 'transfer',
  'solids' | 'liquorTemperature' | 'density' | 'condensate'
> = {
  longestStepS: 150,
  guess: [0.68],
  derivative([solids], u) {
    const away = evaporation(solids!, u);
    return [((u.feed * u.feedSolids) / 100 - (u.feed - away) * solids!) / holdUp];
  },
  outputs([solids], u) {
    return {
      solids: 100 * solids!,
      liquorTemperature: boilingPoint('water', u.vapour) + boilingPointRise(solids!),
      density: 1000 + 620 * solids!,
      condensate: evaporation(solids!, u) * 3.6,
    };
  },
};
