import { Matrix } from 'ml-matrix';
import { meanOf } from './descriptive.ts';
import { vectorRefusal } from './input-checks.ts';
import { notEnough, refuse, wrongShape } from './result.ts';
import type { Refusal } from './result.ts';

/** Data of a regression: one column of length n for each input, its names, the reference y, with or without intercept. */
export type RegressionData = {
  columns: ArrayLike<number>[];
  names: string[];
  y: ArrayLike<number>;
  intercept: boolean;
};

/**
 * Columns centred (with an intercept only) and scaled to unit length: `z` n×p. x = centre + length · z, so that a
 * coefficient of z divided by `lengths` is one of x.
 */
export type ScaledDesign = {
  z: Matrix;
  centres: Float64Array;
  lengths: Float64Array;
  y: Float64Array;
  yCentre: number;
  ySquares: number;
};

/** Below this share of its own size, a column's spread is rounding error: the column counts as constant. */
const spreadFloor = 1e-13;

/** Checks columns, names and y: shapes that belong together, finite numbers, at least one row. Null when sound. */
export function columnsRefusal(data: Omit<RegressionData, 'intercept'>): Refusal | null {
  const { columns, names, y } = data;
  if (!Array.isArray(columns) || columns.length === 0) return wrongShape('columns');
  if (!Array.isArray(names) || names.length !== columns.length) {
    return wrongShape('names', columns.length, names?.length);
  }
  const refusal = vectorRefusal('y', y, 1);
  if (refusal) return refusal;
  for (const [j, column] of columns.entries()) {
    const columnRefusal = vectorRefusal(String(names[j]), column, 1, y.length);
    if (columnRefusal) return columnRefusal;
  }
  return null;
}

/** As {@link columnsRefusal}, and one row more than there are parameters. */
export function regressionRefusal(data: RegressionData): Refusal | null {
  const refusal = columnsRefusal(data);
  if (refusal) return refusal;
  const needed = data.columns.length + (data.intercept ? 2 : 1);
  return data.y.length < needed ? notEnough('y', needed, data.y.length) : null;
}

/**
 * Centres and scales checked data. Refuses `no-spread` naming a column (or y) that is constant, or zero throughout
 * where there is no intercept, and `out-of-range` where squares overflow.
 */
export function scaledDesign(data: RegressionData): ({ ok: true } & ScaledDesign) | Refusal {
  const { columns, names, intercept } = data;
  const n = data.y.length;
  const z = new Matrix(n, columns.length);
  const centres = new Float64Array(columns.length);
  const lengths = new Float64Array(columns.length);
  for (const [j, column] of columns.entries()) {
    const scaled = centredVector(column, intercept);
    if (!Number.isFinite(scaled.length)) return refuse('out-of-range', { field: names[j] });
    if (scaled.isConstant) return refuse('no-spread', { field: names[j] });
    centres[j] = scaled.centre;
    lengths[j] = scaled.length;
    for (let i = 0; i < n; i++) z.set(i, j, scaled.values[i]! / scaled.length);
  }
  const y = centredVector(data.y, intercept);
  if (!Number.isFinite(y.length)) return refuse('out-of-range', { field: 'y' });
  if (y.isConstant) return refuse('no-spread', { field: 'y' });
  return { ok: true, z, centres, lengths, y: y.values, yCentre: y.centre, ySquares: y.length * y.length };
}

function centredVector(values: ArrayLike<number>, centred: boolean) {
  const centre = centred ? meanOf(values) : 0;
  const shifted = Float64Array.from(values, (value) => value - centre);
  let squares = 0;
  for (const value of shifted) squares += value * value;
  const length = Math.sqrt(squares);
  const isConstant = !(length > spreadFloor * Math.abs(centre) * Math.sqrt(values.length));
  return { values: shifted, centre, length, isConstant };
}
