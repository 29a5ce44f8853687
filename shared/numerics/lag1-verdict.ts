import { lag1Autocorrelation } from './bias.ts';
import { optionRefusal, vectorRefusal } from './input-checks.ts';
import type { Result } from './result.ts';

/**
 * What the lag-1 autocorrelation of corrected errors says of a per-sample correction:
 * - `chasing-noise`: −λ/2 fits and 0 does not, or r₁ is lower still: the correction follows noise.
 * - `right`: 0 fits and −λ/2 does not.
 * - `too-slow`: r₁ is above 0: the correction lags behind real drift.
 * - `cannot-tell`: 0 and −λ/2 both fit.
 */
export type Lag1Verdict = 'chasing-noise' | 'right' | 'too-slow' | 'cannot-tell';

/**
 * Judges a per-sample correction with filter factor `lambda` (0 < λ ≤ 1) by the lag-1 autocorrelation of at least 8
 * corrected errors in time order, r₁ ± 2/√n. Pure noise corrected by λ has r₁ = −λ/2. For per-sample mode only. Refuses
 * `not-enough-data`, `no-spread`, `out-of-range`, `non-finite-input`, `wrong-shape`.
 */
export function lag1Verdict(
  correctedErrors: ArrayLike<number>,
  lambda: number,
): Result<{ n: number; r1: number; band: number; noise: number; verdict: Lag1Verdict }> {
  const refusal =
    optionRefusal('lambda', lambda, Number.MIN_VALUE, 1) ??
    vectorRefusal('correctedErrors', correctedErrors, 8);
  if (refusal) return refusal;
  const correlation = lag1Autocorrelation(correctedErrors);
  if (!correlation.ok) return correlation;
  const { n, r1 } = correlation;
  const band = 2 / Math.sqrt(n);
  const noise = -lambda / 2;
  const fits = (value: number) => Math.abs(r1 - value) <= band;
  const verdict = fits(0) ? (fits(noise) ? 'cannot-tell' : 'right') : r1 > 0 ? 'too-slow' : 'chasing-noise';
  return { ok: true, n, r1, band, noise, verdict };
}
