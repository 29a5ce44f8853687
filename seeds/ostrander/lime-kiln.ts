import { limeKiln } from '../physics/lime-kiln.ts';
import type { DemoUnit } from '../simulation/unit.ts';

const site = 'Ostrander Mill';
const minuteMs = 60_000;
const dayMs = 86_400_000;
const people = { deputy: 'deputy', approver: 'manager' } as const;

export const kiln: DemoUnit = {
  site,
  area: 'Recausticising',
  name: 'Lime kiln',
  model: limeKiln,
  drives: {
    mud: { mean: 18, slow: 0.35, hours: 30, levels: { values: [-0.5, 0, 0.5], days: 4 } },
    heat: { mean: 4.02, slow: 0.013, hours: 24 },
    moisture: { mean: 22, slow: 0.5, hours: 20 },
    oxygen: { mean: 2.5, slow: 0.15, hours: 10 },
    ambient: { mean: 18, slow: 3, hours: 60, daily: 4 },
  },
  instruments: [
    { tag: 'TI-2310', description: 'Hood temperature', unit: '°C', reads: 'hood', noise: 0.5, digits: 1 },
    { tag: 'TI-2311', description: 'Exit gas temperature', unit: '°C', reads: 'exit', noise: 0.3, digits: 1 },
    { tag: 'FI-2312', description: 'Lime mud, dry', unit: 't/h', reads: 'mud', noise: 0.04, digits: 2 },
    { tag: 'FI-2313', description: 'Fuel gas flow', unit: 'Nm³/h', reads: 'fuel', noise: 2, digits: 0 },
    { tag: 'AI-2314', description: 'Oxygen in kiln gas', unit: '%', reads: 'oxygen', noise: 0.02, digits: 2 },
    {
      tag: 'MI-2315',
      description: 'Moisture of the mud',
      unit: '%',
      reads: 'moisture',
      noise: 0.1,
      digits: 1,
    },
  ],
  sensors: [
    {
      truth: 'carbonate',
      estimate: { inputs: ['TI-2310', 'FI-2312', 'TI-2311'] },
      sampling: {
        point: 'LK discharge',
        method: { name: 'Carbonate by acid titration', repeatability: 0.2, reproducibility: 0.35 },
        everyHours: 8,
        firstHour: 6,
        reportedAfterHours: 2,
        digits: 2,
      },
      life: 'in-service',
      owner: 'pulpEngineer',
      ...people,
      sheet: {
        tagName: 'AY-2301',
        name: 'Residual carbonate in reburnt lime',
        quantity: 'composition',
        unit: '%',
        decimals: 2,
        importanceClass: 'A',
        consumers: [
          { kind: 'closed-loop', name: 'kiln fuel' },
          { kind: 'quality-release', name: 'lime to slaker' },
        ],
        purpose: 'Trims the fuel so that the lime is burnt through but not overburnt.',
        allowedErrorAbsolute: 0.2,
        transportDelayMs: 30 * minuteMs,
        promisedReferenceMs: 2 * dayMs,
        fallback: 'Use the last titration and hold the fuel in manual.',
        limitations: 'Not valid within a day of a mud washer change.',
      },
    },
    {
      truth: 'burning',
      estimate: { external: { wander: 3, hours: 24, noise: 1 } },
      sampling: {
        point: 'LK burning zone',
        method: { name: 'Portable pyrometer', repeatability: 10, reproducibility: 16 },
        everyHours: 24,
        firstHour: 10,
        reportedAfterHours: 1,
        digits: 0,
      },
      life: 'in-service',
      owner: 'pulpEngineer',
      ...people,
      sheet: {
        tagName: 'TY-2304',
        name: 'Burning-zone temperature',
        quantity: 'temperature',
        unit: '°C',
        decimals: 0,
        importanceClass: 'B',
        consumers: [{ kind: 'display', name: 'control room' }],
        purpose: 'Shows the operator how hot the lime is burnt.',
        allowedErrorAbsolute: 9,
        transportDelayMs: 0,
        promisedReferenceMs: 4 * dayMs,
        fallback: 'Use the hood temperature as a trend.',
        limitations: 'Computed in the control system of the kiln.',
      },
    },
  ],
};
