/** One figure that was found by simulation, found again. `size` 1 is the full run; smaller is faster and rougher. */
export type Trial = {
  name: string;
  run: (seed: number, size?: number) => { figures: Record<string, number>; agrees: boolean };
};

/** One that takes minutes, with a database and processes of its own. */
export type SlowTrial = {
  name: string;
  run: (seed: number) => Promise<{ figures: Record<string, number>; agrees: boolean }>;
};

/** True when `value` lies within `allowed` of `expected`, or within four standard errors where those are larger. */
export function near(value: number, expected: number, allowed: number, standardError = 0): boolean {
  return Math.abs(value - expected) <= Math.max(allowed, allowed + 4 * standardError);
}
