/* Seeded random linear models and histories for the property tests. */

/** Numbers in (0, 1) from the Park–Miller generator. */
export function uniform(seed: number): () => number {
  let state = (Math.abs(Math.trunc(seed)) % 2147483646) + 1;
  return () => {
    state = (16807 * state) % 2147483647;
    return state / 2147483647;
  };
}

/** Standard normal numbers (Box–Muller). */
export function normal(seed: number): () => number {
  const next = uniform(seed);
  return () => Math.sqrt(-2 * Math.log(next())) * Math.cos(2 * Math.PI * next());
}

export type RandomModel = {
  A: number[][];
  B: number[][];
  C: number[][];
  D: number[][];
  H: number[][];
  F: number[][];
  Q: number[][];
  R: number[][];
  x0: number[];
  P0: number[][];
};

const matrix = (rows: number, columns: number, entry: (i: number, j: number) => number) =>
  Array.from({ length: rows }, (_, i) => Array.from({ length: columns }, (__, j) => entry(i, j)));

/** G Gᵀ + diagonal: positive definite. */
function covariance(size: number, next: () => number, diagonal: number): number[][] {
  const G = matrix(size, size, () => next() - 0.5);
  return matrix(size, size, (i, j) => {
    const sum = G[i]!.reduce((total, g, l) => total + g * G[j]![l]!, 0);
    return sum + (i === j ? diagonal : 0);
  });
}

/** A stable model of n states, m readings, p inputs; R diagonal unless `correlated`, D and F zero unless `feedthrough`. */
export function randomModel(
  seed: number,
  n: number,
  m: number,
  p: number,
  kind: { correlated?: boolean; feedthrough?: boolean } = {},
): RandomModel {
  const next = uniform(seed);
  const coupling = matrix(n, n, () => next() / n);
  const R = covariance(m, next, 0.3);
  return {
    A: matrix(n, n, (i, j) => (i === j ? 0.5 + 0.3 * next() : 0.3 * (coupling[i]![j]! - 0.5 / n))),
    B: matrix(n, p, () => next() - 0.5),
    C: matrix(m, n, () => 2 * next() - 1),
    D: matrix(m, p, () => (kind.feedthrough ? next() - 0.5 : 0)),
    H: matrix(1, n, () => 2 * next() - 1),
    F: matrix(1, p, () => (kind.feedthrough ? next() - 0.5 : 0)),
    Q: covariance(n, next, 0.05),
    R: matrix(m, m, (i, j) => (i === j || kind.correlated ? R[i]![j]! : 0)),
    x0: matrix(1, n, () => 4 * next() - 2)[0]!,
    P0: covariance(n, next, 1),
  };
}

/** N steps of inputs and readings; about `missing` of the readings are NaN, in stretches and single ones. */
export function randomSeries(seed: number, N: number, m: number, p: number, missing = 0) {
  const next = uniform(seed + 17);
  const u = Float64Array.from({ length: N * p }, () => 2 * next() - 1);
  const y = Float64Array.from({ length: N * m }, () => 6 * next() - 3);
  for (let j = 0; j < m; j++) {
    for (let k = 0; k < N; k++) {
      if (next() >= missing / 4) continue;
      const length = 1 + Math.floor(7 * next());
      for (let i = k; i < Math.min(N, k + length); i++) y[i * m + j] = NaN;
    }
  }
  return { u, y };
}

/** Largest |a − b| relative to the largest |b|; NaN must stand at the same places. */
export function largestDifference(a: ArrayLike<number>, b: ArrayLike<number>): number {
  if (a.length !== b.length) return Infinity;
  let difference = 0;
  let size = 1e-300;
  for (let i = 0; i < a.length; i++) {
    if (Number.isNaN(a[i]!) !== Number.isNaN(b[i]!)) return Infinity;
    if (Number.isNaN(b[i]!)) continue;
    difference = Math.max(difference, Math.abs(a[i]! - b[i]!));
    size = Math.max(size, Math.abs(b[i]!));
  }
  return difference / size;
}
