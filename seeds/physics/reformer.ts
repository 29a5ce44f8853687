import { type PhysicalModel, type Values, arrhenius } from './physical-model.ts';

/** Feed m³/h, inlet temperature °C, naphthenes and aromatics of the feed vol%, pressure bar, activity of the catalyst. */
export type ReformerInputs = Values<'feed' | 'inlet' | 'rich' | 'pressure' | 'activity'>;

const catalystM3 = 60;
const referenceC = 500;
const naphthenes = { rate: 5, activation: 110_000 };
const paraffins = { rate: 0.75, activation: 160_000 };
const drumS = 3600;
const referenceFeed = 96;

/** Aromatics leaving the reactors, vol%: both lumps react first order over the hours spent on the catalyst. */
export function aromaticsMade(u: ReformerInputs): number {
  const hours = (u.activity * catalystM3) / Math.max(u.feed, 5);
  const share = ({ rate, activation }: typeof naphthenes) =>
    1 - Math.exp(-rate * hours * arrhenius(u.inlet, referenceC, activation) * (8 / u.pressure) ** 0.2);
  return u.rich * share(naphthenes) + (100 - u.rich) * share(paraffins);
}

/** Reformer with continuous regeneration: octane follows the aromatics, which mix in the stabiliser's hold-up. */
export const reformer: PhysicalModel<
  'feed' | 'inlet' | 'rich' | 'pressure' | 'activity',
  'octane' | 'aromatics' | 'temperatureDrop' | 'density' | 'hydrogen'
> = {
  longestStepS: 450,
  guess: [63],
  derivative([aromatics], u) {
    return [((aromaticsMade(u) - aromatics!) * (u.feed / referenceFeed)) / drumS];
  },
  outputs([aromatics], u) {
    const made = aromaticsMade(u);
    return {
      aromatics: aromatics!,
      octane: 58 + 0.62 * aromatics!,
      temperatureDrop: 4.1 * (made - 15) + 0.3 * (u.rich - 45),
      density: 715 + 1.25 * aromatics!,
      hydrogen: 1.1 * u.feed * (made - 15),
    };
  },
};
