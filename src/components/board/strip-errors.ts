import type { ErrorStripPoint } from '../../../shared/contracts/judging.ts';
import type { StripError } from '../charts/strip-layout.ts';

/** The last errors as multiples of the allowed error at their value, oldest first. */
export function stripErrors(row: { lastErrors: readonly ErrorStripPoint[] }): StripError[] {
  return row.lastErrors
    .filter(({ allowed }) => allowed > 0)
    .map(({ error, allowed }) => ({ ratio: error / allowed }));
}
