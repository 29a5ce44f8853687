import type { Grid, GridColumn } from './grid.ts';

/** Estimate on a grid: NaN where there is none; SD of a single error where known, else null; the worst input's quality. */
export interface EstimateColumn {
  value: Float64Array;
  sd: number | null;
  quality: Uint8Array;
}

/**
 * What every model form implements. `lookbackMs`: how far before an instant its inputs reach. `start`: the state before
 * the first step. `run`: estimates on a grid from a state, and the state after it; running two adjoining grids one
 * after the other equals running them at once.
 */
export interface Estimator<State> {
  lookbackMs: number;
  start(): State;
  run(grid: Grid, inputs: readonly GridColumn[], state: State): { estimate: EstimateColumn; state: State };
}

/** A regression in its units: estimate = intercept + Σ coefficient × input. */
export interface RegressionEquation {
  intercept: number;
  coefficients: readonly number[];
  residualSd: number | null;
  holdLimitMs: number;
}

/** Regression keeps no state. An instant where any input is absent or Bad has no estimate. */
export function regressionEstimator(equation: RegressionEquation): Estimator<null> {
  const { intercept, coefficients } = equation;
  return {
    lookbackMs: equation.holdLimitMs,
    start: () => null,
    run(grid, inputs) {
      const value = new Float64Array(grid.n).fill(intercept);
      const quality = new Uint8Array(grid.n);
      for (let j = 0; j < coefficients.length; j++) {
        const column = inputs[j]!;
        const coefficient = coefficients[j]!;
        for (let i = 0; i < grid.n; i++) {
          value[i]! += coefficient * column.value[i]!;
          if (column.quality[i]! > quality[i]!) quality[i] = column.quality[i]!;
        }
      }
      return { estimate: { value, sd: equation.residualSd, quality }, state: null };
    },
  };
}
