import { describe, expect, it } from 'vitest';
import { placeGain, predictorGainOf } from '../../shared/numerics/gain-placement.ts';
import type { Complex } from '../../shared/numerics/linear-algebra.ts';
import type { TimeDomain } from '../../shared/numerics/state-space.ts';
import { answered, expectAllRelative, expectRelative } from './expectations.ts';
import one from './values/observer-gain-one-output.json';
import several from './values/observer-gain-several-outputs.json';

const bySize = (a: Complex, b: Complex) => a.re - b.re || a.im - b.im;

function expectPoles(actual: Complex[], wanted: Complex[], tolerance: number): void {
  const rounded = (list: Complex[]) =>
    list.map(({ re, im }) => ({ re: Number(re.toFixed(9)), im: Number(im.toFixed(9)) })).sort(bySize);
  const [a, w] = [rounded(actual), rounded(wanted)];
  expectAllRelative(
    a.map((p) => p.re),
    w.map((p) => p.re),
    0,
    tolerance,
  );
  expectAllRelative(
    a.map((p) => p.im),
    w.map((p) => p.im),
    0,
    tolerance,
  );
}

// Sources: Ogata 5th ed. examples 10-6, 10-1, 10-8; Franklin, Powell & Workman examples 8.4, 8.1; Chen 1999 ch. 8 (from
// memory, verified with exact Ackermann in sympy and Octave place); Octave's acker.m and place.m self-tests (read).
describe('observer gain, one output', () => {
  for (const { name, A, C, poles, domain, L, source } of one.expected.cases) {
    it(`${name} (${source})`, () => {
      const time: TimeDomain = domain === 'discrete' ? { domain, step: 0.1 } : { domain: 'continuous' };
      const placed = answered(placeGain({ A, C, ...time }, poles));
      expectAllRelative(placed.predictorGain.flat(), L, one.tolerance.rel);
    });
  }

  it('filter form of the satellite estimator: Lc = A⁻¹ Lp', () => {
    const { A, C, poles } = one.expected.cases.find((c) => c.name.startsWith('FPW satellite prediction'))!;
    const { Lc, Lp } = one.expected.fpw_current_estimator;
    const placed = answered(placeGain({ A, C, domain: 'discrete', step: 0.1 }, poles));
    expectAllRelative(placed.filterGain!.flat(), Lc, one.tolerance.rel);
    expectAllRelative(
      answered(predictorGainOf(A, placed.filterGain!)).predictorGain.flat(),
      Lp,
      one.tolerance.rel,
    );
  });
});

// Source: Kautsky, Nichols & Van Dooren 1985, examples 1 and 2; Tits & Yang 1996; the car read in scipy's tests. |det X| and
// cond X computed with scipy 1.10.1 place_poles (YT). The gain itself is not unique.
describe('observer gain, several outputs: poles reached and robustness as good as Tits & Yang', () => {
  for (const { name, observer_dual, YT } of several.expected.cases) {
    it(name, () => {
      const { A, C } = observer_dual;
      const poles = observer_dual.poles.map((pole) =>
        typeof pole === 'number' ? { re: pole, im: 0 } : pole,
      );
      const placed = answered(placeGain({ A, C, domain: 'continuous' }, poles));
      expectPoles(placed.poles, poles, several.tolerance.poles_abs);
      expect(placed.determinant!).toBeGreaterThan(YT.absdetX * (1 - 1e-6));
      expectRelative(placed.condition!, YT.condX, 1e-2);
    });
  }
});
