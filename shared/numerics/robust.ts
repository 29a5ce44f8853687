import { meanOf, medianOf, sdOf } from './descriptive.ts';
import { finiteAnswer, vectorRefusal } from './input-checks.ts';
import { refuse } from './result.ts';
import type { Result } from './result.ts';

/** Robust mean and SD in the unit of the values, with the number of rounds taken. */
export type RobustLocation = { n: number; mean: number; sd: number; rounds: number };

const mostRounds = 1000;

/**
 * Algorithm A of ISO 13528:2015, annex C.3 (from memory): starts at the median and 1.483 · MAD, pulls values beyond
 * x* ± 1.5 s* in to there, and takes their mean and 1.134 · SD until nothing moves (1e−12 of s*). Where more than half
 * of the values are equal the MAD is zero and the SD of the values about the median starts it instead. At least three
 * values. Refuses `no-spread` when all are equal, `not-converged`, `not-enough-data`, `non-finite-input`, `wrong-shape`.
 */
export function algorithmA(values: ArrayLike<number>): Result<RobustLocation> {
  const refusal = vectorRefusal('values', values, 3);
  if (refusal) return refusal;
  let centre = medianOf(values);
  let sd = 1.483 * medianOf(Float64Array.from(values, (value) => Math.abs(value - centre)));
  if (!(sd > 0)) sd = sdOf(values, centre);
  if (!(sd > 0)) return refuse('no-spread', { field: 'values' });
  for (let round = 1; round <= mostRounds; round++) {
    const low = centre - 1.5 * sd;
    const high = centre + 1.5 * sd;
    const pulled = Float64Array.from(values, (value) => Math.min(Math.max(value, low), high));
    const nextCentre = meanOf(pulled);
    const nextSd = 1.134 * sdOf(pulled, nextCentre);
    const moved = Math.abs(nextCentre - centre) + Math.abs(nextSd - sd);
    centre = nextCentre;
    sd = nextSd;
    if (moved <= 1e-12 * sd) return finiteAnswer({ n: values.length, mean: centre, sd, rounds: round });
    if (!(sd > 0)) return refuse('no-spread', { field: 'values' });
  }
  return refuse('not-converged', { field: 'values', figure: sd });
}
