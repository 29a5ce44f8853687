import { nonFinite, notEnough, outOfRange, refuse, wrongShape } from './result.ts';
import type { Refusal } from './result.ts';

/** True for an array or typed array of numbers by its outer shape (contents are checked by {@link vectorRefusal}). */
export function isVector(value: unknown): value is ArrayLike<number> {
  return Array.isArray(value) || (ArrayBuffer.isView(value) && !(value instanceof DataView));
}

/** True when every element is a finite number. */
export function allFinite(values: ArrayLike<number>): boolean {
  for (let i = 0; i < values.length; i++) if (!Number.isFinite(values[i])) return false;
  return true;
}

/**
 * Checks one input vector: an array, finite throughout, at least `needed` long and, where given, exactly `length` long.
 * Returns the refusal, or null when the vector is sound.
 */
export function vectorRefusal(
  field: string,
  values: unknown,
  needed: number,
  length?: number,
): Refusal | null {
  if (!isVector(values)) return wrongShape(field);
  if (length !== undefined && values.length !== length) return wrongShape(field, length, values.length);
  if (values.length < needed) return notEnough(field, needed, values.length);
  return allFinite(values) ? null : nonFinite(field);
}

/** Checks that an option is a finite number in [low, high]; `open` excludes the two ends. Null when sound. */
export function optionRefusal(
  field: string,
  value: unknown,
  low: number,
  high: number,
  ends: 'closed' | 'open' = 'closed',
): Refusal | null {
  if (typeof value !== 'number' || !Number.isFinite(value)) return nonFinite(field);
  const inside = ends === 'closed' ? value >= low && value <= high : value > low && value < high;
  return inside ? null : outOfRange(field, value);
}

/** Checks that an option is a whole number in [low, high]. Null when sound. */
export function countRefusal(field: string, value: unknown, low: number, high: number): Refusal | null {
  const refusal = optionRefusal(field, value, low, high);
  if (refusal) return refusal;
  return Number.isInteger(value) ? null : outOfRange(field, value as number);
}

/** First refusal of a list of checks, or null. */
export function firstRefusal(...checks: (Refusal | null)[]): Refusal | null {
  for (const check of checks) if (check) return check;
  return null;
}

/**
 * The last gate before an answer leaves: `{ ok: true, ...value }` when every number in it (nested arrays and objects
 * included) is finite, else the refusal `out-of-range` naming the figure that overflowed.
 */
export function finiteAnswer<T extends object>(value: T): ({ ok: true } & T) | Refusal {
  for (const [name, part] of Object.entries(value)) {
    if (!finiteThroughout(part)) return refuse('out-of-range', { field: name });
  }
  return { ok: true, ...value };
}

function finiteThroughout(part: unknown): boolean {
  if (typeof part === 'number') return Number.isFinite(part);
  if (part === null || typeof part !== 'object') return true;
  if (ArrayBuffer.isView(part)) return allFinite(part as unknown as ArrayLike<number>);
  for (const inner of Object.values(part)) if (!finiteThroughout(inner)) return false;
  return true;
}
