import { describe, expect, it } from 'vitest';
import { gainQuality } from '../../shared/numerics/gain-quality.ts';
import { solveDare, steadyFilter } from '../../shared/numerics/riccati.ts';
import { answered, expectAllRelative, expectRelative } from './expectations.ts';
import item from './values/dare-benchmarks.json';
import steady from './values/steady-filter.json';

const modulus = (e: { re: number; im: number }) => Math.hypot(e.re, e.im);

// Source: Benner, Laub & Mehrmann 1995 (DAREX). Inputs read in scipy's tests; solutions exact (sympy) or by 60-digit
// doubling. R is singular in examples 3 and 4, A in 5 and 12, X indefinite in 4.
describe('discrete algebraic Riccati equation, DAREX benchmarks', () => {
  for (const { name, A, B, Q, R, S, X, gain, closed_loop_abs_eig, rel_tol } of item.expected.cases) {
    it(name, () => {
      const solved = answered(solveDare({ A, B, Q, R, S: S ?? undefined }));
      const size = Math.max(...X.flat().map(Math.abs));
      expectAllRelative(solved.X.flat(), X.flat(), 0, rel_tol * size);
      expectAllRelative(solved.gain.flat(), gain.flat(), 0, 1e-7 * Math.max(1, ...gain.flat().map(Math.abs)));
      const moduli = solved.closedLoop.map(modulus).sort((a, b) => a - b);
      expectAllRelative(moduli, closed_loop_abs_eig, 0, 1e-7);
      expect(solved.residual).toBeLessThan(1e-12);
    });
  }
});

describe('steady state of the Kalman filter', () => {
  const { inputs, expected, tolerance } = steady;

  // Computed with SciPy 1.10.1 solve_discrete_are.
  it('four lumps, two measured', () => {
    const filter = answered(steadyFilter(inputs));
    expectAllRelative(filter.predictedCovariance.flat(), expected.predictedCovariance.flat(), tolerance.rel);
    expectAllRelative(filter.filterGain.flat(), expected.filterGain.flat(), tolerance.rel);
    expectAllRelative(
      filter.modes.map(modulus).sort((a, b) => a - b),
      expected.modes,
      tolerance.rel,
    );
  });

  // Computed with GNU Octave 7.3.0, control 3.4.0: [m, p, z, e] = dlqe(A, eye(2), C, Q, R).
  it('an unstable model that is observed', () => {
    const A = [
      [1.1, 0.3],
      [0, 0.8],
    ];
    const Q = [
      [0.2, 0.1],
      [0.1, 0.3],
    ];
    const filter = answered(steadyFilter({ A, C: [[1, 0.5]], Q, R: [[0.7]] }));
    expectAllRelative(filter.filterGain.flat(), [0.4248473351148932, 0.2956968026931233], 1e-10);
    const P = [0.5984458839371767, 0.1950584650471992, 0.1950584650471992, 0.5786904493176482];
    expectAllRelative(filter.predictedCovariance.flat(), P, 1e-10);
    const filtered = [0.3027627104025384, -0.01073915164422647, -0.01073915164422647, 0.4354538270588253];
    expectAllRelative(filter.filteredCovariance.flat(), filtered, 1e-10);
    expectAllRelative(filter.modes.map(modulus), [0.6132110174433595, 0.6132110174433595], 1e-10);
  });

  // Computed with SciPy 1.10.1 solve_discrete_lyapunov.
  it('covariance and passed noise of a typed gain', () => {
    const quality = answered(gainQuality({ ...inputs, step: 60 }, inputs, inputs.typedGain));
    expectAllRelative(quality.covariance.flat(), expected.typed.covariance.flat(), tolerance.rel);
    expectRelative(quality.sd[0]!, expected.typed.sd, tolerance.rel);
    expectRelative(quality.noiseSd[0]!, expected.typed.noiseSd, tolerance.rel);
  });
});
