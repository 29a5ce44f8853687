import { describe, expect, it } from 'vitest';
import { lag1Autocorrelation } from '../../shared/numerics/bias.ts';
import { summary } from '../../shared/numerics/descriptive.ts';
import { agreeingDigits, answered } from './expectations.ts';
import lottery from './values/strd-univ-lottery.json';
import mavro from './values/strd-univ-mavro.json';
import numAcc1 from './values/strd-univ-numacc1.json';
import numAcc2 from './values/strd-univ-numacc2.json';
import numAcc4 from './values/strd-univ-numacc4.json';
import piDigits from './values/strd-univ-pidigits.json';

const alternating = (first: number, low: number, high: number) => [
  first,
  ...Array.from({ length: 1000 }, (_, i) => (i % 2 === 0 ? low : high)),
];

// Source: NIST Statistical Reference Datasets, univariate. Certified values read in a published copy.
const sets = [
  { name: 'Lottery', data: lottery.inputs.data, ...lottery },
  { name: 'Mavro', data: mavro.inputs.data, ...mavro },
  { name: 'PiDigits', data: piDigits.inputs.data, ...piDigits },
  { name: 'NumAcc1', data: numAcc1.inputs.data, ...numAcc1 },
  { name: 'NumAcc2', data: alternating(1.2, 1.1, 1.3), ...numAcc2 },
  {
    name: 'NumAcc4 (one-pass formulas lose every digit)',
    data: alternating(1e7 + 0.2, 1e7 + 0.1, 1e7 + 0.3),
    ...numAcc4,
  },
];

describe('mean, SD and lag-1 autocorrelation reproduce the certified values of NIST StRD', () => {
  it.each(sets)('$name', ({ data, expected, tolerance }) => {
    const { mean, sd } = answered(summary(data));
    const { r1 } = answered(lag1Autocorrelation(data));
    expect(agreeingDigits(mean, expected.mean)).toBeGreaterThanOrEqual(tolerance.min_LRE_mean);
    expect(agreeingDigits(sd, expected.sd)).toBeGreaterThanOrEqual(tolerance.min_LRE_sd);
    expect(agreeingDigits(r1, expected.r1)).toBeGreaterThanOrEqual(tolerance.min_LRE_r1);
  });
});
