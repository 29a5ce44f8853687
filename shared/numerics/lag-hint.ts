import { meanOf, sumOfSquaresAbout } from './descriptive.ts';
import { countRefusal, finiteAnswer, vectorRefusal } from './input-checks.ts';
import { refuse } from './result.ts';
import type { Result } from './result.ts';

/**
 * Lag between two series on one regular grid at which their correlation is largest in size, from −`most` to `most`
 * steps: positive when `b` follows `a`. A hint for a transport delay, no more. Needs 2·most + 10 values. Refuses
 * `no-spread`, `not-enough-data`, `out-of-range`, `wrong-shape`, `non-finite-input`.
 */
export function bestLag(
  a: ArrayLike<number>,
  b: ArrayLike<number>,
  most: number,
): Result<{ lag: number; r: number; atZero: number }> {
  const refusal =
    countRefusal('most', most, 0, 1e6) ??
    vectorRefusal('a', a, 2 * most + 10) ??
    vectorRefusal('b', b, 1, a.length);
  if (refusal) return refusal;
  const from = most;
  const to = a.length - most;
  const middle = Float64Array.from({ length: to - from }, (_, i) => a[from + i]!);
  let best = { lag: 0, r: 0 };
  let atZero = 0;
  for (let lag = -most; lag <= most; lag++) {
    const shifted = Float64Array.from({ length: to - from }, (_, i) => b[from + i + lag]!);
    const r = correlation(middle, shifted);
    if (r === null) return refuse('no-spread', { field: 'a' });
    if (Math.abs(r) > Math.abs(best.r)) best = { lag, r };
    if (lag === 0) atZero = r;
  }
  return finiteAnswer({ ...best, atZero });
}

function correlation(a: Float64Array, b: Float64Array): number | null {
  const meanA = meanOf(a);
  const meanB = meanOf(b);
  const squares = Math.sqrt(sumOfSquaresAbout(a, meanA)) * Math.sqrt(sumOfSquaresAbout(b, meanB));
  if (!(squares > 0)) return null;
  let products = 0;
  for (let i = 0; i < a.length; i++) products += (a[i]! - meanA) * (b[i]! - meanB);
  return products / squares;
}
