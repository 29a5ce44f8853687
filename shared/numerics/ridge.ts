import { Matrix, QrDecomposition } from 'ml-matrix';
import { collinearityOf } from './collinearity.ts';
import type { RegressionData } from './design-matrix.ts';
import { regressionRefusal, scaledDesign } from './design-matrix.ts';
import { finiteAnswer, optionRefusal } from './input-checks.ts';
import { predictAt } from './regression.ts';
import { refuse } from './result.ts';
import type { Result } from './result.ts';

/** A ridge fit y = intercept + Σ coefficients[j] · x_j; `effectiveParameters` Σ s²/(s² + penalty/n), without the intercept. */
export type RidgeFit = {
  n: number;
  names: string[];
  coefficients: Float64Array;
  intercept: number;
  effectiveParameters: number;
  residualSd: number;
  r2: number;
  conditionNumber: number;
  collinearGroups: string[][];
};

/**
 * Ridge regression (Hoerl & Kennard, Technometrics 12, 1970) by singular values. `penalty` ≥ 0 applies to columns
 * centred and scaled to a standard deviation of one with divisor n, the convention of R's `lm.ridge`; y in its own
 * unit; the intercept is not penalised. `residualSd` has divisor n − effective parameters − intercept.
 * Refuses as `fitLeastSquares`; `ill-conditioned` only where the penalty is zero and the columns are dependent.
 */
export function fitRidge(data: RegressionData, penalty: number): Result<RidgeFit> {
  const refusal = optionRefusal('penalty', penalty, 0, Number.MAX_VALUE) ?? regressionRefusal(data);
  if (refusal) return refusal;
  const design = scaledDesign(data);
  if (!design.ok) return design;
  const n = data.y.length;
  const qr = new QrDecomposition(design.z);
  const { leftVectors, rightVectors, singularValues, conditionNumber, groups } = collinearityOf(
    qr.upperTriangularMatrix,
    data.names,
  );
  if (penalty === 0 && conditionNumber > 1e12) {
    return refuse('ill-conditioned', { field: 'penalty', figure: conditionNumber });
  }
  const turned = leftVectors
    .transpose()
    .mmul(qr.orthogonalMatrix.transpose().mmul(Matrix.columnVector(design.y)));
  let effectiveParameters = 0;
  for (const [k, s] of singularValues.entries()) {
    turned.set(k, 0, (turned.get(k, 0) * s) / (s * s + penalty / n));
    effectiveParameters += (s * s) / (s * s + penalty / n);
  }
  const scaled = rightVectors.mmul(turned);
  const rest = Matrix.columnVector(design.y).sub(design.z.mmul(scaled)).getColumn(0);
  const squares = rest.reduce((sum, value) => sum + value * value, 0);
  const coefficients = Float64Array.from(scaled.getColumn(0), (value, j) => value / design.lengths[j]!);
  const shift = predictAt({ intercept: 0, coefficients }, design.centres);
  return finiteAnswer({
    n,
    names: [...data.names],
    coefficients,
    intercept: data.intercept ? design.yCentre - shift : 0,
    effectiveParameters,
    residualSd: Math.sqrt(squares / (n - effectiveParameters - (data.intercept ? 1 : 0))),
    r2: 1 - squares / design.ySquares,
    conditionNumber,
    collinearGroups: groups,
  });
}
