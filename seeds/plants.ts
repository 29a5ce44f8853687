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
    history.truth.push(estimate - sensor.bias((endMs - at) / 86_400_000) + sensor.modelSd * random.normal());
  }
  return history;
}

function inputValue(input: DemoInput, slow: number, k: number, random: Random): number {
  const day = Math.sin((2 * Math.PI * (k % 24)) / 24);
  return Number(
    (input.mean + input.slow * slow + input.daily * day + input.noise * random.normal()).toPrecision(6),
  );
}
