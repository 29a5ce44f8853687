import { describe, expect, it } from 'vitest';
import { exponentialUpdate } from '../../shared/numerics/exponential-update.ts';
import { recursiveStart, recursiveStep } from '../../shared/numerics/recursive-least-squares.ts';
import { answered, expectAllRelative, expectRelative } from './expectations.ts';
import update from './values/recalibration-update.json';

const rel = update.tolerance.rel;

/**
 * Source: Ljung, System Identification (1999), ch. 11; computed with fractions and mpmath. The source writes
 * error = laboratory − prediction; here error = estimate − reference, so raw errors enter with the other sign and the
 * correction is the source's bias.
 */
describe('exponential bias update', () => {
  const { pred, lab } = update.inputs;
  const rawErrors = pred.map((value, i) => value - lab[i]!);
  it.each(Object.entries(update.expected.bias_update))('filter factor %s', (lambda, steps) => {
    const own = answered(exponentialUpdate(rawErrors, Number(lambda)));
    expectAllRelative(
      [...own.correctionBefore.slice(1), own.correctionAfter],
      steps.map((step) => step.bias_after),
      rel,
    );
    expectAllRelative(
      own.correctedErrors,
      steps.map((step) => -step.error_before),
      rel,
    );
  });
  it.each(Object.entries(update.expected.step_response_fraction))(
    'share of a step after 1, 2, 3, 5, 10, 20 samples at %s',
    (lambda, shares) => {
      const own = answered(exponentialUpdate(new Float64Array(21).fill(-1), Number(lambda)));
      expectAllRelative(
        [1, 2, 3, 5, 10, 20].map((n) => own.correctionBefore[n]!),
        shares,
        rel,
      );
    },
  );
});

describe('recursive least squares', () => {
  const { X, y, theta0, P0 } = update.inputs.rls;
  it.each([
    [1, update.expected.rls_lambda1],
    [0.95, update.expected.rls_lambda095],
  ])('forgetting %s', (forgetting, expected) => {
    let fit = recursiveStart(theta0, P0);
    for (const [i, row] of X.entries()) {
      fit = answered(recursiveStep(fit, row, y[i]!, forgetting));
      expectAllRelative(fit.parameters, expected.theta[i]!, rel);
    }
    expectAllRelative(fit.covariance, expected.P.flat(), rel);
  });
  it('comes to ordinary least squares within what the start weighs', () => {
    let fit = recursiveStart(theta0, P0);
    for (const [i, row] of X.entries()) fit = answered(recursiveStep(fit, row, y[i]!, 1));
    for (const [j, value] of update.expected.ols.entries()) expectRelative(fit.parameters[j]!, value, 2e-6);
    expect(fit.parameters[0]).not.toBe(update.expected.ols[0]);
  });
});
