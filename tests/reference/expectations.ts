import { expect } from 'vitest';
import type { Refusal } from '../../shared/numerics/result.ts';

/** The answer of a computation that must not be refused. */
export function answered<T>(result: ({ ok: true } & T) | Refusal): { ok: true } & T {
  if (!result.ok) throw new Error(`refused: ${JSON.stringify(result)}`);
  return result;
}

/** Agreement within a relative tolerance of the expected value (absolute below `floor`). */
export function expectRelative(actual: number, expected: number, tolerance: number, floor = 1e-12): void {
  const allowed = Math.max(tolerance * Math.abs(expected), floor);
  expect(
    Math.abs(actual - expected),
    `${actual} against ${expected}, allowed ${allowed}`,
  ).toBeLessThanOrEqual(allowed);
}

/** {@link expectRelative} element by element. */
export function expectAllRelative(
  actual: ArrayLike<number>,
  expected: ArrayLike<number>,
  tolerance: number,
  floor = 1e-12,
): void {
  expect(actual.length).toBe(expected.length);
  for (let i = 0; i < expected.length; i++) expectRelative(actual[i]!, expected[i]!, tolerance, floor);
}

/** Number of agreeing digits as NIST counts them: −log₁₀ of the relative error, at most 15. */
export function agreeingDigits(actual: number, certified: number): number {
  if (actual === certified) return 15;
  const error = Math.abs(actual - certified) / (certified === 0 ? 1 : Math.abs(certified));
  return Math.min(15, -Math.log10(error));
}
