import { type PhysicalModel, type Values, radiation } from './physical-model.ts';

/** Fuel Nm³/h, pull t/d, oxygen in the waste gas %, ambient °C. */
export type FurnaceInputs = Values<'fuel' | 'pull' | 'oxygen' | 'ambient'>;
type Outputs = 'crown' | 'throat' | 'bottom' | 'crownShell' | 'throatShell' | 'bottomShell' | 'flue';

/** Conductances in W/K: through the crown, from its shell, from bath, bottom and throat to the hall. */
export interface GlassFurnace {
  radiatingArea: number;
  crown: number;
  shell: number;
  bath: number;
  bottom: number;
  throat: number;
}

const heatOfGas = 36e6;
const heatOfMelting = 0.6e6;
const heatOfGlass = 1250;
const batchC = 25;
const toBottom = 5000;
/** Heat capacities of crown, shell, bath, bottom and throat, J/K. */
export const furnaceCapacities = [4.4e7, 3e7, 1.7e8, 6e7, 2e7] as const;

const usefulHeat = (u: FurnaceInputs): number =>
  (u.fuel / 3600) * heatOfGas * (0.72 - 0.008 * (u.oxygen - 2));

/** Where the heat goes, in W, for states [crown, shell, bath, bottom, throat] in °C. */
export function furnaceFlows(furnace: GlassFurnace, x: readonly number[], u: FurnaceInputs) {
  const [crown, shell, bath, bottom, throat] = x as [number, number, number, number, number];
  const glass = ((u.pull * 1000) / 86_400) * heatOfGlass;
  return {
    useful: usefulHeat(u),
    toBath: radiation(crown, bath, furnace.radiatingArea),
    throughCrown: furnace.crown * (crown - shell),
    fromShell: furnace.shell * (shell - u.ambient),
    melting: ((u.pull * 1000) / 86_400) * heatOfMelting + glass * (bath - batchC),
    toBottom: toBottom * (bath - bottom),
    toThroat: glass * (bath - throat),
    bathLoss: furnace.bath * (bath - u.ambient),
    bottomLoss: furnace.bottom * (bottom - u.ambient),
    throatLoss: furnace.throat * (throat - u.ambient),
    /** Carried out by the glass at the throat, with the heat that melted it. */
    carriedOut: ((u.pull * 1000) / 86_400) * heatOfMelting + glass * (throat - batchC),
  };
}

/** Glass furnace as five lumps. 70 % of the useful heat reaches the crown first and is radiated from there. */
export function glassFurnace(
  furnace: GlassFurnace,
): PhysicalModel<'fuel' | 'pull' | 'oxygen' | 'ambient', Outputs> {
  return {
    longestStepS: 300,
    guess: [1580, 300, 1415, 1100, 1270],
    derivative(x, u) {
      const q = furnaceFlows(furnace, x, u);
      return [
        0.7 * q.useful - q.toBath - q.throughCrown,
        q.throughCrown - q.fromShell,
        0.3 * q.useful + q.toBath - q.melting - q.toBottom - q.bathLoss,
        q.toBottom - q.bottomLoss,
        q.toThroat - q.throatLoss,
      ].map((watts, i) => watts / furnaceCapacities[i]!);
    },
    outputs([crown, shell, , bottom, throat], u) {
      return {
        crown: crown!,
        throat: throat!,
        bottom: bottom!,
        crownShell: shell!,
        throatShell: u.ambient + 0.19 * (throat! - u.ambient),
        bottomShell: u.ambient + 0.14 * (bottom! - u.ambient),
        flue: 0.31 * crown! + 12 * (u.oxygen - 2),
      };
    },
  };
}
