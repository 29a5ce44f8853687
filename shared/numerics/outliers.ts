import { meanOf, sdOf } from './descriptive.ts';
import { tQuantile } from './distributions.ts';
import { countRefusal, finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import { refuse } from './result.ts';
import type { Result } from './result.ts';

/**
 * Which values are suspected: `two` the one furthest from the mean on either side, `upper` the largest, `lower` the
 * smallest. The two-sided 5 % value is 2.126 at n = 8, the one-sided one 2.032.
 */
export type Sides = 'two' | 'upper' | 'lower';

/** Grubbs' test: G of the suspected value (at `index`) against the critical value for the sides said. */
export type GrubbsTest = {
  n: number;
  index: number;
  g: number;
  critical: number;
  outlier: boolean;
  sides: Sides;
};

/**
 * Critical value of Grubbs' test for one outlier among n ≥ 3 normal values at level `alpha`: exact, from Student's t.
 * Source: Grubbs, Technometrics 11 (1969); NIST/SEMATECH e-Handbook 1.3.5.17.1.
 */
export function grubbsCritical(n: number, alpha: number, sides: Sides): Result<{ critical: number }> {
  const refusal = countRefusal('n', n, 3, 1e9) ?? optionRefusal('alpha', alpha, 0, 0.5, 'open');
  if (refusal) return refusal;
  return finiteAnswer({ critical: criticalValue(n, alpha / (sides === 'two' ? 2 * n : n)) });
}

/** (n − 1)/√n · √(t²/(n − 2 + t²)) with t the upper quantile of `tail` for n − 2 degrees of freedom. */
function criticalValue(n: number, tail: number): number {
  const t = tQuantile(1 - tail, n - 2);
  return ((n - 1) / Math.sqrt(n)) * Math.sqrt((t * t) / (n - 2 + t * t));
}

/** Grubbs' test of at least three values. Refuses `no-spread` when all are equal, and other unsound input. */
export function grubbsTest(
  values: ArrayLike<number>,
  options: { alpha: number; sides: Sides },
): Result<GrubbsTest> {
  const { alpha, sides } = options;
  const refusal = vectorRefusal('values', values, 3) ?? optionRefusal('alpha', alpha, 0, 0.5, 'open');
  if (refusal) return refusal;
  const mean = meanOf(values);
  const sd = sdOf(values, mean);
  if (!(sd > 0)) return refuse('no-spread', { field: 'values' });
  const away = (value: number) =>
    sides === 'two' ? Math.abs(value - mean) : sides === 'upper' ? value - mean : mean - value;
  let index = 0;
  for (let i = 1; i < values.length; i++) if (away(values[i]!) > away(values[index]!)) index = i;
  const g = away(values[index]!) / sd;
  const critical = criticalValue(
    values.length,
    alpha / (sides === 'two' ? 2 * values.length : values.length),
  );
  return finiteAnswer({ n: values.length, index, g, critical, outlier: g > critical, sides });
}

/** One step of the generalised ESD test: the value removed, its R and the critical λ. */
export type EsdStep = { index: number; r: number; critical: number };

/**
 * Generalised extreme studentised deviate test (two-sided) for at most `most` outliers among n normal values:
 * `outliers` holds the indices of those found (up to the last step whose R exceeds λ), in order of removal. Good for
 * n ≥ 15 or so. Refuses `not-enough-data` below most + 3 values; stops early where what remains has no spread.
 * Source: Rosner, Technometrics 25 (1983); NIST/SEMATECH e-Handbook 1.3.5.17.3.
 */
export function generalisedEsd(
  values: ArrayLike<number>,
  options: { most: number; alpha: number },
): Result<{ n: number; outliers: number[]; steps: EsdStep[] }> {
  const { most, alpha } = options;
  const refusal =
    countRefusal('most', most, 1, 1e6) ??
    optionRefusal('alpha', alpha, 0, 0.5, 'open') ??
    vectorRefusal('values', values, most + 3);
  if (refusal) return refusal;
  const n = values.length;
  const kept = Array.from(values, (_, i) => i);
  const steps: EsdStep[] = [];
  let found = 0;
  for (let step = 1; step <= most; step++) {
    const remaining = kept.map((i) => values[i]!);
    const mean = meanOf(remaining);
    const sd = sdOf(remaining, mean);
    if (!(sd > 0)) break;
    let at = 0;
    for (let k = 1; k < remaining.length; k++) {
      if (Math.abs(remaining[k]! - mean) > Math.abs(remaining[at]! - mean)) at = k;
    }
    const r = Math.abs(remaining[at]! - mean) / sd;
    const left = n - step + 1;
    const critical = criticalValue(left, alpha / (2 * left));
    steps.push({ index: kept[at]!, r, critical });
    if (r > critical) found = step;
    kept.splice(at, 1);
  }
  return finiteAnswer({ n, outliers: steps.slice(0, found).map(({ index }) => index), steps });
}
