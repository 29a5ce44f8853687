import type { ErrorStripPoint } from '../../../shared/contracts/judging.ts';
import type { StripError } from '../charts/strip-layout.ts';

/** The last errors as multiples of the allowed error at their value, oldest first, with where the last recalibration lies. */
export function stripErrors(row: {
  lastErrors: readonly ErrorStripPoint[];
  recalibratedAt: string | null;
}): StripError[] {
  const { recalibratedAt } = row;
  const drawn = row.lastErrors.filter(({ allowed }) => allowed > 0);
  return drawn.map(({ at, error, allowed }, index) => {
    const before = drawn[index - 1]?.at;
    const recalibratedBefore =
      recalibratedAt !== null && before !== undefined && before < recalibratedAt && at >= recalibratedAt;
    return { ratio: error / allowed, ...(recalibratedBefore ? { recalibratedBefore } : {}) };
  });
}
