import type { SheetFields } from '../shared/contracts/register.ts';
import type { DemoSite } from './company.ts';
import { type Random, randomFrom } from './random.ts';

/** One measured input: a mean, a slow swing, a daily swing and noise, in its engineering unit. */
interface DemoInput {
  tag: string;
  description: string;
  unit: string;
  mean: number;
  slow: number;
  daily: number;
  noise: number;
  coefficient: number;
}

/** A demo soft sensor: its plant is simulated, so the true error of its estimate is known. */
export interface DemoSensor {
  site: DemoSite;
  area: string;
  unitName: string;
  point: string;
  method: { name: string; reproducibility: number; repeatability: number };
  intercept: number;
  inputs: DemoInput[];
  /** SD of one laboratory result and of the estimate itself. */
  labSd: number;
  modelSd: number;
  hoursBetweenSamples: number;
  /** No sample in the last days. */
  silentDays: number;
  /** What the estimate reads too high by, `daysAgo` before now. */
  bias: (daysAgo: number) => number;
  form: 'regression' | 'external';
  life: 'in-service' | 'waiting-for-approval';
  owned: boolean;
  sheet: Pick<
    SheetFields,
    | 'tagName'
    | 'name'
    | 'quantity'
    | 'unit'
    | 'decimals'
    | 'importanceClass'
    | 'consumers'
    | 'purpose'
    | 'allowedErrorAbsolute'
    | 'promisedReferenceMs'
    | 'fallback'
    | 'limitations'
  >;
}

const dayMs = 86_400_000;

