import { describe, expect, it } from 'vitest';
import { discretise, processNoise, zeroOrderHold } from '../../shared/numerics/discretise.ts';
import {
  discretiseWithDeadTime,
  firstOrderLag,
  secondOrderLag,
  withSensorLag,
} from '../../shared/numerics/lags.ts';
import { continuousLyapunov, discreteLyapunov } from '../../shared/numerics/lyapunov.ts';
import { matrixExponential } from '../../shared/numerics/matrix-exponential.ts';
import { answered, expectAllRelative } from './expectations.ts';
import expmHard from './values/expm-hard.json';
import stationary from './values/stationary-covariance.json';
import steady from './values/steady-filter.json';
import vanLoan from './values/van-loan.json';
import doubleIntegrator from './values/zoh-double-integrator.json';
import furnaceWall from './values/zoh-furnace-wall.json';
import ogata from './values/zoh-ogata.json';

/** Agreement within `tolerance` of the largest entry. */
function expectMatrix(actual: number[][], expected: number[][], tolerance: number): void {
  const size = Math.max(...expected.flat().map(Math.abs));
  expectAllRelative(actual.flat(), expected.flat(), 0, tolerance * size);
}

// Source: Moler & Van Loan 1978/2003; Ward 1977, tests 1–3. Matrices from memory, exponentials computed with mpmath
// (60 digits); Moler & Van Loan's printed result is reproduced to all its digits.
describe('matrix exponential on matrices that break naive methods', () => {
  for (const [name, { A, expA }] of Object.entries(expmHard.expected)) {
    it(name, () => {
      expectMatrix(answered(matrixExponential(A)).exponential, expA, expmHard.tolerance.rel);
    });
  }

  it('prints what Moler & Van Loan printed', () => {
    const { A, published } = expmHard.expected.moler_van_loan;
    expectAllRelative(answered(matrixExponential(A)).exponential.flat(), published.flat(), 0, 5.1e-7);
  });

  it('does not scale away a nilpotent part of large norm (exact: I + N)', () => {
    const A = [
      [0, 1e6],
      [0, 0],
    ];
    expect(answered(matrixExponential(A)).exponential).toEqual([
      [1, 1e6],
      [0, 1],
    ]);
  });
});

// Sources: Franklin, Powell & Workman 1998; Ogata 5th ed., ch. 9; an own furnace wall. Computed with mpmath (60 digits),
// checked with scipy 1.10.1 cont2discrete and GNU Octave 7.3.0 c2d.
describe('zero-order hold', () => {
  for (const [name, item] of Object.entries({ doubleIntegrator, ogata, furnaceWall })) {
    for (const { T, Ad, Bd } of item.expected.cases) {
      it(`${name}, T = ${T}`, () => {
        const held = answered(zeroOrderHold(item.inputs.A, item.inputs.B, T));
        expectAllRelative(held.A.flat(), Ad.flat(), item.tolerance.rel, item.tolerance.abs);
        expectAllRelative(held.B.flat(), Bd.flat(), item.tolerance.rel, item.tolerance.abs);
      });
    }
  }

  it('keeps a furnace wall at rest where gas, air and lumps have one temperature', () => {
    const held = answered(zeroOrderHold(furnaceWall.inputs.A, furnaceWall.inputs.B, 3600));
    held.A.forEach((row, i) => {
      const total = [...row, ...held.B[i]!].reduce((sum, value) => sum + value, 0);
      expect(total).toBeCloseTo(1, 13);
    });
  });
});

// Source: Van Loan 1978; Bar-Shalom, Li & Kirubarajan 2001, ch. 6. Computed with mpmath, closed forms where known.
describe('process noise of a sampling interval', () => {
  for (const { name, A, G, q, T, Phi, Qd } of vanLoan.expected.cases) {
    it(`${name}, T = ${T}`, () => {
      const density = q.map((value, i) => q.map((_, j) => (i === j ? value : 0)));
      const noise = answered(processNoise(A, G, density, T));
      expectMatrix(noise.Q, Qd, vanLoan.tolerance.rel);
      expectMatrix(noise.A, Phi, vanLoan.tolerance.rel);
    });
  }

  // Source: closed form of the white-noise driven oscillator.
  it('has the same stationary covariance in continuous and discrete time', () => {
    const { A, G, q, T } = stationary.inputs;
    const W = G.map((gi) => G.map((gj) => gi[0]! * q * gj[0]!));
    const noise = answered(processNoise(A, G, [[q]], T));
    expectMatrix(answered(continuousLyapunov(A, W)).X, stationary.expected.P, stationary.tolerance.rel);
    expectMatrix(
      answered(discreteLyapunov(noise.A, noise.Q)).X,
      stationary.expected.P,
      stationary.tolerance.rel,
    );
  });

  // Computed with SciPy 1.10.1 solve_discrete_lyapunov.
  it('stationary covariance of four lumps', () => {
    const { X } = answered(discreteLyapunov(steady.inputs.A, steady.inputs.Q));
    expectMatrix(X, steady.expected.stationaryCovariance, steady.tolerance.rel);
  });
});

// Computed with GNU Octave 7.3.0, control 3.4.0: c2d(ss(A, B, C, 0), T, 'zoh').
describe('lags', () => {
  const ends = { input: { name: 'valve', unit: '%' }, output: { name: 'flow', unit: 't/h' } };

  it('second order: ω 0.02 rad/s, ζ 0.4, gain 1.5, T = 20 s', () => {
    const lag = answered(secondOrderLag({ ...ends, gain: 1.5, naturalFrequency: 0.02, damping: 0.4 }));
    const { model } = answered(discretise(lag.model, 20));
    const A = [0.9288275982354129, 16.66367259780218, -0.006665469039120877, 0.6622088366705779];
    expectAllRelative(model.A.flat(), A, 1e-12);
    expectAllRelative(model.B.flat(), [0.1067586026468868, 0.009998203558681291], 1e-12);
  });

  it('first order 300 s, gain 2, behind it a sensor of 40 s, T = 30 s', () => {
    const lag = answered(firstOrderLag({ ...ends, gain: 2, timeConstant: 300 }));
    const { model } = answered(discretise(answered(withSensorLag(lag.model, 0, 40)).model, 30));
    const A = [0.9048374180359599, 0, 0.4990048445710904, 0.4723665527410147];
    expectAllRelative(model.A.flat(), A, 1e-12);
    expectAllRelative(model.B.flat(), [0.1903251639280808, 0.05725720537579013], 1e-12);
    expect(model.C).toEqual([[0, 1]]);
    expect(model.H).toEqual([[1, 0]]);
  });

  it('a dead time of 75 s at T = 30 s delays the step response by exactly 75 s', () => {
    const lag = answered(firstOrderLag({ ...ends, gain: 2, timeConstant: 300 }));
    const { model, exactStates } = answered(discretiseWithDeadTime(lag.model, 30, [75]));
    expect(exactStates).toEqual([1, 2, 3]);
    let x = [0, 0, 0, 0];
    for (let k = 1; k <= 12; k++) {
      x = model.A.map((row, i) => row.reduce((sum, a, j) => sum + a * x[j]!, model.B[i]![0]!));
      const after = Math.max(30 * k - 75, 0);
      expect(x[0]).toBeCloseTo(2 * (1 - Math.exp(-after / 300)), 12);
    }
  });
});
