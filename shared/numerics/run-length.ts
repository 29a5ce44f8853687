import { LuDecomposition, Matrix } from 'ml-matrix';
import { normalCdf, normalDensity, normalQuantile } from './distributions.ts';
import { gaussLegendre } from './gauss-legendre.ts';
import { finiteAnswer, firstRefusal, optionRefusal } from './input-checks.ts';
import { refuse } from './result.ts';
import type { Refusal, Result } from './result.ts';

/** Average number of samples until a signal, the first one counted; `shift` in SDs of a single error. */
export type RunLength = { runLength: number };

/** CUSUM in SDs: reference value k, decision interval h, true shift of the mean, head start of both sums (default 0). */
export type CusumRunLengthOptions = { k: number; h: number; shift?: number; headStart?: number };

/** EWMA with fixed (asymptotic) limits: λ, width in SDs of z, true shift of the mean in SDs of a single error. */
export type EwmaRunLengthOptions = { lambda: number; width: number; shift?: number };

/**
 * Average run length of a one-sided CUSUM of independent normal errors: Gauss-Legendre collocation of Page's integral
 * equation. Agrees with published tables to their digits. Refuses `out-of-range` (h above 100, run length above 1e12).
 * Source: Page (1954); Lucas & Crosier, Technometrics 24 (1982).
 */
export function oneSidedCusumRunLength(options: CusumRunLengthOptions): Result<RunLength> {
  const refusal = cusumRefusal(options);
  if (refusal) return refusal;
  const { k, h, shift = 0, headStart = 0 } = options;
  return bounded(cusumLength(k - shift, h, headStart));
}

/**
 * Average run length of a two-sided CUSUM of independent normal errors, both sums with the same head start, from the two
 * one-sided ones (Lucas & Crosier 1982; Kemp 1961).
 */
export function cusumRunLength(options: CusumRunLengthOptions): Result<RunLength> {
  const refusal = cusumRefusal(options);
  if (refusal) return refusal;
  const { k, h, shift = 0, headStart = 0 } = options;
  const up = cusumLength(k - shift, h, 0);
  const down = cusumLength(k + shift, h, 0);
  if (headStart === 0) return bounded(1 / (1 / up + 1 / down));
  const upAhead = cusumLength(k - shift, h, headStart);
  const downAhead = cusumLength(k + shift, h, headStart);
  return bounded((upAhead / up + downAhead / down - 1) / (1 / up + 1 / down));
}

/**
 * Siegmund's approximation of a CUSUM's run length, (e^(−2Δb) + 2Δb − 1)/(2Δ²) with b = h + 1.166: `upper`, `lower` and
 * both sides together. Source: Siegmund, Sequential Analysis (1985).
 */
export function siegmundRunLength(
  options: CusumRunLengthOptions,
): Result<{ upper: number; lower: number; runLength: number }> {
  const refusal = cusumRefusal(options);
  if (refusal) return refusal;
  const { k, h, shift = 0 } = options;
  const upper = siegmundSide(shift - k, h);
  const lower = siegmundSide(-shift - k, h);
  return finiteAnswer({ upper, lower, runLength: 1 / (1 / upper + 1 / lower) });
}

function siegmundSide(drift: number, h: number): number {
  const b = h + 1.166;
  return Math.abs(drift) < 1e-9
    ? b * b
    : (Math.exp(-2 * drift * b) + 2 * drift * b - 1) / (2 * drift * drift);
}

/**
 * Average run length of a two-sided EWMA of independent normal errors with fixed limits, started at the target: Crowder's
 * integral equation (Technometrics 29, 1987). λ = 1 is the Shewhart chart. Refuses `out-of-range`.
 */
export function ewmaRunLength(options: EwmaRunLengthOptions): Result<RunLength> {
  const { lambda, width, shift = 0 } = options;
  const refusal = firstRefusal(
    optionRefusal('lambda', lambda, 0.01, 1),
    optionRefusal('width', width, 0.1, 10),
    optionRefusal('shift', shift, -20, 20),
  );
  if (refusal) return refusal;
  if (lambda === 1) return bounded(1 / (normalCdf(-width - shift) + normalCdf(shift - width)));
  const limit = width * Math.sqrt(lambda / (2 - lambda));
  const { nodes, weights } = gaussLegendre(nodesFor((2 * limit) / lambda), -limit, limit);
  const density = (from: number, to: number) =>
    normalDensity((to - (1 - lambda) * from) / lambda - shift) / lambda;
  const lengths = collocate(nodes, weights, density);
  let runLength = 1;
  for (let j = 0; j < nodes.length; j++) runLength += weights[j]! * density(0, nodes[j]!) * lengths[j]!;
  return bounded(runLength);
}

/** CUSUM interval h (SDs) for a wanted in-control run length of both sides together, independent normal errors. */
export function cusumIntervalFor(runLength: number, k: number): Result<{ h: number }> {
  const refusal = wantedRefusal(runLength) ?? optionRefusal('k', k, 0, 3);
  if (refusal) return refusal;
  // Siegmund's form is near enough to bracket the exact h, which costs a linear system for each try.
  let [low, high] = [0, 40_000];
  for (let step = 0; step < 60; step++) {
    const middle = (low + high) / 2;
    if (siegmundSide(-k, middle) < 2 * runLength) low = middle;
    else high = middle;
  }
  if (low > 90) return refuse('out-of-range', { field: 'runLength', figure: runLength });
  return limitFor('h', runLength, Math.max(0.01, 0.9 * low - 0.3), 1.1 * low + 0.3, (h) =>
    cusumRunLength({ k, h }),
  );
}

