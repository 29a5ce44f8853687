import type { EstimateSeries } from '../../../shared/numerics/pairing.ts';
import { bandAround } from '../../../shared/rules/band.ts';

const mostBuckets = 1000;

/**
 * Points for a chart: all of them while there are few, else the lowest and the highest of each of a thousand buckets in
 * their order, so that no peak is lost. A gap longer than five times the usual step is drawn as one.
 */
export function chartOf(series: EstimateSeries, sd: number | null) {
  const kept = keep(series);
  const step = usualStep(series.at);
  const at: number[] = [];
  const value: (number | null)[] = [];
  for (const [position, index] of kept.entries()) {
    const before = position === 0 ? index : kept[position - 1]!;
    const longest = Math.max(5 * step, 3 * ((series.at.at(-1)! - series.at[0]!) / Math.max(1, kept.length)));
    if (series.at[index]! - series.at[before]! > longest) {
      at.push(series.at[before]! + step);
      value.push(null);
    }
    at.push(series.at[index]!);
    value.push(series.value[index]!);
  }
  return { at, value, ...bandAround(value, sd) };
}

function keep(series: EstimateSeries): number[] {
  const n = series.at.length;
  if (n <= 2 * mostBuckets) return Array.from({ length: n }, (_, i) => i);
  const kept: number[] = [];
  for (let bucket = 0; bucket < mostBuckets; bucket++) {
    const from = Math.floor((bucket * n) / mostBuckets);
    const to = Math.floor(((bucket + 1) * n) / mostBuckets);
    let lowest = from;
    let highest = from;
    for (let i = from + 1; i < to; i++) {
      if (series.value[i]! < series.value[lowest]!) lowest = i;
      if (series.value[i]! > series.value[highest]!) highest = i;
    }
    kept.push(Math.min(lowest, highest));
    if (lowest !== highest) kept.push(Math.max(lowest, highest));
  }
  return kept;
}

function usualStep(at: Float64Array): number {
  return at.length < 2 ? 1 : (at[Math.min(at.length - 1, 100)]! - at[0]!) / Math.min(at.length - 1, 100);
}
