import { describe, expect, it } from 'vitest';
import { dominantSettling, errorNorms, settlingSteps } from '../../shared/numerics/error-decay.ts';
import { answered, expectAllRelative, expectRelative } from './expectations.ts';
import item from './values/error-decay.json';

// Source: elementary, ln 20 and ln 50 time constants; norms simulated with numpy 1.24.2.
describe('decay of the observer error', () => {
  for (const system of item.expected.discrete) {
    const { name, Ad, C, L, T, e0 } = system;
    const M = Ad.map((row, i) => row.map((a, j) => a - L[i]![0]! * C[0]![j]!));

    it(`${name}: the norm may grow before it decays`, () => {
      expectAllRelative(
        answered(errorNorms(M, e0, 10)).norms,
        system.error_norm_first_11,
        item.tolerance.rel,
        1e-14,
      );
      expect(answered(settlingSteps(M, e0, 0.05)).steps).toBe(system.k5_norm_stays_below);
      expect(answered(settlingSteps(M, e0, 0.02)).steps).toBe(system.k2_norm_stays_below);
    });

    it(`${name}: dominant mode`, () => {
      const five = answered(dominantSettling(M, { domain: 'discrete', step: T }, 0.05));
      const two = answered(dominantSettling(M, { domain: 'discrete', step: T }));
      // A double eigenvalue is known to half the digits.
      const rel = name.includes('slow') ? 1e-6 : item.tolerance.rel;
      expectRelative(five.timeConstant, system.dominant_time_constant_s, rel);
      expectRelative(five.settling, system.t5_dominant_s, rel);
      expectRelative(two.settling, system.t2_dominant_s, rel);
      expect(Math.ceil(five.settling / T)).toBe(system.k5_dominant);
      expect(Math.ceil(two.settling / T)).toBe(system.k2_dominant);
    });
  }

  it('continuous poles', () => {
    for (const { poles, dominant_tau_s, t5_s, t2_s } of item.expected.continuous) {
      const [a, b] = poles.map((pole) => (typeof pole === 'number' ? { re: pole, im: 0 } : pole));
      const M =
        a!.im === 0
          ? [
              [a!.re, 0],
              [0, b!.re],
            ]
          : [
              [a!.re, a!.im],
              [-a!.im, a!.re],
            ];
      const five = answered(dominantSettling(M, { domain: 'continuous' }, 0.05));
      expectRelative(five.timeConstant, dominant_tau_s, item.tolerance.rel);
      expectRelative(five.settling, t5_s, item.tolerance.rel);
      expectRelative(
        answered(dominantSettling(M, { domain: 'continuous' })).settling,
        t2_s,
        item.tolerance.rel,
      );
    }
  });
});
