import { evaporator } from '../physics/evaporator.ts';
import type { DemoUnit } from '../simulation/unit.ts';

const site = 'Ostrander Mill';
const dayMs = 86_400_000;
const people = { deputy: 'deputy', approver: 'manager' } as const;

export const concentrator: DemoUnit = {
  site,
  area: 'Evaporation',
  name: 'Concentrator',
  model: evaporator,
  drives: {
    feed: { mean: 30, slow: 0.5, hours: 20, levels: { values: [-0.8, 0, 0.8], days: 3 }, idle: 3 },
    feedSolids: { mean: 50, slow: 0.5, hours: 24 },
    steam: { mean: 140, slow: 0.4, hours: 10, idle: 90 },
    vapour: { mean: 0.9, slow: 0.015, hours: 12 },
    transfer: { mean: 616, slow: 8, hours: 60 },
  },
  // Down for a tube repair.
  stops: [{ fromDay: 178.4 }],
  instruments: [
    {
      tag: 'TI-3110',
      description: 'Liquor temperature',
      unit: '°C',
      reads: 'liquorTemperature',
      noise: 0.08,
      digits: 2,
    },
    { tag: 'PI-3111', description: 'Vapour pressure', unit: 'bar', reads: 'vapour', noise: 0.001, digits: 3 },
    { tag: 'TI-3112', description: 'Steam temperature', unit: '°C', reads: 'steam', noise: 0.1, digits: 1 },
    { tag: 'FI-3113', description: 'Feed flow', unit: 'kg/s', reads: 'feed', noise: 0.1, digits: 2 },
    { tag: 'FI-3114', description: 'Condensate', unit: 't/h', reads: 'condensate', noise: 0.15, digits: 1 },
  ],
  sensors: [
    {
      truth: 'solids',
      estimate: { inputs: ['TI-3110', 'PI-3111'] },
      sampling: {
        point: 'Heavy liquor',
        method: { name: 'Solids by drying', repeatability: 0.8, reproducibility: 1.3 },
        everyHours: 12,
        firstHour: 6,
        reportedAfterHours: 6,
        digits: 2,
      },
      life: 'in-service',
      owner: 'engineer',
      ...people,
      sheet: {
        tagName: 'AY-3101',
        name: 'Solids of heavy black liquor',
        quantity: 'composition',
        unit: '%',
        decimals: 1,
        importanceClass: 'B',
        consumers: [{ kind: 'display', name: 'recovery boiler' }],
        purpose: 'Tells the recovery boiler how wet its liquor is.',
        allowedErrorAbsolute: 0.7,
        transportDelayMs: 0,
        promisedReferenceMs: 3 * dayMs,
        fallback: 'Use the refractometer at the ring header.',
        limitations: '',
      },
    },
  ],
};
