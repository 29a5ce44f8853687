import { type PhysicalModel, type Values } from './physical-model.ts';

/** Hydrogen to propylene mol%, bed temperature °C, production t/h, donor to catalyst mol/mol. */
export type PolymerInputs = Values<'hydrogen' | 'bed' | 'production' | 'donor'>;

const holdUpT = 30;
/** Melt index mixes in this power (McAuley & MacGregor 1991, for polyethylene: MI^(−1/3.5)). */
const power = -1 / 3.5;

/** Melt index of the polymer growing now, g/10 min. */
export const instantaneousMeltIndex = (u: PolymerInputs): number =>
  10 * (Math.max(u.hydrogen, 0.02) / 0.5) ** 1.6 * Math.exp(0.035 * (u.bed - 70));

export const mixedPower = (meltIndex: number): number => meltIndex ** power;

/** Fluid-bed polymer reactor: what grows now mixes into the bed. States [MI^(−1/3.5), xylene solubles %]. */
export const polymerReactor: PhysicalModel<
  'hydrogen' | 'bed' | 'production' | 'donor',
  'logMeltIndex' | 'solubles'
> = {
  longestStepS: 450,
  guess: [mixedPower(10), 3.2],
  derivative([mixed, solubles], u) {
    const residence = (holdUpT / Math.max(u.production, 1)) * 3600;
    return [
      (mixedPower(instantaneousMeltIndex(u)) - mixed!) / residence,
      (3.2 - 1.5 * (u.donor - 1) + 0.06 * (u.bed - 70) - solubles!) / residence,
    ];
  },
  outputs([mixed, solubles]) {
    return { logMeltIndex: Math.log10(mixed! ** (1 / power)), solubles: solubles! };
  },
};
