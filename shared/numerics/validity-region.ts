import { Matrix, SingularValueDecomposition } from 'ml-matrix';
import { meanOf, sdOf } from './descriptive.ts';
import { chiSquareQuantile, fQuantile } from './distributions.ts';
import { finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import { notEnough, refuse, wrongShape } from './result.ts';
import type { Refusal, Result } from './result.ts';

/**
 * The range of inputs over which a model was built. Each input: `low` to `high` seen in training. Jointly: principal
 * components of the inputs centred and scaled to SD 1, `kept` of them (vectors of length p) with their variances;
 * `t2Limit` for the distance inside their plane, `speLimit` for the squared distance from it; `leverageLimit` 3(p + 1)/n.
 */
export type ValidityRegion = {
  n: number;
  names: string[];
  low: Float64Array;
  high: Float64Array;
  centres: Float64Array;
  scales: Float64Array;
  components: Float64Array[];
  variances: Float64Array;
  kept: number;
  t2Limit: number;
  speLimit: number;
  leverageLimit: number;
};

/**
 * One point against a region. `outside`: inputs beyond their range. `t2`, `spe` with their limits; `speContributions`
 * each input's share of SPE (sum 1, zeros where SPE is 0). `leverage` 1/n + T² of all components/(n − 1). `reasons`
 * empty when the point is inside.
 */
export type RegionJudgement = {
  inside: boolean;
  reasons: ('range' | 't2' | 'spe' | 'leverage')[];
  outside: { name: string; value: number; low: number; high: number }[];
  t2: number;
  spe: number;
  speContributions: Float64Array;
  leverage: number;
};

/** `confidence` of both joint limits (default 0.99), `explained` share of variance that the kept components hold (0.95). */
export type RegionOptions = { confidence?: number; explained?: number };

/**
 * Builds the region from training columns (p columns of length n ≥ p + 3). T² limit by the F distribution for a new
 * point; SPE limit by matching mean and variance of the left-out components to g χ²_h (Box 1954; Nomikos & MacGregor,
 * Technometrics 37, 1995). With every component kept there is no SPE (limit 0, never a reason). Refuses `no-spread`
 * naming a constant column, `not-enough-data`, `non-finite-input`, `wrong-shape`, `out-of-range`.
 */
export function buildValidityRegion(
  columns: ArrayLike<number>[],
  names: string[],
  options: RegionOptions = {},
): Result<ValidityRegion> {
  const { confidence = 0.99, explained = 0.95 } = options;
  const refusal = regionRefusal(columns, names, confidence, explained);
  if (refusal) return refusal;
  const n = columns[0]!.length;
  const p = columns.length;
  const centres = Float64Array.from(columns, (column) => meanOf(column));
  const scales = Float64Array.from(columns, (column, j) => sdOf(column, centres[j]!));
  for (const [j, scale] of scales.entries()) {
    if (!(scale > 1e-13 * Math.abs(centres[j]!))) return refuse('no-spread', { field: names[j] });
    if (!Number.isFinite(scale)) return refuse('out-of-range', { field: names[j] });
  }
  const z = new Matrix(n, p);
  for (const [j, column] of columns.entries()) {
    for (let i = 0; i < n; i++) z.set(i, j, (column[i]! - centres[j]!) / scales[j]!);
  }
  const decomposition = new SingularValueDecomposition(z, { computeLeftSingularVectors: false });
  const variances = Float64Array.from(decomposition.diagonal.slice(0, p), (s) => (s * s) / (n - 1));
  const vectors = decomposition.rightSingularVectors;
  const kept = componentsFor(variances, explained);
  const left = variances.subarray(kept);
  return finiteAnswer({
    n,
    names: [...names],
    low: Float64Array.from(columns, (column) => Array.from(column).reduce((a, b) => Math.min(a, b))),
    high: Float64Array.from(columns, (column) => Array.from(column).reduce((a, b) => Math.max(a, b))),
    centres,
    scales,
    components: Array.from({ length: p }, (_, a) => Float64Array.from(vectors.getColumn(a))),
    variances,
    kept,
    t2Limit: ((kept * (n * n - 1)) / (n * (n - kept))) * fQuantile(confidence, kept, n - kept),
    speLimit: speLimitOf(left, confidence),
    leverageLimit: (3 * (p + 1)) / n,
  });
}

/** Judges one point `x` (length p, order of the region's names). Refuses `wrong-shape`, `non-finite-input`. */
export function judgePoint(region: ValidityRegion, x: ArrayLike<number>): Result<RegionJudgement> {
  const p = region.names.length;
  const refusal = vectorRefusal('x', x, 1, p);
  if (refusal) return refusal;
  const scaled = Float64Array.from(x, (value, j) => (value - region.centres[j]!) / region.scales[j]!);
  const rest = Float64Array.from(scaled);
  let t2 = 0;
  let whole = 0;
  for (const [a, component] of region.components.entries()) {
    let score = 0;
    for (let j = 0; j < p; j++) score += scaled[j]! * component[j]!;
    const variance = region.variances[a]!;
    // A direction in which training never moved counts by SPE alone.
    const share = variance > 1e-12 * region.variances[0]! ? (score * score) / variance : 0;
    whole += share;
    if (a >= region.kept) continue;
    t2 += share;
    for (let j = 0; j < p; j++) rest[j]! -= score * component[j]!;
  }
  const outside = region.names
    .map((name, j) => ({ name, value: x[j]!, low: region.low[j]!, high: region.high[j]! }))
    .filter(({ value, low, high }) => value < low || value > high);
  const hasRest = region.kept < p;
  const spe = hasRest ? rest.reduce((sum, value) => sum + value * value, 0) : 0;
  const leverage = 1 / region.n + whole / (region.n - 1);
  const reasons: RegionJudgement['reasons'] = [];
  if (outside.length > 0) reasons.push('range');
  if (t2 > region.t2Limit) reasons.push('t2');
  if (hasRest && spe > region.speLimit + 1e-9) reasons.push('spe');
  if (leverage > region.leverageLimit) reasons.push('leverage');
  return finiteAnswer({
    inside: reasons.length === 0,
    reasons,
    outside,
    t2,
    spe,
    speContributions: rest.map((value) => (spe > 0 ? (value * value) / spe : 0)),
    leverage,
  });
}

function regionRefusal(
  columns: ArrayLike<number>[],
  names: string[],
  confidence: number,
  explained: number,
): Refusal | null {
  const options =
    optionRefusal('confidence', confidence, 0.5, 0.999999) ?? optionRefusal('explained', explained, 0.01, 1);
  if (options) return options;
  if (!Array.isArray(columns) || columns.length === 0) return wrongShape('columns');
  if (!Array.isArray(names) || names.length !== columns.length) {
    return wrongShape('names', columns.length, names?.length);
  }
  const n = columns[0]?.length ?? 0;
  for (const [j, column] of columns.entries()) {
    const refusal = vectorRefusal(String(names[j]), column, 1, n);
    if (refusal) return refusal;
  }
  return n < columns.length + 3 ? notEnough('columns', columns.length + 3, n) : null;
}

/** Fewest components that hold the wanted share of the variance. */
function componentsFor(variances: Float64Array, explained: number): number {
  const whole = variances.reduce((sum, value) => sum + value, 0);
  let held = 0;
  for (const [a, variance] of variances.entries()) {
    held += variance;
    if (held >= explained * whole * (1 - 1e-12)) return a + 1;
  }
  return variances.length;
}

/** Upper limit of a sum of squares with these variances: g χ²_h with g = Σλ²/Σλ, h = (Σλ)²/Σλ². */
function speLimitOf(variances: Float64Array, confidence: number): number {
  const sum = variances.reduce((total, value) => total + value, 0);
  const squares = variances.reduce((total, value) => total + value * value, 0);
  return sum > 1e-15 ? (squares / sum) * chiSquareQuantile(confidence, (sum * sum) / squares) : 0;
}