/** EWMA limit width (SDs of z) for a wanted in-control run length, independent normal errors, fixed limits. */
export function ewmaWidthFor(runLength: number, lambda: number): Result<{ width: number }> {
  const refusal = wantedRefusal(runLength) ?? optionRefusal('lambda', lambda, 0.01, 1);
  if (refusal) return refusal;
  // An EWMA never needs wider limits than single values do.
  const widest = -normalQuantile(1 / (2 * runLength)) + 0.1;
  return limitFor('width', runLength, 0.1, widest, (width) => ewmaRunLength({ lambda, width }));
}

/** Limit width (SDs) of an individuals chart for a wanted in-control run length, independent normal errors. */
export function shewhartWidthFor(runLength: number): Result<{ width: number }> {
  return wantedRefusal(runLength) ?? finiteAnswer({ width: -normalQuantile(1 / (2 * runLength)) });
}

/** L(u) of the one-sided CUSUM: L(u) = 1 + L(0) Φ(drift − u) + ∫₀ʰ L(x) φ(x + drift − u) dx, drift = k − shift. */
function cusumLength(drift: number, h: number, start: number): number {
  const rule = gaussLegendre(nodesFor(h), 0, h);
  // The atom at zero joins as a node whose weight is the probability of falling back to it.
  const nodes = Float64Array.from([0, ...rule.nodes]);
  const size = nodes.length;
  const system = Matrix.eye(size);
  const step = (from: number, j: number) =>
    j === 0 ? normalCdf(drift - from) : rule.weights[j - 1]! * normalDensity(nodes[j]! + drift - from);
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < size; j++) system.set(i, j, system.get(i, j) - step(nodes[i]!, j));
  }
  const lengths = solveForLengths(system);
  if (start === 0) return lengths[0]!;
  let length = 1;
  for (let j = 0; j < size; j++) length += step(start, j) * lengths[j]!;
  return length;
}

function collocate(
  nodes: Float64Array,
  weights: Float64Array,
  density: (from: number, to: number) => number,
): number[] {
  const system = Matrix.eye(nodes.length);
  for (const [i, from] of nodes.entries()) {
    for (const [j, to] of nodes.entries())
      system.set(i, j, system.get(i, j) - weights[j]! * density(from, to));
  }
  return solveForLengths(system);
}

/** L of (I − K) L = 1; infinite throughout where the chart never signals within the precision of numbers. */
function solveForLengths(system: Matrix): number[] {
  const decomposition = new LuDecomposition(system);
  if (decomposition.isSingular()) return new Array<number>(system.rows).fill(Infinity);
  return decomposition.solve(Matrix.ones(system.rows, 1)).getColumn(0);
}

/** Enough Gauss-Legendre nodes for a kernel of unit SD over a range of so many SDs. */
function nodesFor(range: number): number {
  return Math.ceil(20 + 4 * range);
}

function bounded(runLength: number): Result<RunLength> {
  return runLength > 0 && runLength < 1e12
    ? { ok: true, runLength }
    : refuse('out-of-range', { field: 'runLength' });
}

function cusumRefusal({ k, h, shift = 0, headStart = 0 }: CusumRunLengthOptions): Refusal | null {
  return firstRefusal(
    optionRefusal('k', k, 0, 10),
    optionRefusal('h', h, 0.01, 100),
    optionRefusal('shift', shift, -20, 20),
    optionRefusal('headStart', headStart, 0, h),
  );
}

function wantedRefusal(runLength: number): Refusal | null {
  return optionRefusal('runLength', runLength, 2, 1e9);
}

/** False position (Illinois) on the logarithm of a run length, which grows almost linearly with the limit. */
function limitFor<Name extends string>(
  name: Name,
  wanted: number,
  low: number,
  high: number,
  lengthAt: (limit: number) => Result<RunLength>,
): Result<Record<Name, number>> {
  const excess = (limit: number) => {
    const length = lengthAt(limit);
    // A run length beyond all bounds is longer than any wanted one.
    return Math.log((length.ok ? length.runLength : 1e13) / wanted);
  };
  let [left, right] = [low, high];
  let [below, above] = [excess(low), excess(high)];
  if (below > 0 || above < 0) return refuse('out-of-range', { field: 'runLength', figure: wanted });
  for (let step = 0; step < 200 && right - left > 1e-10; step++) {
    const middle = (left * above - right * below) / (above - below);
    const found = excess(middle);
    if (Math.abs(found) < 1e-10) {
      left = right = middle;
    } else if (found < 0) {
      [left, below] = [middle, found];
      above /= 2;
    } else {
      [right, above] = [middle, found];
      below /= 2;
    }
  }
  return { ok: true, [name]: (left + right) / 2 } as { ok: true } & Record<Name, number>;
}
