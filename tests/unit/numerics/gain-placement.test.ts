import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { placeGain } from '../../../shared/numerics/gain-placement.ts';
import { gainQuality } from '../../../shared/numerics/gain-quality.ts';
import { discretiseWithDeadTime, firstOrderLag } from '../../../shared/numerics/lags.ts';
import { runObserver } from '../../../shared/numerics/observer.ts';
import { steadyFilter } from '../../../shared/numerics/riccati.ts';
import { answered, expectAllRelative } from '../../reference/expectations.ts';
import { randomModel } from './random-models.ts';
import { sampled, noise, inputs, gainFor } from './furnace-wall.ts';

describe('gains', () => {
  it('random systems get the poles that were asked for, one output or several', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 10_000 }),
        fc.integer({ min: 1, max: 6 }),
        fc.integer({ min: 1, max: 3 }),
        (seed, n, m) => {
          const model = randomModel(seed, n, m, 0);
          const poles = Array.from({ length: n }, (_, i) => ({ re: 0.1 + 0.12 * i, im: 0 }));
          const result = placeGain({ ...model, domain: 'discrete', step: 1 }, poles);
          if (!result.ok) {
            expect(['ill-conditioned', 'singular', 'wrong-shape']).toContain(result.reason);
            return;
          }
          expect(result.miss).toBeLessThan(1e-6);
        },
      ),
      { numRuns: 80 },
    );
  });

  it('delayed inputs are known: their gain stays 0 and a singular A is no obstacle', () => {
    const ends = { input: { name: 'valve', unit: '%' }, output: { name: 'temperature', unit: '°C' } };
    const lag = answered(firstOrderLag({ ...ends, gain: 2, timeConstant: 300 })).model;
    const { model, exactStates } = answered(discretiseWithDeadTime(lag, 30, [100]));
    const placed = answered(placeGain(model, [{ re: 0.6, im: 0 }], exactStates));
    expect(placed.filterGain!.slice(1).flat()).toEqual([0, 0, 0, 0]);
    const moduli = placed.poles.map((pole) => Math.hypot(pole.re, pole.im)).sort();
    expect(moduli[4]!).toBeCloseTo(0.6, 12);
    expect(moduli[3]!).toBeLessThan(1e-3);
  });

  it('of the Riccati equation spreads the error less than any other', () => {
    const best = answered(steadyFilter({ ...sampled, ...noise }));
    const optimal = answered(gainQuality(sampled, noise, best.filterGain));
    expectAllRelative(optimal.covariance.flat(), best.filteredCovariance.flat(), 1e-9);
    for (const hours of [3, 6, 12]) {
      expect(answered(gainQuality(sampled, noise, gainFor(hours).filterGain!)).sd[0]!).toBeGreaterThan(
        optimal.sd[0]!,
      );
    }
  });

  it('responses start where they must and end at rest', () => {
    const quality = answered(gainQuality(sampled, noise, gainFor(6).filterGain!));
    expect(quality.initialErrorResponses.map((trace) => trace[0]!)).toEqual([1, 0, 0]);
    for (const trace of quality.initialErrorResponses) expect(Math.abs(trace[120]!)).toBeLessThan(0.02);
    const end = quality.readingStepResponses[0]!.slice(-2);
    expect(Math.abs(end[1]! - end[0]!)).toBeLessThan(0.01 * Math.abs(end[1]!));
    expect(quality.times[120]!).toBeGreaterThanOrEqual(2 * quality.settling);
  });

  it('refuses an unstable gain with the modulus at fault', () => {
    const result = gainQuality(sampled, noise, [[0], [0], [3]]);
    expect(result).toMatchObject({ ok: false, reason: 'unstable', field: 'filterGain' });
    expect((result as { figure: number }).figure).toBeGreaterThan(1);
    const run = runObserver(sampled, { form: 'filter', gain: [[0], [0], [3]] }, [0, 0, 0], {
      u: inputs(3),
      y: new Float64Array(3),
    });
    expect(run).toMatchObject({ ok: false, reason: 'unstable', field: 'gain' });
  });
});
