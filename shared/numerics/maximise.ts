import { Matrix } from 'ml-matrix';
import { solveFor } from './linear-algebra.ts';

/** A function of a few variables, to be made as large as possible inside a box; −Infinity where it has no value. */
export type Objective = (x: readonly number[]) => number;

/** A box: lowest and highest value of each variable. */
export type Box = { low: readonly number[]; high: readonly number[] };

/** Where the search ended; `gradient` the largest slope that could still be followed inside the box. */
export type Maximum = { x: number[]; value: number; gradient: number; steps: number };

/** Half-width of the central differences; the variables are logarithms here, so this is 0.1 %. */
const difference = 1e-3;

const mostSteps = 200;

/**
 * Maximum of `f` from `start` inside a box by a projected quasi-Newton search: BFGS update of the inverse Hessian
 * (Nocedal & Wright 2006, eq. 6.17), central differences, backtracking until the gain is a tenth of a percent of what the
 * slope promises (Armijo). Ends when a step gains less than 1e-12 of the value or the slope is below `tolerance`.
 */
export function maximise(f: Objective, start: readonly number[], box: Box, tolerance = 1e-4): Maximum {
  const d = start.length;
  const inside = (x: number[]) => x.map((v, i) => Math.min(Math.max(v, box.low[i]!), box.high[i]!));
  let x = inside([...start]);
  let value = f(x);
  let g = gradientOf(f, x, box);
  let inverse = Matrix.eye(d).mul(1 / Math.max(1, Math.hypot(...g)));
  for (let step = 0; step < mostSteps; step++) {
    const free = g.map((slope, i) => (slope > 0 ? x[i]! < box.high[i]! : x[i]! > box.low[i]!));
    const slope = Math.max(0, ...g.map((value, i) => (free[i] ? Math.abs(value) : 0)));
    if (slope < tolerance || !Number.isFinite(value)) return { x, value, gradient: slope, steps: step };
    const uphill = g.map((value, i) => (free[i] ? value : 0));
    let direction = inverse
      .mmul(Matrix.columnVector(uphill))
      .to1DArray()
      .map((value, i) => (free[i] ? value : 0));
    if (!(dot(direction, g) > 0)) {
      inverse = Matrix.eye(d).mul(1 / slope);
      direction = uphill.map((value) => value / slope);
    }
    const found = lineSearch(f, x, value, g, direction, inside);
    if (!found) return { x, value, gradient: slope, steps: step };
    const next = gradientOf(f, found.x, box);
    inverse = bfgs(inverse, minus(found.x, x), minus(g, next));
    const gained = found.value - value;
    [x, value, g] = [found.x, found.value, next];
    if (gained < 1e-12 * Math.abs(value)) return { x, value, gradient: slope, steps: step + 1 };
  }
  return { x, value, gradient: Math.max(...g.map(Math.abs)), steps: mostSteps };
}

/** Longest move of one step: a factor of e³ in each variance. */
const longestMove = 3;

function lineSearch(
  f: Objective,
  x: number[],
  value: number,
  g: number[],
  direction: number[],
  inside: (x: number[]) => number[],
): { x: number[]; value: number } | null {
  let size = Math.min(1, longestMove / Math.max(...direction.map(Math.abs)));
  for (let i = 0; i < 30; i++, size /= 2) {
    const tried = inside(x.map((v, j) => v + size * direction[j]!));
    const there = f(tried);
    if (there > value && there - value >= 1e-3 * dot(g, minus(tried, x))) return { x: tried, value: there };
  }
  return null;
}

/** Central differences, one-sided at the edge of the box. */
function gradientOf(f: Objective, x: readonly number[], box: Box): number[] {
  return x.map((value, i) => {
    const up = Math.min(value + difference, box.high[i]!);
    const down = Math.max(value - difference, box.low[i]!);
    return up > down ? (f(replaced(x, i, up)) - f(replaced(x, i, down))) / (up - down) : 0;
  });
}

/**
 * Second derivatives of `f` at x by central differences of half-width `width`: ∂²f/∂xᵢ∂xⱼ. With logarithms of variances
 * 0.05 keeps both the rounding and the curvature of the log-likelihood out of it.
 */
export function hessianOf(f: Objective, x: readonly number[], width = 0.05): number[][] {
  const at = (i: number, si: number, j: number, sj: number) =>
    f(replaced(replaced(x, i, x[i]! + si * width), j, (i === j ? x[i]! + si * width : x[j]!) + sj * width));
  return x.map((_, i) =>
    x.map(
      (__, j) =>
        (at(i, 1, j, 1) - at(i, 1, j, -1) - at(i, -1, j, 1) + at(i, -1, j, -1)) / (4 * width * width),
    ),
  );
}

/** BFGS update of the inverse Hessian of −f; left as it is where the curvature has the wrong sign. */
function bfgs(inverse: Matrix, move: number[], change: number[]): Matrix {
  const curvature = dot(move, change);
  if (!(curvature > 1e-12 * Math.hypot(...move) * Math.hypot(...change))) return inverse;
  const s = Matrix.columnVector(move);
  const y = Matrix.columnVector(change);
  const I = Matrix.eye(move.length);
  const left = Matrix.sub(I, s.mmul(y.transpose()).div(curvature));
  return left.mmul(inverse).mmul(left.transpose()).add(s.mmul(s.transpose()).div(curvature));
}

/** Inverse of a small symmetric matrix. Throws `Refused` (`singular`). */
export function inverseOf(M: number[][], field: string): Matrix {
  return solveFor(new Matrix(M), Matrix.eye(M.length), field);
}

function replaced(x: readonly number[], i: number, value: number): number[] {
  const copy = [...x];
  copy[i] = value;
  return copy;
}

function dot(a: readonly number[], b: readonly number[]): number {
  return a.reduce((sum, value, i) => sum + value * b[i]!, 0);
}

function minus(a: readonly number[], b: readonly number[]): number[] {
  return a.map((value, i) => value - b[i]!);
}
