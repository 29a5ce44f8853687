/** Readings of one tag: `at` UTC ms ascending, `value` in its unit, `quality` 0 Good, 1 Uncertain, 2 Bad. */
export interface Series {
  at: Float64Array;
  value: Float64Array;
  quality: Uint8Array;
}

/** Equally spaced instants: startMs, startMs + stepMs, …, n of them. */
export interface Grid {
  startMs: number;
  stepMs: number;
  n: number;
}

/** One input on a grid; where nothing stands for it the value is NaN and the quality Bad. */
export interface GridColumn {
  value: Float64Array;
  quality: Uint8Array;
}

const bad = 2;

/**
 * The grid whose instants are multiples of the step since 1970 within [fromMs, toMs]: the same instants whichever
 * period is computed, so that a part computed later falls on the same points.
 */
export function gridWithin(fromMs: number, toMs: number, stepMs: number): Grid {
  const startMs = Math.ceil(fromMs / stepMs) * stepMs;
  return { startMs, stepMs, n: Math.max(0, Math.floor((toMs - startMs) / stepMs) + 1) };
}

/**
 * Puts readings onto a grid. Each instant takes the latest reading at or before it, however it came in, if that is no
 * older than `holdLimitMs`; a Bad reading stands for nothing and does not let an older Good one through. A reading
 * that arrives late is used where it belongs in time once the grid is computed again.
 */
export function holdOnGrid(series: Series, grid: Grid, holdLimitMs: number): GridColumn {
  const value = new Float64Array(grid.n).fill(NaN);
  const quality = new Uint8Array(grid.n).fill(bad);
  let next = 0;
  for (let i = 0; i < grid.n; i++) {
    const at = grid.startMs + i * grid.stepMs;
    while (next < series.at.length && series.at[next]! <= at) next++;
    const last = next - 1;
    if (last < 0 || at - series.at[last]! > holdLimitMs || series.quality[last] === bad) continue;
    value[i] = series.value[last]!;
    quality[i] = series.quality[last]!;
  }
  return { value, quality };
}
