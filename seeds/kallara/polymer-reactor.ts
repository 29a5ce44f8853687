import { polymerReactor } from '../physics/polymer-reactor.ts';
import type { DemoUnit } from '../simulation/unit.ts';

const site = 'Kallara Refinery';
const minuteMs = 60_000;
const dayMs = 86_400_000;

export const polymers: DemoUnit = {
  site,
  area: 'Polymers',
  name: 'Polypropylene reactor 2',
  model: polymerReactor,
  drives: {
    hydrogen: { mean: 0.5, slow: 0.012, hours: 20, levels: { values: [-0.06, 0, 0.06], days: 6 } },
    bed: { mean: 70, slow: 0.4, hours: 20 },
    production: { mean: 20, slow: 0.5, hours: 30 },
    donor: { mean: 1, slow: 0.08, hours: 40 },
  },
  instruments: [
    {
      tag: 'AI-9301',
      description: 'Hydrogen to propylene',
      unit: 'mol%',
      reads: 'hydrogen',
      noise: 0.001,
      digits: 4,
    },
    { tag: 'TI-9302', description: 'Bed temperature', unit: '°C', reads: 'bed', noise: 0.03, digits: 2 },
    { tag: 'FI-9303', description: 'Production', unit: 't/h', reads: 'production', noise: 0.1, digits: 1 },
    {
      tag: 'FI-9304',
      description: 'Donor to catalyst',
      unit: 'mol/mol',
      reads: 'donor',
      noise: 0.004,
      digits: 3,
    },
  ],
  sensors: [
    {
      truth: 'logMeltIndex',
      estimate: { inputs: ['AI-9301', 'TI-9302'] },
      sampling: {
        point: 'PP-93',
        method: { name: 'Melt flow rate 230 °C, 2.16 kg', repeatability: 0.02, reproducibility: 0.045 },
        everyHours: 8,
        firstHour: 6,
        reportedAfterHours: 2,
        digits: 3,
      },
      life: 'in-service',
      owner: 'engineer',
      deputy: 'deputy',
      approver: 'refineryManager',
      reviewOnDay: 188,
      sheet: {
        tagName: 'AY-9310',
        name: 'Melt index, logarithm to base 10',
        quantity: 'melt index',
        unit: 'log g/10 min',
        decimals: 3,
        importanceClass: 'A',
        consumers: [
          { kind: 'closed-loop', name: 'hydrogen ratio' },
          { kind: 'quality-release', name: 'grade certificate' },
        ],
        purpose: 'Holds the grade through the hydrogen ratio.',
        allowedErrorAbsolute: 0.025,
        transportDelayMs: 90 * minuteMs,
        promisedReferenceMs: 2 * dayMs,
        fallback: 'Hold the hydrogen ratio and sample every two hours.',
        limitations: 'Give it three residence times after a grade change.',
      },
    },
    {
      truth: 'solubles',
      estimate: { inputs: ['FI-9304', 'TI-9302'] },
      sampling: {
        point: 'PP-94',
        method: { name: 'Xylene solubles', repeatability: 0.1, reproducibility: 0.2 },
        everyHours: 24,
        firstHour: 10,
        reportedAfterHours: 8,
        digits: 2,
      },
      life: 'in-service',
      owner: 'refineryEngineer',
      deputy: 'deputy',
      approver: 'refineryManager',
      sheet: {
        tagName: 'AY-9312',
        name: 'Xylene solubles',
        quantity: 'composition',
        unit: '%',
        decimals: 2,
        importanceClass: 'C',
        consumers: [{ kind: 'display', name: 'laboratory' }],
        purpose: 'Shows tacticity between the daily samples.',
        allowedErrorAbsolute: 0.08,
        transportDelayMs: 90 * minuteMs,
        promisedReferenceMs: 5 * dayMs,
        fallback: 'Use the laboratory value.',
        limitations: '',
      },
    },
  ],
};