export const demoSensors: DemoSensor[] = [
  {
    site: 'Tarnby Works',
    area: 'Hot end',
    unitName: 'Melting furnace 1',
    point: 'KX-09',
    method: { name: 'Immersion pyrometry', reproducibility: 9, repeatability: 4 },
    intercept: 640,
    inputs: [
      {
        tag: 'TI-1401',
        description: 'Crown shell temperature',
        unit: '°C',
        mean: 302,
        slow: 6,
        daily: 2,
        noise: 0.6,
        coefficient: 2.2,
      },
      {
        tag: 'FI-1410',
        description: 'Fuel flow',
        unit: 't/h',
        mean: 9.2,
        slow: 0.5,
        daily: 0.3,
        noise: 0.05,
        coefficient: 21,
      },
    ],
    labSd: 2.6,
    modelSd: 2.5,
    hoursBetweenSamples: 8,
    silentDays: 0,
    // An ageing thermocouple: true for a month, then a degree more every other day.
    bias: (daysAgo) => Math.max(0, (30 - daysAgo) * 0.55),
    form: 'regression',
    life: 'in-service',
    owned: true,
    sheet: {
      tagName: 'TY-1402',
      name: 'Crown interior temperature',
      quantity: 'temperature',
      unit: '°C',
      decimals: 0,
      importanceClass: 'A',
      consumers: [{ kind: 'closed-loop', name: 'furnace pressure loop' }],
      purpose: 'Holds the crown below its refractory limit through the furnace pressure loop.',
      allowedErrorAbsolute: 10,
      promisedReferenceMs: 2 * dayMs,
      fallback: 'Use the laboratory value and hold the loop in manual.',
      limitations: 'Not valid while the regenerators change over.',
    },
  },
  {
    site: 'Tarnby Works',
    area: 'Hot end',
    unitName: 'Melting furnace 1',
    point: 'KX-11',
    method: { name: 'Immersion pyrometry', reproducibility: 9, repeatability: 4 },
    intercept: 510,
    inputs: [
      {
        tag: 'TI-1403',
        description: 'Throat shell temperature',
        unit: '°C',
        mean: 268,
        slow: 4,
        daily: 1.5,
        noise: 0.5,
        coefficient: 2.6,
      },
      {
        tag: 'FI-1412',
        description: 'Glass pull',
        unit: 't/d',
        mean: 210,
        slow: 6,
        daily: 3,
        noise: 0.8,
        coefficient: -0.35,
      },
    ],
    labSd: 2.4,
    modelSd: 2,
    hoursBetweenSamples: 12,
    silentDays: 0,
    bias: () => 0.4,
    form: 'regression',
    life: 'in-service',
    owned: true,
    sheet: {
      tagName: 'TY-1405',
      name: 'Throat glass temperature',
      quantity: 'temperature',
      unit: '°C',
      decimals: 0,
      importanceClass: 'B',
      consumers: [{ kind: 'display', name: 'control room' }],
      purpose: 'Tells the forehearth operators what is coming.',
      allowedErrorAbsolute: 8,
      promisedReferenceMs: 3 * dayMs,
      fallback: 'Use the laboratory value.',
      limitations: '',
    },
  },
  {
    site: 'Ostrander Mill',
    area: 'Recovery',
    unitName: 'Lime kiln 2',
    point: 'LK2 discharge',
    method: { name: 'Carbonate titration', reproducibility: 0.35, repeatability: 0.15 },
    intercept: 9.4,
    inputs: [
      {
        tag: 'TI-2201',
        description: 'Burning zone temperature',
        unit: '°C',
        mean: 1180,
        slow: 18,
        daily: 8,
        noise: 2,
        coefficient: -0.008,
      },
      {
        tag: 'FI-2204',
        description: 'Mud feed',
        unit: 't/h',
        mean: 24,
        slow: 1,
        daily: 0.5,
        noise: 0.1,
        coefficient: 0.07,
      },
    ],
    labSd: 0.1,
    modelSd: 0.15,
    hoursBetweenSamples: 24,
    silentDays: 19,
    bias: () => 0.05,
    form: 'regression',
    life: 'in-service',
    owned: false,
    sheet: {
      tagName: 'AY-2207',
      name: 'Residual carbonate',
      quantity: 'composition',
      unit: '%',
      decimals: 2,
      importanceClass: 'A',
      consumers: [{ kind: 'quality-release', name: 'lime quality' }],
      purpose: 'Releases burnt lime to the causticisers.',
      allowedErrorAbsolute: 0.5,
      promisedReferenceMs: 7 * dayMs,
      fallback: 'Release by laboratory value only.',
      limitations: 'Not valid below 60 % of full feed.',
    },
  },
  {
    site: 'Kallara Refinery',
    area: 'Light ends',
    unitName: 'Debutaniser',
    point: 'SP-331',
    method: { name: 'Gas chromatography', reproducibility: 0.12, repeatability: 0.05 },
    intercept: 14.2,
    inputs: [
      {
        tag: 'TI-3301',
        description: 'Bottom tray temperature',
        unit: '°C',
        mean: 148,
        slow: 1.6,
        daily: 0.8,
        noise: 0.15,
        coefficient: -0.085,
      },
      {
        tag: 'PI-3302',
        description: 'Top pressure',
        unit: 'bar',
        mean: 10.4,
        slow: 0.15,
        daily: 0.06,
        noise: 0.02,
        coefficient: -0.06,
      },
    ],
    labSd: 0.04,
    modelSd: 0.06,
    hoursBetweenSamples: 8,
    silentDays: 0,
    bias: (daysAgo) => (daysAgo < 22 ? 0.19 : 0.02),
    form: 'regression',
    life: 'in-service',
    owned: true,
    sheet: {
      tagName: 'AY-3310',
      name: 'Bottoms butane',
      quantity: 'composition',
      unit: 'mol%',
      decimals: 2,
      importanceClass: 'A',
      consumers: [{ kind: 'closed-loop', name: 'reboiler duty' }],
      purpose: 'Controls butane in the bottoms through the reboiler duty.',
      allowedErrorAbsolute: 0.2,
      promisedReferenceMs: 2 * dayMs,
      fallback: 'Hold the reboiler duty.',
      limitations: '',
    },
  },
  {
    site: 'Kallara Refinery',
    area: 'Utilities',
    unitName: 'Boiler 4',
    point: 'Stack B4',
    method: { name: 'Chemiluminescence reference', reproducibility: 8, repeatability: 3 },
    intercept: 0,
    inputs: [
      {
        tag: 'FI-3401',
        description: 'Steam load',
        unit: 't/h',
        mean: 62,
        slow: 6,
        daily: 5,
        noise: 0.6,
        coefficient: 1.8,
      },
      {
        tag: 'AI-3405',
        description: 'Flue gas oxygen',
        unit: '%',
        mean: 3.2,
        slow: 0.3,
        daily: 0.15,
        noise: 0.04,
        coefficient: 12,
      },
    ],
    labSd: 2.4,
    modelSd: 3,
    hoursBetweenSamples: 24,
    silentDays: 0,
    bias: () => -0.8,
    form: 'external',
    life: 'in-service',
    owned: true,
    sheet: {
      tagName: 'AY-3412',
      name: 'Stack nitrogen oxides',
      quantity: 'concentration',
      unit: 'mg/Nm³',
      decimals: 0,
      importanceClass: 'B',
      consumers: [{ kind: 'display', name: 'boiler house' }],
      purpose: 'Shows the boiler house when burners drift.',
      allowedErrorAbsolute: 12,
      promisedReferenceMs: 3 * dayMs,
      fallback: 'Use the last reference.',
      limitations: 'Computed in the control system, not here.',
    },
  },
  {
    site: 'Kallara Refinery',
    area: 'Light ends',
    unitName: 'Debutaniser',
    point: 'SP-336',
    method: { name: 'Distillation by gas chromatography', reproducibility: 5, repeatability: 2 },
    intercept: -96,
    inputs: [
      {
        tag: 'TI-3321',
        description: 'Draw tray temperature',
        unit: '°C',
        mean: 196,
        slow: 3,
        daily: 1.4,
        noise: 0.3,
        coefficient: 1.32,
      },
      {
        tag: 'FI-3324',
        description: 'Reflux',
        unit: 'm³/h',
        mean: 88,
        slow: 4,
        daily: 2,
        noise: 0.5,
        coefficient: -0.12,
      },
    ],
    labSd: 1.2,
    modelSd: 1.1,
    hoursBetweenSamples: 12,
    silentDays: 0,
    bias: () => 0,
    form: 'regression',
    life: 'waiting-for-approval',
    owned: true,
    sheet: {
      tagName: 'TY-3306',
      name: 'Light naphtha 95 % point',
      quantity: 'temperature',
      unit: '°C',
      decimals: 1,
      importanceClass: 'B',
      consumers: [{ kind: 'display', name: 'control room' }],
      purpose: 'Shows the cut point between samples.',
      allowedErrorAbsolute: 3,
      promisedReferenceMs: 2 * dayMs,
      fallback: 'Use the laboratory value.',
      limitations: '',
    },
  },
];

