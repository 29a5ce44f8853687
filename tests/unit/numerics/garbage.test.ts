import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Refusal } from '../../../shared/numerics/result.ts';
import { built, calls, exportedNames, unchecked } from './statistics-calls.ts';

const badNumbers = [NaN, Infinity, -Infinity, 0, -1, 1, 2.5, 1e308, -1e308, 5e-324, 1e-200, undefined, null];
const badVectors = (own: ArrayLike<number>): unknown[] => {
  const values = Array.from(own);
  const typed = (list: number[]) => (own instanceof Float64Array ? Float64Array.from(list) : list);
  return [
    typed([]),
    typed(values.slice(1)),
    typed([...values, 1]),
    typed(values.slice(0, 2)),
    typed(values.map(() => 7)),
    typed(values.map((_, i) => (i === 1 ? NaN : i))),
    typed(values.map((_, i) => (i % 2 ? 1e308 : -1e308))),
    typed(values.map((value) => value * 1e-200)),
    typed(values.map((value) => value * 1e160)),
    typed(values.map((value) => 1e12 + value)),
    typed(values.map((_, i) => (i === 0 ? Infinity : 0))),
    null,
    undefined,
    'seven',
    {},
    [['nested']],
  ];
};

type Spot = { path: (string | number)[]; choices: unknown[] };

/** Every number and every vector inside the arguments, with the garbage that may take its place. */
function spots(value: unknown, path: (string | number)[] = []): Spot[] {
  if (value === built) return [];
  if (typeof value === 'number') return [{ path, choices: badNumbers }];
  const isVector = ArrayBuffer.isView(value) || (Array.isArray(value) && typeof value[0] === 'number');
  if (isVector) return [{ path, choices: badVectors(value as number[]) }];
  if (value === null || typeof value !== 'object') return [];
  return Object.entries(value).flatMap(([key, inner]) => spots(inner, [...path, key]));
}

function replaced(value: unknown, path: (string | number)[], by: unknown): unknown {
  if (path.length === 0) return by;
  // An earlier replacement may have taken the whole branch away.
  if (value === null || typeof value !== 'object') return value;
  const [key, ...rest] = path as [string, ...string[]];
  const inner = replaced((value as Record<string, unknown>)[key], rest, by);
  return Array.isArray(value) ? value.with(Number(key), inner) : { ...(value as object), [key]: inner };
}

function isFiniteThroughout(value: unknown): boolean {
  if (typeof value === 'number') return Number.isFinite(value);
  if (value === null || typeof value !== 'object') return true;
  if (ArrayBuffer.isView(value)) return Array.from(value as Float64Array).every(Number.isFinite);
  return Object.values(value).every(isFiniteThroughout);
}

describe('whatever is thrown at it, every function answers in finite numbers or with a typed refusal', () => {
  it.each(calls.map(([call, given]) => ({ name: call.name, call, given })))(
    '$name',
    ({ call, given }) => {
      expect(call(...(given as never[]))).toMatchObject({ ok: true });
      const places = given.flatMap((argument, i) => spots(argument, [i]));
      const mutation = fc.tuple(fc.nat(), fc.nat());
      fc.assert(
        fc.property(fc.array(mutation, { minLength: 1, maxLength: 3 }), (mutations) => {
          let thrown: unknown = given;
          for (const [place, choice] of mutations) {
            const { path, choices } = places[place % places.length]!;
            thrown = replaced(thrown, path, choices[choice % choices.length]);
          }
          const result = call(...(thrown as never[])) as { ok: boolean } & Partial<Refusal>;
          if (result.ok) expect(isFiniteThroughout(result), JSON.stringify(result)).toBe(true);
          else expect(result.reason).toMatch(/^[a-z-]+$/);
        }),
        { numRuns: 100 },
      );
    },
    60_000,
  );
});

it('no exported function escapes: each is tried above or works on checked arguments only', () => {
  const tried = new Set([...calls.map(([call]) => call.name), ...unchecked]);
  expect(exportedNames.filter((name) => !tried.has(name))).toEqual([]);
});
