import { type PhysicalModel, type Values } from './physical-model.ts';
import { pentaneShare, vapourPressure } from './vapour-pressure.ts';

/** Temperatures of the upper and lower control tray °C, pressure bar, reflux ratio, feed m³/h. */
export type DebutaniserInputs = Values<'upper' | 'lower' | 'pressure' | 'reflux' | 'feed'>;

const topStages = 5;
const bottomStages = 1.2;
const drumS = 1200;
const sumpS = 1800;
const referenceC = 37.8;

const oddsOf = (share: number): number => share / (1 - share);
const shareOf = (odds: number): number => odds / (1 + odds);

/** Relative volatility of butane to pentane. */
export const volatility = (celsius: number): number =>
  vapourPressure('butane', celsius) / vapourPressure('pentane', celsius);

/** Share of pentane in the overhead for a boiling control tray: its odds fall by the volatility on each stage above. */
export function overheadPentane(u: DebutaniserInputs): number {
  const stages = topStages * (u.reflux / (1 + u.reflux));
  const tray = clamped(pentaneShare(u.upper, u.pressure));
  return shareOf(oddsOf(tray) / volatility(u.upper) ** stages);
}

/** Share of butane in the bottoms, the same way down from the lower control tray. */
export function bottomsButane(u: DebutaniserInputs): number {
  const tray = clamped(1 - pentaneShare(u.lower, u.pressure));
  return shareOf(oddsOf(tray) / volatility(u.lower) ** bottomStages);
}

const clamped = (share: number): number => Math.min(0.98, Math.max(0.002, share));

/** Debutaniser: trays boil after Antoine and Raoult; drum and sump follow with first-order hold-ups. States are shares. */
export const debutaniser: PhysicalModel<
  'upper' | 'lower' | 'pressure' | 'reflux' | 'feed',
  'pentane' | 'vapourPressure'
> = {
  longestStepS: 450,
  guess: [0.008, 0.02],
  derivative([top, bottom], u) {
    const flow = Math.max(u.feed, 10) / 120;
    return [((overheadPentane(u) - top!) * flow) / drumS, ((bottomsButane(u) - bottom!) * flow) / sumpS];
  },
  outputs([top, bottom]) {
    const butane = vapourPressure('butane', referenceC);
    return {
      pentane: 100 * top!,
      // Vapour pressure of the bottoms at 37.8 °C, kPa; what is heavier than pentane is taken as half as volatile.
      vapourPressure: 100 * (bottom! * butane + (1 - bottom!) * 0.6 * vapourPressure('pentane', referenceC)),
    };
  },
};
