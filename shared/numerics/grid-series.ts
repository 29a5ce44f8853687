import { attemptSeries, giveUp } from './attempt.ts';
import type { GridSeries } from './kalman.ts';
import type { Result } from './result.ts';

/**
 * Packs tags on one grid of N instants for the filters: `inputs` (p) and `outputs` (m) of N values each, NaN where nothing
 * stands for them. A missing output stays missing; a missing input keeps its last value (its first one before that), since
 * a model can't run without inputs: `heldInputs` marks the instants where that was so, and the caller flags them.
 * Refuses `wrong-shape` for lengths that differ, `no-estimate` for an input without a single value.
 */
export function gridSeries(
  inputs: Float64Array[],
  outputs: Float64Array[],
): Result<GridSeries & { heldInputs: Uint8Array }> {
  return attemptSeries(() => {
    if (!Array.isArray(inputs)) return giveUp('wrong-shape', { field: 'inputs' });
    if (!Array.isArray(outputs) || outputs.length === 0) return giveUp('wrong-shape', { field: 'outputs' });
    const N = outputs[0]?.length ?? 0;
    const check = (column: unknown, field: string) => {
      if (!(column instanceof Float64Array)) giveUp('wrong-shape', { field });
      else if (column.length !== N) giveUp('wrong-shape', { field, needed: N, got: column.length });
    };
    inputs.forEach((column, j) => check(column, `inputs[${j}]`));
    outputs.forEach((column, j) => check(column, `outputs[${j}]`));
    const y = new Float64Array(N * outputs.length);
    outputs.forEach((column, j) => column.forEach((value, k) => (y[k * outputs.length + j] = value)));
    const u = new Float64Array(N * inputs.length);
    const heldInputs = new Uint8Array(N);
    inputs.forEach((column, j) => {
      let last = column.find((value) => !Number.isNaN(value));
      if (last === undefined) return giveUp('no-estimate', { field: `inputs[${j}]` });
      for (let k = 0; k < N; k++) {
        const value = column[k]!;
        if (Number.isNaN(value)) heldInputs[k] = 1;
        else last = value;
        u[k * inputs.length + j] = last;
      }
    });
    return { u, y, heldInputs };
  });
}
