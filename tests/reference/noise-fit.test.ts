import { describe, expect, it } from 'vitest';
import { fitNoise } from '../../shared/numerics/noise-fit.ts';
import { answered, expectRelative } from './expectations.ts';
import nile from './values/nile-local-level.json';

// Source: Durbin & Koopman 2012 (15099 and 1469.1), KFAS 15098.53 and 1469.178, log-likelihood −632.5456 (read), R StructTS.
describe('maximum likelihood of the Nile variances', () => {
  const one = [[1]];
  const y = Float64Array.from(nile.inputs.volume);
  const fit = answered(
    fitNoise(
      { A: one, C: one },
      { Q: [[0]], R: [[0]] },
      [
        { name: 'level', in: 'Q', pattern: one, start: 500, low: 1, high: 1e6 },
        { name: 'observation', in: 'R', pattern: one, start: 5000, low: 10, high: 1e7 },
      ],
      { x0: [0], P0: [[1e12]] },
      { u: new Float64Array(0), y },
      1,
    ),
  );

  it('variances and log-likelihood', () => {
    const { H, Q, loglik } = nile.expected.mle;
    expectRelative(fit.parameters[0]!.variance, Q, nile.tolerance.mle_rel);
    expectRelative(fit.parameters[1]!.variance, H, nile.tolerance.mle_rel);
    expect(Math.abs(fit.logLikelihood - loglik)).toBeLessThan(nile.tolerance.loglik_abs);
    expect(fit.readings).toBe(99);
  });

  // statsmodels 0.13.5, UnobservedComponents 'llevel', cov_type 'approx' (Hessian of the log-likelihood), at its own optimum.
  it('standard errors', () => {
    expectRelative(fit.parameters[0]!.standardError, 1279.82, 0.005);
    expectRelative(fit.parameters[1]!.standardError, 3150.03, 0.005);
  });
});
