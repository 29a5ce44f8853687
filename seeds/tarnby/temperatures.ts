import type { DemoSensor, DemoUnit } from '../simulation/unit.ts';

const dayMs = 86_400_000;

/** What the soft sensors for temperatures at Tarnby have in common. */
export const temperature = {
  quantity: 'temperature',
  unit: '°C',
  decimals: 0,
  transportDelayMs: 0,
  promisedReferenceMs: 2 * dayMs,
} as const;

export const pyrometry = { name: 'Immersion pyrometry', repeatability: 6, reproducibility: 9 };

export const crown = (
  point: string,
  inputs: string[],
): Pick<DemoSensor, 'truth' | 'estimate' | 'sampling'> => ({
  truth: 'crown',
  estimate: { inputs },
  sampling: { point, method: pyrometry, everyHours: 8, firstHour: 6, reportedAfterHours: 2, digits: 1 },
});

export const furnaceDrives = (fuel: number, pull: number): DemoUnit['drives'] => ({
  fuel: { mean: fuel, slow: fuel * 0.006, hours: 40, daily: fuel * 0.001 },
  pull: { mean: pull, slow: pull * 0.005, hours: 60, levels: { values: [-2, 0, 2], days: 6 } },
  oxygen: { mean: 2, slow: 0.18, hours: 12 },
  ambient: { mean: 34, slow: 0.25, hours: 60, daily: 0.3 },
});
