import { kelvin } from './physical-model.ts';

/**
 * Antoine constants, log₁₀(p/bar) = A − B/(T/K + C), as the NIST Chemistry WebBook lists them: n-butane for
 * 273 to 425 K, n-pentane 269 to 341 K, water 256 to 373 K.
 * Used a little beyond these ranges here: a demo, not a design.
 */
const constants = {
  butane: [4.35576, 1175.581, -2.071],
  pentane: [3.9892, 1070.617, -40.454],
  water: [4.6543, 1435.264, -64.848],
} as const;
export type Substance = keyof typeof constants;

/** Vapour pressure in bar at a temperature in °C. */
export function vapourPressure(of: Substance, celsius: number): number {
  const [a, b, c] = constants[of];
  return 10 ** (a - b / (kelvin(celsius) + c));
}

/** Boiling point in °C at a pressure in bar. */
export function boilingPoint(of: Substance, bar: number): number {
  const [a, b, c] = constants[of];
  return b / (a - Math.log10(bar)) - c - 273.15;
}

/** Share of pentane in a boiling mixture of butane and pentane at a temperature and pressure, after Raoult. */
export function pentaneShare(celsius: number, bar: number): number {
  const butane = vapourPressure('butane', celsius);
  return (butane - bar) / (butane - vapourPressure('pentane', celsius));
}
