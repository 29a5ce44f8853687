/**
 * Why a computation gave no answer. Codes only: `shared/rules/sentences.ts` turns them into words.
 *
 * - `not-enough-data`: fewer values than the method needs (`needed`, `got`).
 * - `non-finite-input`: a NaN, an infinity or a missing number in an input.
 * - `wrong-shape`: lengths or dimensions that do not belong together.
 * - `singular` / `ill-conditioned` / `collinear`: no unique or no trustworthy solution (`figure`: condition number).
 * - `not-observable`, `not-detectable`, `unstable`, `not-positive-semidefinite`, `too-slow-sampling`: linear systems.
 * - `no-spread`: a variance that the method divides by is zero.
 * - `out-of-range`: an option outside its domain, or a result beyond the range of numbers (`figure`: the value).
 * - `not-converged`: an iteration gave up (`figure`: its last residual or step).
 * - `cannot-tell`: the data fit contradictory answers.
 * - `no-estimate`: no usable reading at the wanted time.
 * - `not-sorted`: times or values that must ascend do not.
 */
export type RefusalReason =
  | 'not-enough-data'
  | 'non-finite-input'
  | 'wrong-shape'
  | 'singular'
  | 'ill-conditioned'
  | 'collinear'
  | 'not-observable'
  | 'not-detectable'
  | 'not-controllable'
  | 'unstable'
  | 'not-positive-semidefinite'
  | 'not-positive-definite'
  | 'not-symmetric'
  | 'no-spread'
  | 'out-of-range'
  | 'too-slow-sampling'
  | 'not-converged'
  | 'cannot-tell'
  | 'no-estimate'
  | 'not-sorted';

/** A typed refusal: the reason, the input at fault and the figures that a sentence needs. */
export type Refusal = {
  ok: false;
  reason: RefusalReason;
  field?: string;
  needed?: number;
  got?: number;
  figure?: number;
};

/** Either the answer's own properties with `ok: true`, or a {@link Refusal}. */
export type Result<T> = ({ ok: true } & T) | Refusal;

/** Details of a refusal: the field at fault and figures. */
export type RefusalDetail = { field?: string; needed?: number; got?: number; figure?: number };

/** Wraps an answer: `{ ok: true, ...value }`. */
export function answer<T extends object>(value: T): { ok: true } & T {
  return { ok: true, ...value };
}

/** Builds a refusal from its reason and, where known, the field at fault and figures. */
export function refuse(reason: RefusalReason, detail: RefusalDetail = {}): Refusal {
  return { ok: false, reason, ...detail };
}

/** Refusal for too few values: how many are needed and how many came. */
export function notEnough(field: string, needed: number, got: number): Refusal {
  return refuse('not-enough-data', { field, needed, got });
}

/** Refusal for an input that holds a NaN, an infinity or something that is no number. */
export function nonFinite(field: string): Refusal {
  return refuse('non-finite-input', { field });
}

/** Refusal for a length or dimension that does not fit: what was needed and what came. */
export function wrongShape(field: string, needed?: number, got?: number): Refusal {
  return refuse('wrong-shape', { field, needed, got });
}

/** Refusal for an option outside its domain (`figure`: the value given). */
export function outOfRange(field: string, figure?: number): Refusal {
  return refuse('out-of-range', { field, figure });
}
