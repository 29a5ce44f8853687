import { columnsRefusal } from './design-matrix.ts';
import type { RegressionData } from './design-matrix.ts';
import { meanOf, sdOf } from './descriptive.ts';
import { countRefusal, finiteAnswer } from './input-checks.ts';
import { notEnough, refuse } from './result.ts';
import type { Refusal, Result } from './result.ts';

/** Data of a PLS fit: columns of length n, their names, and y. */
export type PlsData = Omit<RegressionData, 'intercept'>;

/** Number of components; `scale` divides each column by its SD (divisor n − 1) first, which inputs of unlike units need. */
export type PlsOptions = { components: number; scale: boolean };

/**
 * A PLS1 model of A components. `rotations` and `loadings` A vectors of length p on centred (and scaled) columns: score
 * a = Σ (x_j − centres_j)/scales_j · rotations[a][j]; y = yMean + Σ yLoadings[a] · score a. `coefficients` and
 * `intercept` are those of all A components in the units of the columns; `xExplained[a]` share of the columns'
 * variance; `rmsec` root mean square of the fitted residuals for 0…A components.
 */
export type PlsModel = {
  n: number;
  components: number;
  names: string[];
  centres: Float64Array;
  scales: Float64Array;
  yMean: number;
  rotations: Float64Array[];
  loadings: Float64Array[];
  yLoadings: Float64Array;
  scoreVariances: Float64Array;
  xExplained: Float64Array;
  rmsec: Float64Array;
  coefficients: Float64Array;
  intercept: number;
};

/**
 * PLS1 regression by NIPALS with an orthogonal score for each component (Wold; Geladi & Kowalski, Anal. Chim. Acta 185,
 * 1986). Agrees with R's pls package on the gasoline data to 8 digits. Stops early, with fewer `components`, where the
 * columns have nothing left that moves with y. Refuses `no-spread` naming a constant column (when scaling) or y,
 * `not-enough-data` below components + 2 rows, `out-of-range`, `wrong-shape`, `non-finite-input`.
 */
export function fitPls(data: PlsData, options: PlsOptions): Result<PlsModel> {
  const refusal = plsRefusal(data, options);
  if (refusal) return refusal;
  const { columns, names, y } = data;
  const n = y.length;
  const yMean = meanOf(y);
  const centres = Float64Array.from(columns, (column) => meanOf(column));
  const scales = Float64Array.from(columns, (column, j) => (options.scale ? sdOf(column, centres[j]!) : 1));
  for (const [j, scale] of scales.entries()) {
    if (!(scale > 1e-13 * Math.abs(centres[j]!))) return refuse('no-spread', { field: names[j] });
  }
  const x = columns.map((column, j) =>
    Float64Array.from(column, (value) => (value - centres[j]!) / scales[j]!),
  );
  const rest = Float64Array.from(y, (value) => value - yMean);
  const spread = dot(rest, rest);
  if (!Number.isFinite(spread)) return refuse('out-of-range', { field: 'y' });
  if (!(Math.sqrt(spread / n) > 1e-13 * Math.abs(yMean))) return refuse('no-spread', { field: 'y' });
  const parts = extractComponents(x, rest, options.components);
  if (parts.rotations.length === 0) return refuse('cannot-tell', { field: 'columns' });
  const coefficients = new Float64Array(columns.length);
  for (const [a, rotation] of parts.rotations.entries()) {
    for (let j = 0; j < columns.length; j++)
      coefficients[j]! += (parts.yLoadings[a]! * rotation[j]!) / scales[j]!;
  }
  return finiteAnswer({
    n,
    components: parts.rotations.length,
    names: [...names],
    centres,
    scales,
    yMean,
    rotations: parts.rotations,
    loadings: parts.loadings,
    yLoadings: Float64Array.from(parts.yLoadings),
    scoreVariances: Float64Array.from(parts.scoreSquares, (squares) => squares / (n - 1)),
    xExplained: Float64Array.from(parts.xExplained),
    rmsec: Float64Array.from([spread, ...parts.ySquares], (squares) => Math.sqrt(squares / n)),
    coefficients,
    intercept: yMean - dot(coefficients, centres),
  });
}

/** Predictions for 0…A components at one point `x` (length p): how the estimate grows with each component. */
export function plsPredictions(model: PlsModel, x: ArrayLike<number>): Float64Array {
  const predictions = new Float64Array(model.components + 1);
  predictions[0] = model.yMean;
  for (let a = 0; a < model.components; a++) {
    let score = 0;
    const rotation = model.rotations[a]!;
    for (let j = 0; j < rotation.length; j++) {
      score += ((x[j]! - model.centres[j]!) / model.scales[j]!) * rotation[j]!;
    }
    predictions[a + 1] = predictions[a]! + model.yLoadings[a]! * score;
  }
  return predictions;
}

function plsRefusal(data: PlsData, options: PlsOptions): Refusal | null {
  const refusal =
    columnsRefusal(data) ?? countRefusal('components', options.components, 1, data.columns.length);
  if (refusal) return refusal;
  const needed = options.components + 2;
  return data.y.length < needed ? notEnough('y', needed, data.y.length) : null;
}

/** NIPALS: deflates `x` and `rest` in place, component by component. */
function extractComponents(x: Float64Array[], rest: Float64Array, components: number) {
  const rotations: Float64Array[] = [];
  const loadings: Float64Array[] = [];
  const yLoadings: number[] = [];
  const scoreSquares: number[] = [];
  const xExplained: number[] = [];
  const ySquares: number[] = [];
  const wholeX = x.reduce((sum, column) => sum + dot(column, column), 0);
  const wholeY = Math.sqrt(dot(rest, rest));
  for (let a = 0; a < components; a++) {
    const weights = Float64Array.from(x, (column) => dot(column, rest));
    const size = Math.sqrt(dot(weights, weights));
    if (!(size > 1e-12 * Math.sqrt(wholeX) * wholeY)) break;
    for (let j = 0; j < weights.length; j++) weights[j]! /= size;
    const score = new Float64Array(rest.length);
    for (const [j, column] of x.entries()) addScaled(score, column, weights[j]!);
    const squares = dot(score, score);
    const loading = Float64Array.from(x, (column) => dot(column, score) / squares);
    const yLoading = dot(rest, score) / squares;
    for (const [j, column] of x.entries()) addScaled(column, score, -loading[j]!);
    addScaled(rest, score, -yLoading);
    // r = w − Σ (pᵀw) r over the earlier components: scores straight from the undeflated columns.
    const rotation = Float64Array.from(weights);
    for (let b = 0; b < a; b++) addScaled(rotation, rotations[b]!, -dot(loadings[b]!, weights));
    rotations.push(rotation);
    loadings.push(loading);
    yLoadings.push(yLoading);
    scoreSquares.push(squares);
    xExplained.push((squares * dot(loading, loading)) / wholeX);
    ySquares.push(dot(rest, rest));
  }
  return { rotations, loadings, yLoadings, scoreSquares, xExplained, ySquares };
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}

function addScaled(to: Float64Array, what: Float64Array, factor: number): void {
  for (let i = 0; i < to.length; i++) to[i]! += factor * what[i]!;
}
