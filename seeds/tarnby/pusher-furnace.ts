import { pusherFurnace } from '../physics/pusher-furnace.ts';
import type { DemoUnit } from '../simulation/unit.ts';
import { temperature } from './temperatures.ts';

const site = 'Tarnby Works';
const dayMs = 86_400_000;
const trailing = { name: 'Trailing thermocouple', repeatability: 5, reproducibility: 8 };

const zone = (number: number) => ({
  tag: `TI-331${number}`,
  description: `Zone ${number} temperature`,
  unit: '°C',
  reads: `zone${number}`,
  noise: 0.6,
  digits: 1,
});

export const pusher: DemoUnit = {
  site,
  area: 'Heat treatment',
  name: 'Pusher furnace 3',
  model: pusherFurnace,
  drives: {
    zone1: { mean: 920, slow: 9, hours: 20, idle: 400 },
    zone2: { mean: 1040, slow: 8, hours: 20, idle: 420 },
    zone3: { mean: 1075, slow: 7, hours: 20, idle: 430 },
    throughput: { mean: 6, slow: 0.25, hours: 16, levels: { values: [-0.6, 0, 0.5], days: 3 }, idle: 0.2 },
  },
  stops: [{ fromDay: 150.3, toDay: 153.1 }],
  instruments: [
    zone(1),
    zone(2),
    // Put back less deep after the shutdown, it reads the cooler gas of the wall.
    { ...zone(3), fault: { kind: 'step', fromDay: 151, by: -13 } },
    { tag: 'WI-3320', description: 'Throughput', unit: 't/h', reads: 'throughput', noise: 0.03, digits: 2 },
    { tag: 'FI-3321', description: 'Fuel gas flow', unit: 'Nm³/h', reads: 'fuel', noise: 1.5, digits: 1 },
    {
      tag: 'TI-3322',
      description: 'Pyrometer at discharge',
      unit: '°C',
      reads: 'surface',
      noise: 2.5,
      digits: 0,
    },
  ],
  sensors: [
    {
      truth: 'core',
      estimate: { inputs: ['TI-3311', 'TI-3312', 'TI-3313', 'WI-3320'] },
      sampling: {
        point: 'PF-3 discharge',
        method: trailing,
        everyHours: 8,
        firstHour: 5,
        reportedAfterHours: 3,
        digits: 1,
      },
      life: 'in-service',
      owner: 'deputy',
      deputy: 'glassEngineer',
      approver: 'glassManager',
      sheet: {
        ...temperature,
        tagName: 'TY-3301',
        name: 'Core of the load at discharge',
        importanceClass: 'A',
        consumers: [{ kind: 'closed-loop', name: 'pusher interval' }],
        purpose: 'Sets the pusher interval so that every load is through.',
        allowedErrorAbsolute: 7,
        fallback: 'Push at the interval of the table for the grade.',
        limitations: 'Built for bars of 80 mm.',
      },
    },
    {
      truth: 'surface',
      estimate: { external: { wander: 2, hours: 20, noise: 1 } },
      sampling: {
        point: 'PF-3 surface',
        method: trailing,
        everyHours: 24,
        firstHour: 5,
        reportedAfterHours: 3,
        digits: 1,
      },
      life: 'in-service',
      owner: 'glassEngineer',
      deputy: 'deputy',
      approver: 'glassManager',
      sheet: {
        ...temperature,
        tagName: 'TY-3303',
        name: 'Surface of the load at discharge',
        importanceClass: 'B',
        consumers: [{ kind: 'quality-release', name: 'quench certificate' }],
        purpose: 'Stands on the certificate of each load as its temperature before the quench.',
        allowedErrorAbsolute: 6,
        promisedReferenceMs: 4 * dayMs,
        fallback: 'Use the pyrometer at discharge.',
        limitations: 'Computed in the control system of the furnace.',
      },
    },
    {
      truth: 'core',
      estimate: { inputs: ['TI-3312', 'TI-3313', 'TI-3322'] },
      sampling: {
        point: 'PF-3 trial',
        method: trailing,
        everyHours: 48,
        firstHour: 13,
        reportedAfterHours: 4,
        digits: 1,
      },
      life: 'draft',
      owner: 'engineer',
      deputy: 'deputy',
      approver: 'glassManager',
      sheet: {
        ...temperature,
        tagName: 'TY-3305',
        name: 'Core of the load, with pyrometer',
        importanceClass: 'C',
        consumers: [{ kind: 'display', name: 'control room' }],
        purpose: 'A trial: does the pyrometer at discharge say more than the zones?',
        allowedErrorAbsolute: 7,
        promisedReferenceMs: 7 * dayMs,
        fallback: '',
        limitations: '',
      },
    },
  ],
};
