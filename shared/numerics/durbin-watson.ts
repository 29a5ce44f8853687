import { EigenvalueDecomposition, Matrix, QrDecomposition } from 'ml-matrix';
import { countRefusal, finiteAnswer, optionRefusal, vectorRefusal } from './input-checks.ts';
import { notEnough, refuse } from './result.ts';
import type { Result } from './result.ts';

/**
 * Durbin-Watson statistic d = Σ(e[t] − e[t−1])²/Σe[t]² of regression residuals in time order: about 2(1 − r₁). Refuses
 * `no-spread` when all residuals are zero. Source: Durbin & Watson, Biometrika 37 (1950).
 */
export function durbinWatson(residuals: ArrayLike<number>): Result<{ n: number; d: number }> {
  const refusal = vectorRefusal('residuals', residuals, 2);
  if (refusal) return refusal;
  let steps = 0;
  let squares = residuals[0]! ** 2;
  for (let i = 1; i < residuals.length; i++) {
    steps += (residuals[i]! - residuals[i - 1]!) ** 2;
    squares += residuals[i]! ** 2;
  }
  if (!(squares > 0)) return refuse('no-spread', { field: 'residuals' });
  return finiteAnswer({ n: residuals.length, d: steps / squares });
}

/**
 * Exact p value of d against positive autocorrelation, P(D ≤ d) for independent normal errors of a regression with
 * intercept on `columns` (each of length n ≤ 400), by Imhof's integral over the eigenvalues of MAM, with M the
 * residual projector and A the second difference matrix. Source: Durbin & Watson (1971); Imhof, Biometrika 48 (1961).
 */
export function durbinWatsonP(d: number, columns: ArrayLike<number>[]): Result<{ p: number }> {
  const n = columns[0]?.length ?? 0;
  const refusal =
    optionRefusal('d', d, 0, 4) ??
    countRefusal('columns', n, columns.length + 3, 400) ??
    columns.map((column, j) => vectorRefusal(`columns[${j}]`, column, 1, n)).find((check) => check !== null);
  if (refusal) return refusal;
  const design = new Matrix(n, columns.length + 1);
  for (let i = 0; i < n; i++) {
    design.set(i, 0, 1);
    for (const [j, column] of columns.entries()) design.set(i, j + 1, column[i]!);
  }
  const q = new QrDecomposition(design).orthogonalMatrix;
  const projector = Matrix.eye(n).sub(q.mmul(q.transpose()));
  const product = projector.mmul(differenceMatrix(n)).mmul(projector);
  const values = new EigenvalueDecomposition(product, { assumeSymmetric: true }).realEigenvalues;
  const eigenvalues = [...values].sort((a, b) => a - b).slice(columns.length + 1);
  return finiteAnswer({ p: probabilityBelow(d, eigenvalues) });
}

/**
 * Bounds d_L and d_U of the Durbin-Watson test at one-sided level `alpha` for n values and `regressors` besides the
 * intercept: below d_L positively autocorrelated whatever the regressors, above d_U not, between undecided.
 */
export function durbinWatsonBounds(
  n: number,
  regressors: number,
  alpha = 0.05,
): Result<{ lower: number; upper: number }> {
  const refusal =
    countRefusal('n', n, 2, 2000) ??
    countRefusal('regressors', regressors, 1, 100) ??
    optionRefusal('alpha', alpha, 0, 0.5, 'open');
  if (refusal) return refusal;
  if (n < regressors + 4) return notEnough('n', regressors + 4, n);
  const all = Array.from({ length: n - 1 }, (_, j) => 2 - 2 * Math.cos((Math.PI * (j + 1)) / n));
  const lowest = all.slice(0, n - 1 - regressors);
  const highest = all.slice(regressors);
  return finiteAnswer({ lower: quantile(alpha, lowest), upper: quantile(alpha, highest) });
}

function differenceMatrix(n: number): Matrix {
  const a = Matrix.zeros(n, n);
  for (let i = 0; i < n; i++) {
    a.set(i, i, i === 0 || i === n - 1 ? 1 : 2);
    if (i > 0) a.set(i, i - 1, -1);
    if (i < n - 1) a.set(i, i + 1, -1);
  }
  return a;
}

function quantile(p: number, eigenvalues: number[]): number {
  let low = 0;
  let high = 4;
  for (let step = 0; step < 50; step++) {
    const middle = (low + high) / 2;
    if (probabilityBelow(middle, eigenvalues) < p) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/** P(Σ λ_i z_i² / Σ z_i² ≤ x) = P(Σ (λ_i − x) z_i² ≤ 0): ½ − (1/π) ∫ sin θ(u) / (u ρ(u)) du (Imhof, 1961). */
function probabilityBelow(x: number, eigenvalues: number[]): number {
  const weights = eigenvalues.map((value) => value - x);
  const scale = Math.sqrt(weights.reduce((sum, w) => sum + w * w, 0));
  const integrand = (u: number) => {
    let angle = 0;
    let logSize = 0;
    for (const w of weights) {
      angle += Math.atan(w * u);
      logSize += Math.log1p((w * u) ** 2);
    }
    return (Math.sin(angle / 2) / u) * Math.exp(-logSize / 4);
  };
  // u = e^v/scale turns du/u into dv, on which the trapezoidal rule converges faster than any power of the step.
  let sum = 0;
  const step = 1 / 16;
  for (let v = -34; v <= 12; v += step) {
    const u = Math.exp(v) / scale;
    sum += integrand(u) * u;
  }
  return Math.min(1, Math.max(0, 0.5 - (sum * step) / Math.PI));
}
