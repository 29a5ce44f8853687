import { Matrix, SingularValueDecomposition } from 'ml-matrix';

/**
 * Collinearity of scaled columns. `vif`: variance inflation factor of each; `groups`: names of columns that stand in
 * for one another; `conditionNumber`: largest over smallest singular value of the scaled columns.
 */
export type Collinearity = {
  singularValues: Float64Array;
  rightVectors: Matrix;
  leftVectors: Matrix;
  conditionNumber: number;
  vif: Float64Array;
  groups: string[][];
};

/** A column whose variance is inflated beyond this by the others is named in a collinear group (common practice). */
export const vifLimit = 10;

const linkedPartialCorrelation = 0.5;

/**
 * Diagnoses a p×p triangular factor R of columns of unit length (ZᵀZ = RᵀR). VIFs are the diagonal of (RᵀR)⁻¹
 * (Belsley, Kuh & Welsch, Regression Diagnostics, 1980, ch. 3; on centred columns after Marquardt 1970). Columns with
 * VIF > 10 form groups along partial correlations above ½ in size, which (RᵀR)⁻¹ shows too and which keeps two separate
 * dependencies apart where variance proportions mix them. An exactly dependent set is regularised at 1e−9.
 */
export function collinearityOf(triangular: Matrix, names: string[]): Collinearity {
  const p = names.length;
  const decomposition = new SingularValueDecomposition(triangular, { autoTranspose: true });
  const singularValues = Float64Array.from(decomposition.diagonal);
  const largest = singularValues[0]!;
  const smallest = singularValues[p - 1]!;
  const rightVectors = decomposition.rightSingularVectors;
  const inverse = regularisedInverse(rightVectors, singularValues);
  const vif = Float64Array.from({ length: p }, (_, j) => inverse.get(j, j));
  return {
    singularValues,
    rightVectors,
    leftVectors: decomposition.leftSingularVectors,
    conditionNumber: smallest > 0 ? largest / smallest : Number.MAX_VALUE,
    vif,
    groups: linkedGroups(inverse, names),
  };
}

/** (RᵀR)⁻¹ = V S⁻² Vᵀ with singular values no smaller than 1e−9 of the largest. */
function regularisedInverse(v: Matrix, singularValues: Float64Array): Matrix {
  const p = singularValues.length;
  const floor = 1e-9 * singularValues[0]!;
  const scaled = new Matrix(p, p);
  for (let i = 0; i < p; i++) {
    for (let k = 0; k < p; k++) scaled.set(i, k, v.get(i, k) / Math.max(singularValues[k]!, floor));
  }
  return scaled.mmul(scaled.transpose());
}

function linkedGroups(inverse: Matrix, names: string[]): string[][] {
  const inflated = names.map((_, j) => j).filter((j) => inverse.get(j, j) > vifLimit);
  const unseen = new Set(inflated);
  const groups: string[][] = [];
  for (const start of inflated) {
    if (!unseen.delete(start)) continue;
    const group = [start];
    for (const i of group) {
      for (const j of [...unseen]) {
        const size = Math.sqrt(inverse.get(i, i)) * Math.sqrt(inverse.get(j, j));
        if (Math.abs(inverse.get(i, j)) / size > linkedPartialCorrelation && unseen.delete(j)) group.push(j);
      }
    }
    if (group.length > 1) groups.push(group.sort((a, b) => a - b).map((j) => names[j]!));
  }
  return groups;
}
