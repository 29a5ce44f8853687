import { vectorRefusal } from './input-checks.ts';
import { wrongShape } from './result.ts';
import type { Result } from './result.ts';

/**
 * One run rule on standardised values z = (x − centre)/σ.
 * - `beyond`: at least `count` of the last `of` points strictly beyond `sigma` on one side (`sides: 'same'`, the last
 *   point being one of them unless `anyWindow`) or on either side ('either').
 * - `trend`: `points` points with strict steps all up or all down.
 * - `alternating`: `points` points whose steps change direction each time.
 * - `within`: `points` points in a row strictly inside ± `sigma`.
 * A value exactly on a limit is not beyond it and not within it; a value exactly 0 belongs to neither side.
 */
export type RunRule = { code: string } & (
  | {
      kind: 'beyond';
      count: number;
      of: number;
      sigma: number;
      sides: 'same' | 'either';
      anyWindow?: boolean;
    }
  | { kind: 'trend'; points: number }
  | { kind: 'alternating'; points: number }
  | { kind: 'within'; points: number; sigma: number }
);

/** The four rules of the Western Electric Statistical Quality Control Handbook (1956). All together: ARL 91.75. */
export const westernElectricRules: RunRule[] = [
  { code: '1-beyond-3', kind: 'beyond', count: 1, of: 1, sigma: 3, sides: 'same' },
  { code: '2-of-3-beyond-2', kind: 'beyond', count: 2, of: 3, sigma: 2, sides: 'same' },
  { code: '4-of-5-beyond-1', kind: 'beyond', count: 4, of: 5, sigma: 1, sides: 'same' },
  { code: '8-on-one-side', kind: 'beyond', count: 8, of: 8, sigma: 0, sides: 'same' },
];

/** The eight tests of Nelson, Journal of Quality Technology 16 (1984). */
export const nelsonRules: RunRule[] = [
  { code: '1-beyond-3', kind: 'beyond', count: 1, of: 1, sigma: 3, sides: 'same' },
  { code: '9-on-one-side', kind: 'beyond', count: 9, of: 9, sigma: 0, sides: 'same' },
  { code: '6-trending', kind: 'trend', points: 6 },
  { code: '14-alternating', kind: 'alternating', points: 14 },
  { code: '2-of-3-beyond-2', kind: 'beyond', count: 2, of: 3, sigma: 2, sides: 'same' },
  { code: '4-of-5-beyond-1', kind: 'beyond', count: 4, of: 5, sigma: 1, sides: 'same' },
  { code: '15-within-1', kind: 'within', points: 15, sigma: 1 },
  { code: '8-beyond-1', kind: 'beyond', count: 8, of: 8, sigma: 1, sides: 'either' },
];

/** Number of points that a rule looks back on, the last one included. */
export function ruleSpan(rule: RunRule): number {
  return rule.kind === 'beyond' ? rule.of : rule.points;
}

/** Codes of the rules that the last point of `recent` (time order, at least as long as the longest rule if so many exist) signals. */
export function rulesSignalled(recent: ArrayLike<number>, rules: RunRule[]): string[] {
  return rules.filter((rule) => signals(rule, recent, recent.length - 1)).map((rule) => rule.code);
}

/** The values that run rules still need after taking `z`: the last ones, as many as the longest rule spans. */
export function keepRecent(recent: readonly number[], z: number, rules: RunRule[]): number[] {
  const span = Math.max(1, ...rules.map(ruleSpan));
  return [...recent, z].slice(-span);
}

/**
 * Applies run rules to standardised values in time order. `signals[code]`: indices of the last point of each pattern.
 * Refuses `not-enough-data`, `non-finite-input`, `wrong-shape` (a rule with fewer than one point or count above span).
 */
export function runRules(
  z: ArrayLike<number>,
  rules: RunRule[],
): Result<{ signals: Record<string, number[]> }> {
  const refusal = vectorRefusal('z', z, 1);
  if (refusal) return refusal;
  const signalled: Record<string, number[]> = {};
  for (const rule of rules) {
    const span = ruleSpan(rule);
    if (!(span >= 1) || (rule.kind === 'beyond' && !(rule.count >= 1 && rule.count <= span))) {
      return wrongShape(rule.code);
    }
    signalled[rule.code] = [];
    for (let i = 0; i < z.length; i++) if (signals(rule, z, i)) signalled[rule.code]!.push(i);
  }
  return { ok: true, signals: signalled };
}

function signals(rule: RunRule, z: ArrayLike<number>, last: number): boolean {
  switch (rule.kind) {
    case 'beyond':
      return beyondSignals(rule, z, last);
    case 'within':
      return countInWindow(z, last, rule.points, (value) => Math.abs(value) < rule.sigma) === rule.points;
    case 'trend':
      return stepsAgree(z, last, rule.points, 1);
    case 'alternating':
      return stepsAgree(z, last, rule.points, -1);
  }
}

function beyondSignals(rule: RunRule & { kind: 'beyond' }, z: ArrayLike<number>, last: number): boolean {
  const { count, of, sigma } = rule;
  if (rule.sides === 'either') return countInWindow(z, last, of, (value) => Math.abs(value) > sigma) >= count;
  const sides = rule.anyWindow ? [1, -1] : [Math.sign(z[last]!)];
  return sides.some((side) => {
    if (side === 0 || (!rule.anyWindow && !(side * z[last]! > sigma))) return false;
    return countInWindow(z, last, of, (value) => side * value > sigma) >= count;
  });
}

/** How many of the last `span` points (fewer at the start) hold; the series may be shorter than the span. */
function countInWindow(
  z: ArrayLike<number>,
  last: number,
  span: number,
  holds: (value: number) => boolean,
): number {
  let count = 0;
  for (let i = Math.max(0, last - span + 1); i <= last; i++) if (holds(z[i]!)) count++;
  return count;
}

/** True when each of the `points` − 1 steps has the sign of the one before times `turn` (1: trend, −1: alternating). */
function stepsAgree(z: ArrayLike<number>, last: number, points: number, turn: 1 | -1): boolean {
  if (last < points - 1 || points < 2) return false;
  let wanted = 0;
  for (let i = last - points + 2; i <= last; i++) {
    const step = Math.sign(z[i]! - z[i - 1]!);
    if (step === 0 || (wanted !== 0 && step !== wanted)) return false;
    wanted = step * turn;
  }
  return true;
}