export const stepMs = 3_600_000;

/** Simulated hours of one soft sensor: what each input read, and what the truth was. */
export interface DemoHistory {
  at: number[];
  inputs: number[][];
  truth: number[];
  estimate: number[];
}

/** Simulates a plant over `days` up to `endMs`, by the hour. The estimate differs from the truth by the bias and its own noise. */
export function simulate(sensor: DemoSensor, endMs: number, days: number, seed: number): DemoHistory {
  const random = randomFrom(seed);
  const steps = days * 24;
  const history: DemoHistory = { at: [], inputs: sensor.inputs.map(() => []), truth: [], estimate: [] };
  const slow = sensor.inputs.map(() => 0);
  for (let k = 0; k <= steps; k++) {
    const at = endMs - (steps - k) * stepMs;
    let estimate = sensor.intercept;
    for (const [j, input] of sensor.inputs.entries()) {
      slow[j] = 0.985 * slow[j]! + 0.17 * random.normal();
      const value = inputValue(input, slow[j]!, k, random);
      history.inputs[j]!.push(value);
      estimate += input.coefficient * value;
    }
    history.at.push(at);
    history.estimate.push(estimate);
    history.truth.push(estimate - sensor.bias((endMs - at) / dayMs) + sensor.modelSd * random.normal());
  }
  return history;
}

function inputValue(input: DemoInput, slow: number, k: number, random: Random): number {
  const day = Math.sin((2 * Math.PI * (k % 24)) / 24);
  return Number(
    (input.mean + input.slow * slow + input.daily * day + input.noise * random.normal()).toPrecision(6),
  );
}
