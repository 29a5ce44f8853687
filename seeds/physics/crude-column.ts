import { type PhysicalModel, type Values } from './physical-model.ts';

/** Feed m³/h, yields of naphtha and kerosene in % of it, heaviness of the crude (0 usual), pressure bar, stripping steam t/h, sharpness of the cut. */
export type CrudeInputs = Values<
  'feed' | 'naphtha' | 'kerosene' | 'heaviness' | 'pressure' | 'stripping' | 'sharpness'
>;

const holdUpS = 1500;
const referenceFeed = 900;

/** True boiling point, °C, at a volume yield in % from the lightest on. */
export const trueBoilingPoint = (yieldPercent: number, heaviness: number): number =>
  20 + 640 * (1 + 0.05 * heaviness) * (Math.max(yieldPercent, 0) / 100) ** 0.85;

/**
 * Crude column: the 95 % point of kerosene follows the cut to diesel on the boiling curve of the crude, its flash point
 * the cut to naphtha; both pass the stripper with a first-order hold-up. States [95 % point °C, flash point °C].
 */
export const crudeColumn: PhysicalModel<
  'feed' | 'naphtha' | 'kerosene' | 'heaviness' | 'pressure' | 'stripping' | 'sharpness',
  'endPoint' | 'flash' | 'draw' | 'top' | 'keroseneFlow' | 'naphthaFlow'
> = {
  longestStepS: 450,
  guess: [245, 44],
  derivative([endPoint, flash], u) {
    const flow = Math.max(u.feed, 50) / referenceFeed;
    const { upper, lower } = cuts(u);
    return [
      ((upper + 4 - 3 * u.sharpness - endPoint!) * flow) / holdUpS,
      ((0.55 * lower - 45 + 3 * (u.stripping - 2) - flash!) * flow) / holdUpS,
    ];
  },
  outputs([endPoint, flash], u) {
    const { upper, lower } = cuts(u);
    const lift = 26 * Math.log(u.pressure / 1.6);
    return {
      endPoint: endPoint!,
      flash: flash!,
      draw: 0.72 * upper + 8 + lift - 2 * u.sharpness,
      top: 0.66 * lower + 12 + lift,
      keroseneFlow: (u.feed * u.kerosene) / 100,
      naphthaFlow: (u.feed * u.naphtha) / 100,
    };
  },
};

/** Cut points to naphtha (lower) and to diesel (upper), °C. */
export const cuts = (u: CrudeInputs) => ({
  lower: trueBoilingPoint(u.naphtha, u.heaviness),
  upper: trueBoilingPoint(u.naphtha + u.kerosene, u.heaviness),
});
