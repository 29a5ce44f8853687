import { LuDecomposition, Matrix } from 'ml-matrix';
import { normalCdf } from './distributions.ts';
import { finiteAnswer, optionRefusal } from './input-checks.ts';
import { notEnough, outOfRange, refuse } from './result.ts';
import type { Refusal, Result } from './result.ts';
import type { RunRule } from './run-rules.ts';

type BeyondRule = RunRule & { kind: 'beyond' };

/** More chart states than this are refused: eight Western Electric and Nelson rules on zones make some hundred. */
const mostStates = 3000;

/**
 * Exact average run length of a Shewhart chart with run rules of the kind `beyond` on one side (last point one of them),
 * for independent normal errors and a true `shift` in SDs: Markov chain over what the last points leave behind. Refuses
 * `out-of-range` naming a rule of another kind or one that needs too many states, `not-enough-data` without rules,
 * `ill-conditioned` where the rules cannot signal. Source: Champ & Woodall, Technometrics 29 (1987).
 */
export function runRulesRunLength(
  rules: RunRule[],
  shift = 0,
): Result<{ runLength: number; states: number }> {
  const refusal = optionRefusal('shift', shift, -20, 20) ?? rulesRefusal(rules);
  if (refusal) return refusal;
  const beyond = rules as BeyondRule[];
  const zones = zoneProbabilities(beyond, shift);
  const states = new Map<string, number>([[startState(beyond), 0]]);
  const queue = [startState(beyond)];
  const moves: { to: number; probability: number }[][] = [];
  for (const state of queue) {
    const row: { to: number; probability: number }[] = [];
    for (const { z, probability } of zones) {
      const next = nextState(state, z, beyond);
      if (next === null) continue;
      if (!states.has(next)) {
        states.set(next, states.size);
        queue.push(next);
        if (states.size > mostStates) return refuse('out-of-range', { field: 'rules', figure: states.size });
      }
      row.push({ to: states.get(next)!, probability });
    }
    moves.push(row);
  }
  const system = Matrix.eye(states.size);
  for (const [from, row] of moves.entries()) {
    for (const { to, probability } of row) system.set(from, to, system.get(from, to) - probability);
  }
  const decomposition = new LuDecomposition(system);
  if (decomposition.isSingular()) return refuse('ill-conditioned', { field: 'rules' });
  const runLength = decomposition.solve(Matrix.ones(states.size, 1)).get(0, 0);
  if (!(runLength > 0 && runLength < 1e12)) return refuse('ill-conditioned', { field: 'rules' });
  return finiteAnswer({ runLength, states: states.size });
}

function rulesRefusal(rules: RunRule[]): Refusal | null {
  if (!Array.isArray(rules) || rules.length === 0) return notEnough('rules', 1, 0);
  for (const rule of rules) {
    if (rule.kind !== 'beyond' || rule.sides !== 'same' || rule.anyWindow) return outOfRange(rule.code);
    if (!(rule.count >= 1 && rule.count <= rule.of && rule.of <= 12)) return outOfRange(rule.code, rule.of);
  }
  return null;
}

/** Zones between the rules' limits on both sides, each with a value inside it and its probability. */
function zoneProbabilities(rules: BeyondRule[], shift: number): { z: number; probability: number }[] {
  const limits = [...new Set(rules.flatMap(({ sigma }) => [sigma, -sigma]).concat(0))].sort((a, b) => a - b);
  const edges = [-Infinity, ...limits, Infinity];
  return edges.slice(1).map((high, i) => {
    const low = edges[i]!;
    const probability =
      low >= 0
        ? normalCdf(shift - low) - normalCdf(shift - high)
        : normalCdf(high - shift) - normalCdf(low - shift);
    const z = low === -Infinity ? high - 1 : high === Infinity ? low + 1 : (low + high) / 2;
    return { z, probability };
  });
}

/** For each rule and side the last points' flags, newest last: '1' beyond on that side. */
function startState(rules: BeyondRule[]): string {
  return rules.map(() => '|').join(';');
}

/** The state after a point at z, or null when a rule signals. */
function nextState(state: string, z: number, rules: BeyondRule[]): string | null {
  const next: string[] = [];
  for (const [i, flags] of state.split(';').entries()) {
    const rule = rules[i]!;
    const sides: string[] = [];
    for (const [j, side] of [1, -1].entries()) {
      const is = side * z > rule.sigma;
      const before = flags.split('|')[j]!;
      const count = [...before].filter((flag) => flag === '1').length;
      if (is && count + 1 >= rule.count) return null;
      sides.push(trimmed(before + (is ? '1' : '0'), rule));
    }
    next.push(sides.join('|'));
  }
  return next.join(';');
}

/** Drops flags that no later signal can count: out of the window, or an oldest part that cannot reach the count. */
function trimmed(flags: string, rule: BeyondRule): string {
  let kept = flags.slice(Math.max(0, flags.length - (rule.of - 1)));
  while (kept !== '') {
    const points = rule.of - kept.length;
    const ones = [...kept].filter((flag) => flag === '1').length;
    if (kept[0] === '1' && ones + points >= rule.count) break;
    kept = kept.slice(1);
  }
  return kept;
}
