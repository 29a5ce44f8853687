import type pg from 'pg';
import type { RegressionModel } from '../../../shared/contracts/models.ts';
import { regressionEstimator } from '../../../shared/numerics/estimator.ts';
import { type Grid, type GridColumn, holdOnGrid } from '../../../shared/numerics/grid.ts';
import { readSeries } from './series.ts';

/** The estimator of a model as its engineer stated it. */
export const estimatorOf = (model: RegressionModel) =>
  regressionEstimator({
    intercept: model.intercept,
    coefficients: model.terms.map((term) => term.coefficient),
    residualSd: model.residualSd,
    holdLimitMs: model.holdLimitMs,
  });

/** The inputs of a model on a grid, in the order of its terms; each is read one hold limit further back. */
export async function readInputs(
  client: pg.ClientBase,
  siteId: number,
  model: RegressionModel,
  grid: Grid,
): Promise<GridColumn[]> {
  const columns: GridColumn[] = [];
  const from = new Date(grid.startMs - model.holdLimitMs);
  const to = new Date(grid.startMs + (grid.n - 1) * grid.stepMs);
  for (const { tagId } of model.terms) {
    const series = await readSeries(client, { siteId, tagId }, from, to);
    columns.push(holdOnGrid(series, grid, model.holdLimitMs));
  }
  return columns;
}
