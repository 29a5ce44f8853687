import { countRefusal, finiteAnswer } from './input-checks.ts';
import { fitPls, plsPredictions } from './pls.ts';
import type { PlsData } from './pls.ts';
import { columnsRefusal } from './design-matrix.ts';
import type { RegressionData } from './design-matrix.ts';
import { fitLeastSquares, predictAt } from './regression.ts';
import { fitRidge } from './ridge.ts';
import { notEnough } from './result.ts';
import type { Refusal, Result } from './result.ts';

/** One fold of rows in time order: [from, to) is predicted by a model fitted to `training`. */
export type Fold = { from: number; to: number; training: number[] };

/**
 * `contiguous`: each block is predicted from all other rows, so that neighbours in time leave together. `forward`: each
 * block after the first is predicted from the rows before it only, as it happens on the plant. Never shuffled.
 */
export type FoldScheme = 'contiguous' | 'forward';

/** Root mean square errors of prediction for each candidate (components 0…A, or one for each penalty) over all folds. */
export type CrossValidation = { rmsecv: Float64Array; best: number; predicted: number; folds: number };

/**
 * Chronological folds of n rows: blocks as equal as whole rows allow, the first n mod folds one longer. `folds` = n
 * leaves one out (contiguous). Refuses `out-of-range`, `not-enough-data`.
 */
export function chronologicalFolds(n: number, folds: number, scheme: FoldScheme): Result<{ folds: Fold[] }> {
  const refusal = countRefusal('n', n, 0, 1e9) ?? countRefusal('folds', folds, 2, 1e6);
  if (refusal) return refusal;
  if (n < folds) return notEnough('n', folds, n);
  const size = Math.floor(n / folds);
  const longer = n % folds;
  const made: Fold[] = [];
  for (let k = 0, from = 0; k < folds; k++) {
    const to = from + size + (k < longer ? 1 : 0);
    const rows = Array.from({ length: scheme === 'forward' ? from : n - (to - from) }, (_, i) => i);
    const training = scheme === 'forward' ? rows : rows.map((i) => (i < from ? i : i + to - from));
    if (training.length > 0) made.push({ from, to, training });
    from = to;
  }
  return { ok: true, folds: made };
}

/**
 * RMSECV of PLS with 0 to `most` components; `best` the number with the smallest. Every fold is centred (and scaled) on
 * its own training rows. Refuses as {@link fitPls} and {@link chronologicalFolds}.
 */
export function crossValidatePls(
  data: PlsData,
  options: { most: number; scale: boolean; folds: number; scheme: FoldScheme },
): Result<CrossValidation> {
  return overFolds(data, options, (training, test) => {
    const model = fitPls(training, { components: options.most, scale: options.scale });
    if (!model.ok) return model;
    return test.map((x) => {
      const predictions = plsPredictions(model, x);
      // Components beyond those that the fold supports change nothing.
      return Array.from({ length: options.most + 1 }, (_, a) => predictions[Math.min(a, model.components)]!);
    });
  });
}

/** RMSECV of ridge regression for each of `penalties` (0 is least squares); `best` the index of the smallest. */
export function crossValidateRidge(
  data: RegressionData,
  options: { penalties: number[]; folds: number; scheme: FoldScheme },
): Result<CrossValidation> {
  const refusal = countRefusal('penalties', options.penalties?.length, 1, 1000);
  if (refusal) return refusal;
  return overFolds(data, options, (training, test) => {
    const fits: { intercept: number; coefficients: Float64Array }[] = [];
    for (const penalty of options.penalties) {
      const whole = { ...training, intercept: data.intercept };
      const fit = penalty === 0 ? fitLeastSquares(whole) : fitRidge(whole, penalty);
      if (!fit.ok) return fit;
      fits.push(fit);
    }
    return test.map((x) => fits.map((fit) => predictAt(fit, x)));
  });
}

function overFolds(
  data: PlsData,
  options: { folds: number; scheme: FoldScheme },
  predict: (training: PlsData, test: number[][]) => number[][] | Refusal,
): Result<CrossValidation> {
  const refusal = columnsRefusal(data);
  if (refusal) return refusal;
  const made = chronologicalFolds(data.y.length, options.folds, options.scheme);
  if (!made.ok) return made;
  let squares: Float64Array | null = null;
  let predicted = 0;
  for (const { from, to, training } of made.folds) {
    const kept = {
      columns: data.columns.map((column) => Float64Array.from(training, (i) => column[i]!)),
      names: data.names,
      y: Float64Array.from(training, (i) => data.y[i]!),
    };
    const test = Array.from({ length: to - from }, (_, k) => data.columns.map((column) => column[from + k]!));
    const predictions = predict(kept, test);
    if (!Array.isArray(predictions)) return predictions;
    for (const [k, candidates] of predictions.entries()) {
      squares ??= new Float64Array(candidates.length);
      for (const [c, value] of candidates.entries()) squares[c]! += (value - data.y[from + k]!) ** 2;
      predicted++;
    }
  }
  const rmsecv = Float64Array.from(squares ?? [], (sum) => Math.sqrt(sum / predicted));
  const best = rmsecv.reduce((lowest, value, c) => (value < rmsecv[lowest]! ? c : lowest), 0);
  return finiteAnswer({ rmsecv, best, predicted, folds: made.folds.length });
}
