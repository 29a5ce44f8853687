import { meanOf, sdOf, sumOfSquaresAbout } from './descriptive.ts';
import { chiSquareQuantile, fQuantile, tQuantile } from './distributions.ts';
import { countRefusal, finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import { refuse } from './result.ts';
import type { Result } from './result.ts';

/**
 * Relative accuracy of paired runs. `meanDifference` is d̄ with d = reference − monitor, the sign of these regulations;
 * `meanError` = −d̄ is estimate − reference, the sign used everywhere else. `confidenceCoefficient` t₀.₉₇₅ s_d/√n,
 * `relativeAccuracy` (|d̄| + |CC|)/mean reference in %; `readsLow` when d̄ > |CC| (the one-sided bias test; an estimate
 * that reads high is not adjusted), `biasAdjustment` 1 + |d̄|/mean monitor then, else 1; `r` correlation; `f` variance
 * of monitor over that of reference against its 95 % point `fCritical`.
 */
export type RelativeAccuracy = {
  n: number;
  meanReference: number;
  meanMonitor: number;
  meanDifference: number;
  meanError: number;
  sd: number;
  confidenceCoefficient: number;
  relativeAccuracy: number;
  readsLow: boolean;
  biasAdjustment: number;
  r: number;
  f: number;
  fCritical: number;
};

/**
 * Relative accuracy, bias, F and correlation of at least three paired runs. FORMULAS FROM MEMORY of US 40 CFR 60 App. B
 * PS-2 and PS-16, 40 CFR 75 App. A 7.3, 7.6 and 75.41, not read: no compliance record, and no limits are offered.
 * Refuses `no-spread` naming a constant side, `out-of-range` when the mean reference is not positive, and unsound input.
 */
export function relativeAccuracy(
  reference: ArrayLike<number>,
  monitor: ArrayLike<number>,
): Result<RelativeAccuracy> {
  const refusal =
    vectorRefusal('reference', reference, 3) ?? vectorRefusal('monitor', monitor, 3, reference.length);
  if (refusal) return refusal;
  const n = reference.length;
  const differences = Float64Array.from(reference, (value, i) => value - monitor[i]!);
  const meanReference = meanOf(reference);
  const meanMonitor = meanOf(monitor);
  const meanDifference = meanOf(differences);
  const referenceSquares = sumOfSquaresAbout(reference, meanReference);
  const monitorSquares = sumOfSquaresAbout(monitor, meanMonitor);
  if (!(referenceSquares > 0)) return refuse('no-spread', { field: 'reference' });
  if (!(monitorSquares > 0)) return refuse('no-spread', { field: 'monitor' });
  if (!(meanReference > 0)) return refuse('out-of-range', { field: 'reference', figure: meanReference });
  let products = 0;
  for (let i = 0; i < n; i++) products += (reference[i]! - meanReference) * (monitor[i]! - meanMonitor);
  const sd = sdOf(differences, meanDifference);
  const confidenceCoefficient = (tQuantile(0.975, n - 1) * sd) / Math.sqrt(n);
  const readsLow = meanDifference > confidenceCoefficient;
  return finiteAnswer({
    n,
    meanReference,
    meanMonitor,
    meanDifference,
    meanError: -meanDifference,
    sd,
    confidenceCoefficient,
    relativeAccuracy: (100 * (Math.abs(meanDifference) + confidenceCoefficient)) / meanReference,
    readsLow,
    biasAdjustment: readsLow ? 1 + meanDifference / meanMonitor : 1,
    r: products / Math.sqrt(referenceSquares) / Math.sqrt(monitorSquares),
    f: monitorSquares / referenceSquares,
    fCritical: fQuantile(0.95, n - 1, n - 1),
  });
}

/**
 * Variability and validity after EN 14181. `differences` D = reference − monitor of N ≥ 3 parallel tests; permitted 95 %
 * half-width P as a fraction of the emission limit E: σ₀ = P E/1.96. Passes variability when s_D ≤ σ₀ k_v with
 * k_v = √(χ²₀.₅(N − 1)/(N − 1)) (times `variabilityFactor`, 1.5 in the yearly test), validity when
 * |D̄| ≤ t₀.₉₅(N − 1) s_D/√N + σ₀. FORMULAS FROM MEMORY, standard not read. `meanError` = −D̄.
 */
export function variabilityTest(
  differences: ArrayLike<number>,
  options: { emissionLimit: number; permittedFraction: number; variabilityFactor?: number },
): Result<{
  n: number;
  meanDifference: number;
  meanError: number;
  sd: number;
  sigma0: number;
  kv: number;
  validityLimit: number;
  variabilityPassed: boolean;
  validityPassed: boolean;
}> {
  const { emissionLimit, permittedFraction, variabilityFactor = 1 } = options;
  const refusal =
    optionRefusal('emissionLimit', emissionLimit, Number.MIN_VALUE, Number.MAX_VALUE) ??
    optionRefusal('permittedFraction', permittedFraction, Number.MIN_VALUE, 1) ??
    optionRefusal('variabilityFactor', variabilityFactor, Number.MIN_VALUE, 100) ??
    vectorRefusal('differences', differences, 3);
  if (refusal) return refusal;
  const n = differences.length;
  const meanDifference = meanOf(differences);
  const sd = sdOf(differences, meanDifference);
  const sigma0 = (permittedFraction * emissionLimit) / 1.96;
  const kv = variabilityFactorOf(n);
  const validityLimit = (tQuantile(0.95, n - 1) * sd) / Math.sqrt(n) + sigma0;
  return finiteAnswer({
    n,
    meanDifference,
    meanError: -meanDifference,
    sd,
    sigma0,
    kv,
    validityLimit,
    variabilityPassed: sd <= variabilityFactor * sigma0 * kv,
    validityPassed: Math.abs(meanDifference) <= validityLimit,
  });
}

/** k_v for n parallel tests (memory-marked as {@link variabilityTest}). */
export function kvFactor(n: number): Result<{ kv: number }> {
  const refusal = countRefusal('n', n, 2, 1e6);
  return refusal ?? finiteAnswer({ kv: variabilityFactorOf(n) });
}

function variabilityFactorOf(n: number): number {
  return Math.sqrt(chiSquareQuantile(0.5, n - 1) / (n - 1));
}
