import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  automaticCorrection,
  clampedCorrection,
  delayedLambdaLimit,
  perSampleCorrection,
} from '../../../shared/numerics/automatic-correction.ts';
import { exponentialUpdate } from '../../../shared/numerics/exponential-update.ts';
import { lag1Verdict } from '../../../shared/numerics/lag1-verdict.ts';
import { screenSample } from '../../../shared/numerics/sample-screen.ts';
import { autoregression, seededRandom } from '../../trials/seeded-random.ts';
import { answered, expectRelative } from '../../reference/expectations.ts';

const limits = { residualSd: 2, rmsep: 3 };

describe('automatic correction', () => {
  it('moves once by the mean since onset times n/(n + 8), against it', () => {
    const moved = answered(automaticCorrection(1, { meanSinceOnset: 1.5, countSinceOnset: 8 }, limits));
    expect(moved).toMatchObject({ correction: 0.25, step: -0.75, needsApprover: false, level: 'normal' });
  });

  it('does one residual SD of a larger step and asks for an approver', () => {
    const moved = answered(automaticCorrection(0, { meanSinceOnset: -30, countSinceOnset: 8 }, limits));
    expect(moved).toMatchObject({ correction: 2, step: 2, wanted: 15, needsApprover: true });
  });

  it('turns amber at 2 RMSEP, stops at 3 and lets a correction come back', () => {
    expect(answered(clampedCorrection(4.5, 1.5, limits))).toMatchObject({ correction: 6, level: 'amber' });
    expect(answered(clampedCorrection(8, 2, limits))).toMatchObject({
      correction: 9,
      step: 1,
      level: 'stop',
    });
    expect(answered(clampedCorrection(12, 1, limits))).toMatchObject({
      correction: 12,
      step: 0,
      level: 'stop',
    });
    expect(answered(clampedCorrection(12, -1, limits))).toMatchObject({ correction: 11, step: -1 });
  });

  it('never steps further than one residual SD nor beyond 3 RMSEP', () => {
    const number = fc.double({ min: -50, max: 50, noNaN: true });
    fc.assert(
      fc.property(number, number, (correction, wanted) => {
        const moved = answered(clampedCorrection(correction, wanted, limits));
        expect(Math.abs(moved.step)).toBeLessThanOrEqual(limits.residualSd + 1e-12);
        expect(Math.abs(moved.correction)).toBeLessThanOrEqual(Math.max(9, Math.abs(correction)));
      }),
    );
  });
});

describe('per-sample correction', () => {
  const wide = { residualSd: 1e9, rmsep: 1e9 };

  it('is the exponential update, one sample at a time', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: -100, max: 100, noNaN: true }), { minLength: 1, maxLength: 40 }),
        (errors) => {
          const batch = answered(exponentialUpdate(errors, 0.2));
          let correction = 0;
          for (const [i, error] of errors.entries()) {
            expectRelative(correction, batch.correctionBefore[i]!, 1e-9);
            const sample = { rawAtTaken: 50 + error, reference: 50 };
            correction = answered(
              perSampleCorrection(correction, sample, { lambda: 0.2, closedLoop: false }, wide),
            ).correction;
          }
          expectRelative(correction, batch.correctionAfter, 1e-9);
        },
      ),
    );
  });

  it('uses 0.1 unless told otherwise and refuses more in a closed loop', () => {
    const sample = { rawAtTaken: 60, reference: 50 };
    expect(answered(perSampleCorrection(0, sample, { closedLoop: true }, wide)).correction).toBe(-1);
    expect(perSampleCorrection(0, sample, { lambda: 0.2, closedLoop: true }, wide)).toEqual({
      ok: false,
      reason: 'out-of-range',
      field: 'lambda',
      figure: 0.2,
    });
  });

  /** Amplitude of c[k+1] = c[k] − λ (1 + c[k − d]) about its rest after many steps. */
  const leftOver = (lambda: number, delay: number) => {
    const c = new Array<number>(delay + 1).fill(0);
    for (let k = 0; k < 4000; k++) c.push(c.at(-1)! - lambda * (1 + c[c.length - 1 - delay]!));
    return Math.max(...c.slice(-100).map((value) => Math.abs(value + 1)));
  };

  it.each([0, 1, 3, 8])(
    'with the correction of %s samples ago it settles below the limit and diverges above',
    (delay) => {
      const { lambda } = answered(delayedLambdaLimit(delay));
      expect(leftOver(0.95 * lambda, delay)).toBeLessThan(1e-3);
      expect(leftOver(1.05 * lambda, delay)).toBeGreaterThan(10);
    },
  );
});

describe('lag-1 verdict on a per-sample correction', () => {
  const corrected = (phi: number, lambda: number, walk: number) => {
    const random = seededRandom(11);
    const noise = autoregression(random, 2000, phi);
    let drift = 0;
    const raw = noise.map((value) => value + (drift += walk * random.normal()));
    return answered(exponentialUpdate(raw, lambda)).correctedErrors;
  };
  it('chasing noise, about right, too slow', () => {
    expect(answered(lag1Verdict(corrected(0, 0.5, 0), 0.5)).verdict).toBe('chasing-noise');
    expect(answered(lag1Verdict(corrected(0, 0.5, 0.7), 0.5)).verdict).toBe('right');
    expect(answered(lag1Verdict(corrected(0, 0.1, 0.7), 0.1)).verdict).toBe('too-slow');
  });
  it('sets r₁ ± 2/√n against 0 and −λ/2', () => {
    const errors = corrected(0, 0.4, 0).subarray(0, 400);
    expect(answered(lag1Verdict(errors, 0.4))).toMatchObject({ n: 400, band: 0.1, noise: -0.2 });
    // r₁ of about −1 is below both.
    const alternating = Float64Array.from({ length: 400 }, (_, i) => (i % 2 ? 1 : -1));
    expect(answered(lag1Verdict(alternating, 0.1)).verdict).toBe('chasing-noise');
  });

  it('cannot tell from few samples', () => {
    expect(answered(lag1Verdict(corrected(0, 0.3, 0).subarray(0, 20), 0.3)).verdict).toBe('cannot-tell');
  });
});

describe('screening a single sample', () => {
  const counted = [1, 1.2, 0.8, 1.1, 0.9];
  it('counts up to 3.5 SDs from the local bias, holds beyond', () => {
    expect(answered(screenSample(4.4, counted, 1, null))).toMatchObject({ verdict: 'count', localBias: 1 });
    expect(answered(screenSample(4.6, counted, 1, null)).verdict).toBe('hold');
  });
  it('two in a row on the same side are a change, on opposite sides not', () => {
    expect(answered(screenSample(5, counted, 1, 4)).verdict).toBe('change');
    expect(answered(screenSample(5, counted, 1, -4)).verdict).toBe('hold');
  });
  it('knows no local bias before three counted errors', () => {
    expect(answered(screenSample(3, [9, 9], 1, null))).toMatchObject({ localBias: 0, verdict: 'count' });
  });
});
