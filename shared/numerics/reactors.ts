import { attempt } from './attempt.ts';
import { readNumber, readPositive } from './linear-algebra.ts';
import type { Result } from './result.ts';
import type { ContinuousModel } from './state-space.ts';
import type { OperatingPoint } from './tanks.ts';

/**
 * Jacketed stirred-tank reactor with one first-order reaction, rate k₀ e^{−E/(R T)} c:
 * V dc/dt = q (c_f − c) − V k c and V ρ c_p dT/dt = q ρ c_p (T_f − T) + (−ΔH) V k c + UA (T_c − T).
 * `volume` V m³, `flow` q m³/s, `frequencyFactor` k₀ 1/s, `activationTemperature` E/R K, `reactionHeat` −ΔH J/mol
 * (positive when heat is set free), `heatCapacity` ρ c_p J/(m³·K), `coolingConductance` UA W/K, `feedConcentration` c_f
 * mol/m³, `feedTemperature` T_f K, `temperature` T K at the operating point.
 */
export type StirredReactor = {
  volume: number;
  flow: number;
  frequencyFactor: number;
  activationTemperature: number;
  reactionHeat: number;
  heatCapacity: number;
  coolingConductance: number;
  feedConcentration: number;
  feedTemperature: number;
  temperature: number;
};

/**
 * The reactor linearised about its steady state at `temperature`: concentration c = q c_f/(q + V k) and the coolant
 * temperature follow from the two balances. States [c, T], inputs [T_c, c_f, T_f], measured T, estimated c, all as
 * deviations from `operatingPoint` (Uppal, Ray & Poore 1974; Seborg, Edgar & Mellichamp, ch. 4: from memory).
 */
export function stirredReactor(
  reactor: StirredReactor,
): Result<{ model: ContinuousModel; operatingPoint: OperatingPoint }> {
  return attempt(() => {
    const read = (field: keyof StirredReactor) => readPositive(reactor?.[field], field);
    const heat = readNumber(reactor?.reactionHeat, 'reactionHeat');
    const T = read('temperature');
    const dilution = read('flow') / read('volume');
    const k = read('frequencyFactor') * Math.exp(-read('activationTemperature') / T);
    const feed = { c: read('feedConcentration'), T: read('feedTemperature') };
    const cooling = read('coolingConductance') / (read('volume') * read('heatCapacity'));
    const c = (dilution * feed.c) / (dilution + k);
    const rise = heat / read('heatCapacity');
    const coolant = T - (dilution * (feed.T - T) + rise * k * c) / cooling;
    const sensitivity = (k * c * read('activationTemperature')) / (T * T);
    const A = [
      [-dilution - k, -sensitivity],
      [rise * k, -dilution - cooling + rise * sensitivity],
    ];
    const B = [
      [0, dilution, 0],
      [cooling, 0, dilution],
    ];
    const concentration = { name: 'Concentration', unit: 'mol/m³' };
    const temperature = { name: 'Reactor temperature', unit: 'K' };
    const model: ContinuousModel = {
      domain: 'continuous',
      A,
      B,
      C: [[0, 1]],
      D: [[0, 0, 0]],
      H: [[1, 0]],
      F: [[0, 0, 0]],
      states: [concentration, temperature],
      inputs: [
        { name: 'Coolant temperature', unit: 'K' },
        { name: 'Feed concentration', unit: 'mol/m³' },
        { name: 'Feed temperature', unit: 'K' },
      ],
      outputs: [temperature],
      estimates: [concentration],
    };
    return { model, operatingPoint: { states: [c, T], inputs: [coolant, feed.c, feed.T] } };
  });
}
