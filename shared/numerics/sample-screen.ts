import { medianOf } from './descriptive.ts';
import { optionRefusal, vectorRefusal } from './input-checks.ts';
import { finiteAnswer } from './input-checks.ts';
import type { Result } from './result.ts';

/**
 * What to do with one sample's error: `count` it; `hold` it and ask for a re-test; `change`: count it and the held one
 * before, for two in a row on the same side are a change of the process or the estimate, no slip of the laboratory.
 */
export type ScreenVerdict = 'count' | 'hold' | 'change';

/** Distance from the local bias beyond which a single sample is held, SDs. */
export const holdDistance = 3.5;

/** Counted errors from which the local bias is taken (their median). */
export const localErrors = 8;

/**
 * Screens an error against the median of the last 8 counted errors (zero where there are fewer than 3) and the overall
 * `sd`. `heldDistance`: distance of the sample held just before, null where none is held. Returns the distance in SDs with
 * its sign. Refuses `non-finite-input`, `out-of-range`, `wrong-shape`.
 */
export function screenSample(
  error: number,
  counted: ArrayLike<number>,
  sd: number,
  heldDistance: number | null,
): Result<{ verdict: ScreenVerdict; distance: number; localBias: number }> {
  const refusal =
    optionRefusal('error', error, -Number.MAX_VALUE, Number.MAX_VALUE) ??
    optionRefusal('sd', sd, Number.MIN_VALUE, Number.MAX_VALUE) ??
    vectorRefusal('counted', counted, 0) ??
    (heldDistance === null
      ? null
      : optionRefusal('heldDistance', heldDistance, -Number.MAX_VALUE, Number.MAX_VALUE));
  if (refusal) return refusal;
  const recent = Array.from(counted).slice(-localErrors);
  const localBias = recent.length >= 3 ? medianOf(recent) : 0;
  const distance = (error - localBias) / sd;
  const far = Math.abs(distance) > holdDistance;
  const again = far && heldDistance !== null && Math.sign(heldDistance) === Math.sign(distance);
  return finiteAnswer({ verdict: again ? 'change' : far ? 'hold' : 'count', distance, localBias });
}
