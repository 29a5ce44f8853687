import { describe, expect, it } from 'vitest';
import { correlatedRunLength, cusumPower, designCusum } from '../../../shared/numerics/cusum-design.ts';
import { cusumRunLength } from '../../../shared/numerics/run-length.ts';
import { runRulesRunLength } from '../../../shared/numerics/run-rules-length.ts';
import { nelsonRules } from '../../../shared/numerics/run-rules.ts';
import { correlatedCusumLength } from '../../trials/correlated-cusum-chain.ts';
import { answered, expectRelative } from '../../reference/expectations.ts';

describe('the interval of the bias CUSUM', () => {
  it('is about 14 at 3 samples a day and φ 0.3 for one false signal in ten years', () => {
    const design = answered(designCusum({ falseSignalsPerYear: 0.1, samplesPerYear: 1095, phi: 0.3 }));
    expect(design.h).toBeGreaterThan(13);
    expect(design.h).toBeLessThan(14.5);
    expect(design.runLength).toBe(10_950);
  });

  it('gives the run length that was wanted, by its own approximation', () => {
    for (const phi of [0, 0.2, 0.5, 0.9]) {
      const { k, h, runLength } = answered(
        designCusum({ falseSignalsPerYear: 0.1, samplesPerYear: 365, phi }),
      );
      expectRelative(answered(correlatedRunLength({ k, h, phi })).runLength, runLength, 1e-9);
    }
  });

  it.each([3, 5, 8])('independent errors: agrees with the integral equation at h = %s', (h) => {
    const exact = answered(cusumRunLength({ k: 0.5, h })).runLength;
    expectRelative(answered(correlatedRunLength({ k: 0.5, h, phi: 0 })).runLength, exact, 0.01);
  });

  it.each([
    [0.3, 5],
    [0.3, 8],
    [0.6, 12],
  ])('autocorrelated errors: agrees with a Markov chain at φ = %s, h = %s', (phi, h) => {
    const exact = correlatedCusumLength(0.5, h, phi) / 2;
    expectRelative(answered(correlatedRunLength({ k: 0.5, h, phi })).runLength, exact, 0.02);
  });

  it('the textbook h of 5 gives 11 false signals a year at 3 samples a day and φ 0.3', () => {
    const { runLength } = answered(correlatedRunLength({ k: 0.5, h: 5, phi: 0.3 }));
    expect(Math.round(1095 / runLength)).toBe(11);
  });

  it('a larger shift is seen sooner, and both directions alike', () => {
    const design = { k: 0.5, h: 13.6, phi: 0.3 };
    const { samples } = answered(cusumPower(design, [0, 0.5, 1, 2]));
    expect(samples).toEqual(samples.toSorted((a, b) => b - a));
    expect(answered(cusumPower(design, [-1])).samples[0]).toBe(samples[2]);
    expectRelative(samples[2]!, correlatedCusumLength(-0.5, 13.6, 0.3), 0.05);
  });

  it('refuses a wish that leaves hardly a sample between false signals', () => {
    expect(designCusum({ falseSignalsPerYear: 12, samplesPerYear: 52, phi: 0 })).toMatchObject({
      reason: 'out-of-range',
    });
    expect(designCusum({ falseSignalsPerYear: 0.1, samplesPerYear: 52, phi: 1 })).toMatchObject({
      field: 'phi',
    });
  });
});

it('run lengths of rules that are no matter of zones are refused by name', () => {
  expect(runRulesRunLength(nelsonRules)).toMatchObject({
    ok: false,
    reason: 'out-of-range',
    field: '6-trending',
  });
});
