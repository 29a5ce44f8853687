import { type PhysicalModel, type Values, kelvin } from './physical-model.ts';

/** Chips t/h, cooking temperature °C, alkali % on wood, liquor-to-wood ratio m³/t, lignin of the wood %. */
export type DigesterInputs = Values<'chips' | 'cooking' | 'alkali' | 'liquor' | 'lignin'>;

const zones = 3;
const residenceH = 0.75;
const referenceChips = 60;
const referenceAlkali = 20;
/** Delignification per unit of relative rate and hour. */
const speed = 0.0029;
/** Alkali used up for each part of lignin dissolved, g/L for kg/kg. */
const consumption = 140;

/** Relative rate of kraft cooking, 1 at 100 °C (Vroom 1957): its integral over hours is the H-factor. */
export const vroomRate = (celsius: number): number => Math.exp(43.2 - 16_115 / kelvin(celsius));

const alkaliCharged = (u: DigesterInputs): number => (u.alkali * 10) / u.liquor;

/**
 * Continuous digester: lignin (kg per kg of wood) and alkali (g/L) in three stirred zones, lignin dissolving with the
 * relative rate of Vroom and the root of the alkali. States [lignin of each zone, alkali of each zone].
 */
export const digester: PhysicalModel<
  'chips' | 'cooking' | 'alkali' | 'liquor' | 'lignin',
  'kappa' | 'residual' | 'conductivity' | 'extraction'
> = {
  longestStepS: 300,
  guess: [0.12, 0.05, 0.022, 25, 15, 11],
  derivative(x, u) {
    const residence = residenceH * (referenceChips / Math.max(u.chips, 5)) * 3600;
    const slopes: number[] = new Array(2 * zones).fill(0);
    for (let i = 0; i < zones; i++) {
      const lignin = x[i]!;
      const alkali = Math.max(x[zones + i]!, 0);
      const dissolving = dissolvingRate(lignin, alkali, u.cooking);
      slopes[i] = ((i === 0 ? u.lignin / 100 : x[i - 1]!) - lignin) / residence - dissolving;
      slopes[zones + i] =
        ((i === 0 ? alkaliCharged(u) : x[zones + i - 1]!) - alkali) / residence - consumption * dissolving;
    }
    return slopes;
  },
  outputs(x, u) {
    return {
      // Lignin on pulp at a yield of 48 %; 0.15 % of lignin is one kappa number (the usual rule for kraft pulp).
      kappa: (100 * x[2]!) / 0.48 / 0.15,
      residual: x[5]!,
      conductivity: 18 + 3.4 * x[5]! + 0.1 * (u.cooking - 160),
      extraction: u.cooking - 6 + 0.05 * (u.chips - 60),
    };
  },
};

/** Lignin dissolved, kg/kg per second. */
export const dissolvingRate = (lignin: number, alkali: number, cookingC: number): number =>
  (speed / 3600) * vroomRate(cookingC) * Math.sqrt(alkali / referenceAlkali) * lignin;
