import { countRefusal, finiteAnswer, firstRefusal, optionRefusal } from './input-checks.ts';
import { refuse } from './result.ts';
import type { Refusal, Result } from './result.ts';

/**
 * What a bias CUSUM is designed for: at most so many false signals a year at so many counted samples a year, with errors
 * of lag-1 autocorrelation φ (0 to 0.95; negative counts as 0) and reference value k (SDs, 0.2 to 0.8, default 0.5).
 */
export type CusumWish = { falseSignalsPerYear: number; samplesPerYear: number; phi: number; k?: number };

/** The decision interval h (SDs of a single error), samples between false signals and their rate. */
export type CusumChoice = { k: number; h: number; runLength: number; falseSignalsPerYear: number };

/** A two-sided CUSUM in SDs of a single error, the errors' lag-1 autocorrelation, and a shift of the mean. */
export type CorrelatedCusum = { k: number; h: number; phi: number; shift?: number };

/**
 * Average run length of a two-sided CUSUM of normal errors that follow a first-order autoregression of lag-1
 * autocorrelation φ: samples until a signal with the mean off by `shift` SDs. Siegmund's approximation
 * (Sequential Analysis, 1985) with the long-run variance (1 + φ)/(1 − φ) in place of 1 and the overshoot fitted to a
 * Markov chain. Against that chain (tests/trials): within 3 % in control for k = 0.5 and run lengths above 100; out of
 * control at the design's own h up to 5 % long at φ = 0.3 and 18 % at 0.6. Refuses `out-of-range`.
 */
export function correlatedRunLength(options: CorrelatedCusum): Result<{ runLength: number }> {
  const { k, h, phi, shift = 0 } = options;
  const refusal = firstRefusal(
    correlationRefusal(k, phi),
    optionRefusal('h', h, 0.5, 1000),
    optionRefusal('shift', shift, -20, 20),
  );
  if (refusal) return refusal;
  const upper = sideLength(shift - k, h, phi);
  const lower = sideLength(-shift - k, h, phi);
  return finiteAnswer({ runLength: 1 / (1 / upper + 1 / lower) });
}

/**
 * The h that gives the wanted rate of false signals: about 14 at 3 samples a day, φ = 0.3 and 0.1 a year; 8.1 when
 * errors are independent. Refuses `out-of-range` when fewer than 20 samples are wanted between false signals.
 */
export function designCusum(wish: CusumWish): Result<CusumChoice> {
  const { falseSignalsPerYear, samplesPerYear, phi, k = 0.5 } = wish;
  const refusal = firstRefusal(
    optionRefusal('falseSignalsPerYear', falseSignalsPerYear, 1e-6, 1e4),
    optionRefusal('samplesPerYear', samplesPerYear, 1, 1e8),
    correlationRefusal(k, phi),
  );
  if (refusal) return refusal;
  const runLength = samplesPerYear / falseSignalsPerYear;
  if (!(runLength >= 20))
    return refuse('out-of-range', { field: 'falseSignalsPerYear', figure: falseSignalsPerYear });
  const variance = longRunVariance(phi);
  const exponent = (2 * k) / variance;
  // One side alone runs twice as long: (eˣ − x − 1)/(k · exponent) = 2 · runLength, x = exponent (h + overshoot).
  let x = Math.log(2 * runLength * k * exponent + 2);
  for (let step = 0; step < 100; step++) x = Math.log(2 * runLength * k * exponent + x + 1);
  const h = x / exponent - overshoot(phi);
  if (!(h >= 0.5)) return refuse('out-of-range', { field: 'h', figure: h });
  return finiteAnswer({ k, h, runLength, falseSignalsPerYear });
}

/** What a design can see: average samples until a signal for each shift of the mean in SDs (at most 100 shifts). */
export function cusumPower(design: CorrelatedCusum, shifts: number[]): Result<{ samples: number[] }> {
  const refusal = countRefusal('shifts', shifts?.length, 1, 100);
  if (refusal) return refusal;
  const samples: number[] = [];
  for (const shift of shifts) {
    const length = correlatedRunLength({ ...design, shift });
    if (!length.ok) return length;
    samples.push(length.runLength);
  }
  return { ok: true, samples };
}

function correlationRefusal(k: number, phi: number): Refusal | null {
  return optionRefusal('k', k, 0.2, 0.8) ?? optionRefusal('phi', phi, -1, 0.95);
}

/** Variance of a sum of n errors over n, in single-error variances, for large n. */
function longRunVariance(phi: number): number {
  const positive = Math.max(0, phi);
  return (1 + positive) / (1 - positive);
}

/** What the sum overshoots zero and h by together, SDs: Siegmund's 1.166 for independent errors. */
function overshoot(phi: number): number {
  const positive = Math.max(0, phi);
  return longRunVariance(phi) * (1.166 + 0.32 * (1 - (1 - positive) ** 2.8));
}

/** Run length of one sum whose steps drift by `drift`: (e^(−y) + y − 1)σ²/(2 drift²), y = 2 drift b/σ². */
function sideLength(drift: number, h: number, phi: number): number {
  const variance = longRunVariance(phi);
  const b = h + overshoot(phi);
  const y = (2 * drift * b) / variance;
  if (Math.abs(y) < 1e-4) return (b * b) / variance;
  // A run length beyond all numbers adds nothing to the other side's.
  return Math.min(1e300, ((Math.expm1(-y) + y) * variance) / (2 * drift * drift));
}
