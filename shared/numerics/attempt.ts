import { finiteAnswer } from './input-checks.ts';
import { refuse } from './result.ts';
import type { Refusal, RefusalDetail, RefusalReason, Result } from './result.ts';

/** Carries a {@link Refusal} out of the depth of a matrix computation to the {@link attempt} around it. */
export class Refused extends Error {
  constructor(readonly refusal: Refusal) {
    super(refusal.field ? `${refusal.reason}: ${refusal.field}` : refusal.reason);
  }
}

/** Gives up the computation: throws {@link Refused} with the reason, the field at fault and figures. */
export function giveUp(reason: RefusalReason, detail: RefusalDetail = {}): never {
  throw new Refused(refuse(reason, detail));
}

/**
 * Runs a computation whose steps may give up: its value as an answer, or the refusal that was thrown. Every number of
 * the answer is finite, else the refusal is `out-of-range` with the name of the figure that overflowed.
 */
export function attempt<T extends object>(compute: () => T): Result<T> {
  return caught(() => finiteAnswer(compute()) as Result<T>);
}

/** As {@link attempt}, for answers whose long series mark a missing value by NaN: their numbers are not looked at. */
export function attemptSeries<T extends object>(compute: () => T): Result<T> {
  return caught(() => ({ ok: true, ...compute() }) as Result<T>);
}

function caught<T extends object>(compute: () => Result<T>): Result<T> {
  try {
    return compute();
  } catch (error) {
    if (error instanceof Refused) return error.refusal;
    throw error;
  }
}
