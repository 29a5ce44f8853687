import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { uniform } from './random-models.ts';
import { calls } from './linear-systems-calls.ts';

const garbage: unknown[] = [
  ...[
    NaN,
    Infinity,
    -Infinity,
    1e308,
    -1e308,
    1e200,
    1e-308,
    0,
    -1,
    1.5,
    1e9,
    '',
    'x',
    null,
    undefined,
    true,
  ],
  ...[
    [],
    [[]],
    {},
    [NaN],
    [[1, 2], [3]],
    new Float64Array(2),
    [
      [1e308, 1],
      [1, 1e308],
    ],
    () => 1,
  ],
];

/** A copy of the arguments with one part, however deep, replaced by `replacement`. */
function spoil(value: unknown, next: () => number, replacement: unknown): unknown {
  const inside = value !== null && typeof value === 'object' && Object.keys(value).length > 0;
  if (!inside || next() < 0.15) return replacement;
  if (value instanceof Float64Array)
    return value.map((v, i) => (i === 5 && typeof replacement === 'number' ? replacement : v));
  const keys = Object.keys(value);
  const key = keys[Math.floor(next() * keys.length)]!;
  const part = spoil((value as Record<string, unknown>)[key], next, replacement);
  if (Array.isArray(value)) return value.map((item: unknown, i) => (String(i) === key ? part : item));
  if (Object.getPrototypeOf(value) !== Object.prototype) return replacement;
  return { ...value, [key]: part };
}

function expectSound(result: unknown): void {
  const { ok, reason } = result as { ok: unknown; reason: unknown };
  expect(typeof ok).toBe('boolean');
  if (ok === false) expect(typeof reason).toBe('string');
  else expectFinite(result, 0);
}

/** Every number outside the long series is finite (in those NaN marks a missing reading). */
function expectFinite(value: unknown, depth: number): void {
  if (typeof value === 'number') expect(Number.isFinite(value)).toBe(true);
  if (value === null || typeof value !== 'object' || depth > 4) return;
  if (value instanceof Float64Array) expect(value.some((v) => Math.abs(v) === Infinity)).toBe(false);
  else for (const part of Object.values(value)) expectFinite(part, depth + 1);
}

describe('garbage gets a right answer or a typed refusal', () => {
  for (const [name, [call, args]] of Object.entries(calls)) {
    it(
      name,
      () => {
        const result = call(...(args as never[]));
        expect(result, 'the sound arguments are answered').toMatchObject({ ok: name !== 'fitNoise' });
        for (const replacement of garbage) {
          args.forEach((_, i) => {
            expectSound(call(...(args.map((arg, j) => (i === j ? replacement : arg)) as never[])));
          });
        }
        fc.assert(
          fc.property(fc.integer({ min: 1, max: 1e9 }), fc.constantFrom(...garbage), (seed, replacement) => {
            const next = uniform(seed);
            for (let i = 0; i < 5; i++) next();
            const spoiled = spoil(args, next, replacement);
            expectSound(call(...((Array.isArray(spoiled) ? spoiled : [spoiled]) as never[])));
          }),
          { numRuns: name === 'fitNoise' ? 12 : 100 },
        );
        fc.assert(
          fc.property(fc.array(fc.anything(), { maxLength: 4 }), (anything) => {
            expectSound(call(...(anything as never[])));
          }),
          { numRuns: 30 },
        );
      },
      20_000,
    );
  }
});
