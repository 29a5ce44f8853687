import { Matrix, QrDecomposition } from 'ml-matrix';
import { collinearityOf } from './collinearity.ts';
import type { Collinearity } from './collinearity.ts';
import { regressionRefusal, scaledDesign } from './design-matrix.ts';
import type { RegressionData, ScaledDesign } from './design-matrix.ts';
import { finiteAnswer } from './input-checks.ts';
import { refuse } from './result.ts';
import type { Refusal } from './result.ts';

/**
 * A fitted line y = intercept + Σ coefficients[j] · x_j. Coefficients and standard errors in the unit of y per unit of
 * their column; `residualSd` has divisor n − parameters; `r2` is about zero where there is no intercept;
 * `unscaledCovariance` C (p×p, by rows): cov(coefficients) = residualSd² C; the leverage of a point x is
 * 1/n + (x − centres)ᵀ C (x − centres) (without the 1/n and with zero centres where there is no intercept).
 */
export type LeastSquaresFit = {
  n: number;
  degreesOfFreedom: number;
  names: string[];
  coefficients: Float64Array;
  intercept: number;
  standardErrors: Float64Array;
  interceptStandardError: number;
  residualSd: number;
  r2: number;
  leverageMax: number;
  conditionNumber: number;
  vif: Float64Array;
  collinearGroups: string[][];
  centres: Float64Array;
  unscaledCovariance: Float64Array;
  fitted: Float64Array;
  residuals: Float64Array;
};

/** A refusal that also names the columns that stand in for one another. */
export type FitRefusal = Refusal & { collinearGroups?: string[][] };

/** Condition number of the scaled columns beyond which coefficients have no trustworthy digit left. */
export const conditionLimit = 1e12;

/**
 * Ordinary least squares by Householder QR on columns centred and scaled to unit length. Collinear columns that can
 * still be solved are named in `collinearGroups`; beyond a condition number of 1e12 the fit is refused: `collinear` with `collinearGroups`, or `ill-conditioned` (`figure`: condition number).
 * Also refuses `not-enough-data` (needs one row more than parameters), `no-spread` (a constant column or y, named in
 * `field`), `wrong-shape`, `non-finite-input`, `out-of-range`.
 * Source: Golub & Van Loan, Matrix Computations, ch. 5; accuracy against NIST StRD in tests/reference.
 */
export function fitLeastSquares(data: RegressionData): ({ ok: true } & LeastSquaresFit) | FitRefusal {
  const refusal = regressionRefusal(data);
  if (refusal) return refusal;
  const design = scaledDesign(data);
  if (!design.ok) return design;
  const qr = new QrDecomposition(design.z);
  const diagnosis = collinearityOf(qr.upperTriangularMatrix, data.names);
  const illConditioned = conditionRefusal(diagnosis);
  if (illConditioned) return illConditioned;
  const scaled = Float64Array.from(qr.solve(Matrix.columnVector(design.y)).getColumn(0));
  const coefficients = scaled.map((value, j) => value / design.lengths[j]!);
  const covariance = unscaledCovariance(diagnosis, design.lengths);
  return finiteAnswer({
    ...judgedFit(data, design, coefficients, scaled, covariance),
    leverageMax: largestLeverage(qr.orthogonalMatrix, data.intercept),
    conditionNumber: diagnosis.conditionNumber,
    vif: diagnosis.vif,
    collinearGroups: diagnosis.groups,
  });
}

/** The fitted line at one point `x` (length p, order of `names`). */
export function predictAt(
  fit: { intercept: number; coefficients: ArrayLike<number> },
  x: ArrayLike<number>,
): number {
  let sum = fit.intercept;
  for (let j = 0; j < fit.coefficients.length; j++) sum += fit.coefficients[j]! * x[j]!;
  return sum;
}

function conditionRefusal(diagnosis: Collinearity): FitRefusal | null {
  const { conditionNumber, groups } = diagnosis;
  if (conditionNumber <= conditionLimit) return null;
  const reason = groups.length > 0 ? 'collinear' : 'ill-conditioned';
  return { ...refuse(reason, { field: 'columns', figure: conditionNumber }), collinearGroups: groups };
}

/** C = D⁻¹ V S⁻² Vᵀ D⁻¹ with D the column lengths, by rows. */
function unscaledCovariance(diagnosis: Collinearity, lengths: Float64Array): Float64Array {
  const p = lengths.length;
  const { rightVectors, singularValues } = diagnosis;
  const covariance = new Float64Array(p * p);
  for (let i = 0; i < p; i++) {
    for (let j = 0; j < p; j++) {
      let sum = 0;
      for (let k = 0; k < p; k++) {
        sum += (rightVectors.get(i, k) / singularValues[k]!) * (rightVectors.get(j, k) / singularValues[k]!);
      }
      covariance[i * p + j] = sum / lengths[i]! / lengths[j]!;
    }
  }
  return covariance;
}

function judgedFit(
  data: RegressionData,
  design: ScaledDesign,
  coefficients: Float64Array,
  scaled: Float64Array,
  covariance: Float64Array,
) {
  const n = data.y.length;
  const p = coefficients.length;
  const degreesOfFreedom = n - p - (data.intercept ? 1 : 0);
  const residuals = new Float64Array(n);
  const fitted = new Float64Array(n);
  let squares = 0;
  for (let i = 0; i < n; i++) {
    let explained = 0;
    for (let j = 0; j < p; j++) explained += design.z.get(i, j) * scaled[j]!;
    residuals[i] = design.y[i]! - explained;
    fitted[i] = design.yCentre + explained;
    squares += residuals[i]! * residuals[i]!;
  }
  const residualSd = Math.sqrt(squares / degreesOfFreedom);
  const shift = predictAt({ intercept: 0, coefficients }, design.centres);
  return {
    n,
    degreesOfFreedom,
    names: [...data.names],
    coefficients,
    intercept: data.intercept ? design.yCentre - shift : 0,
    standardErrors: coefficients.map((_, j) => residualSd * Math.sqrt(covariance[j * p + j]!)),
    interceptStandardError: data.intercept
      ? residualSd * Math.sqrt(1 / n + quadraticForm(covariance, design.centres))
      : 0,
    residualSd,
    r2: 1 - squares / design.ySquares,
    centres: design.centres,
    unscaledCovariance: covariance,
    fitted,
    residuals,
  };
}

/** xᵀ C x for a p×p matrix by rows. */
export function quadraticForm(matrix: Float64Array, x: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < x.length; i++) {
    for (let j = 0; j < x.length; j++) sum += x[i]! * matrix[i * x.length + j]! * x[j]!;
  }
  return sum;
}

/** Largest diagonal element of the hat matrix: squared row length of Q, plus 1/n for the intercept. */
function largestLeverage(q: Matrix, intercept: boolean): number {
  let largest = 0;
  for (let i = 0; i < q.rows; i++) {
    let leverage = intercept ? 1 / q.rows : 0;
    for (let j = 0; j < q.columns; j++) leverage += q.get(i, j) ** 2;
    largest = Math.max(largest, leverage);
  }
  return Math.min(1, largest);
}
