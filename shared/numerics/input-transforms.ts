import { optionRefusal } from './input-checks.ts';
import { pairAt } from './pairing.ts';
import type { EstimateSeries } from './pairing.ts';
import { refuse, wrongShape } from './result.ts';
import type { Refusal, Result } from './result.ts';

/** Readings of an input: `at` UTC ms ascending, `value`, `quality` 0 Good, 1 Uncertain, 2 Bad. */
export type InputSeries = Pick<EstimateSeries, 'at' | 'value' | 'quality'>;

const bad = 2;

/**
 * The input as it acts `lagMs` ≥ 0 later: the same readings at later instants. Refuses `out-of-range`, `wrong-shape`.
 */
export function laggedInput(series: InputSeries, lagMs: number): Result<InputSeries> {
  const refusal = seriesRefusal(series) ?? optionRefusal('lagMs', lagMs, 0, 1e15);
  if (refusal) return refusal;
  return sound(
    series.at.map((at) => at + lagMs),
    Float64Array.from(series.value),
    Uint8Array.from(series.quality),
  );
}

/**
 * First-order filter of time constant `timeConstantMs` > 0 over readings at any spacing: between readings the input is
 * held, y ← y + (1 − e^(−Δt/τ))(x_previous − y), as a lag in the plant does; it starts at the first usable reading. A
 * reading that is Bad, or a gap longer than `holdLimitMs`, makes Bad readings (value: the last y) until a usable reading
 * starts the filter again. Uncertain inputs give Uncertain outputs. Refuses `out-of-range`, `wrong-shape`.
 */
export function filteredInput(
  series: InputSeries,
  options: { timeConstantMs: number; holdLimitMs: number },
): Result<InputSeries> {
  const refusal =
    seriesRefusal(series) ??
    optionRefusal('timeConstantMs', options.timeConstantMs, Number.MIN_VALUE, 1e15) ??
    optionRefusal('holdLimitMs', options.holdLimitMs, 0, 1e15);
  if (refusal) return refusal;
  const n = series.at.length;
  const value = new Float64Array(n);
  const quality = new Uint8Array(n);
  let state = 0;
  let previous = -1;
  for (let i = 0; i < n; i++) {
    const usable = isUsable(series, i);
    const gap = previous < 0 ? Infinity : series.at[i]! - series.at[previous]!;
    if (!usable) {
      if (previous >= 0 && gap > options.holdLimitMs) previous = -1;
      value[i] = state;
      quality[i] = bad;
      continue;
    }
    if (gap > options.holdLimitMs) state = series.value[i]!;
    else state += -Math.expm1(-gap / options.timeConstantMs) * (series.value[previous]! - state);
    value[i] = state;
    quality[i] = Math.max(
      series.quality[i]!,
      previous >= 0 && gap <= options.holdLimitMs ? series.quality[previous]! : 0,
    );
    previous = i;
  }
  return sound(series.at, value, quality);
}

/** What is done to the value of an input before it enters a regression. */
export type InputTransform = 'none' | 'log' | 'reciprocal' | 'square' | 'square-root';

const transforms: Record<InputTransform, (value: number) => number> = {
  none: (value) => value,
  log: (value) => Math.log(value),
  reciprocal: (value) => 1 / value,
  square: (value) => value * value,
  'square-root': (value) => Math.sqrt(value),
};

/** One value transformed, or null where the transform is not defined (log of −1, reciprocal of 0). */
export function transformedValue(value: number, transform: InputTransform): number | null {
  const result = transforms[transform](value);
  return Number.isFinite(result) ? result : null;
}

/** Transforms every reading; where that is not defined the reading turns Bad and keeps its raw value. */
export function transformedInput(series: InputSeries, transform: InputTransform): Result<InputSeries> {
  const refusal = seriesRefusal(series);
  if (refusal) return refusal;
  if (!Object.hasOwn(transforms, transform)) return refuse('out-of-range', { field: 'transform' });
  const value = Float64Array.from(series.value);
  const quality = Uint8Array.from(series.quality);
  for (let i = 0; i < value.length; i++) {
    const result = transformedValue(value[i]!, transform);
    if (result === null) quality[i] = bad;
    else value[i] = result;
  }
  return sound(series.at, value, quality);
}

/**
 * Product of two inputs at the instants of the first; the second is interpolated between Good readings closer than
 * `holdLimitMs`. Where it has none there the product is Bad and holds the first input's value.
 */
export function productInput(a: InputSeries, b: InputSeries, holdLimitMs: number): Result<InputSeries> {
  const refusal = seriesRefusal(a) ?? seriesRefusal(b) ?? optionRefusal('holdLimitMs', holdLimitMs, 0, 1e15);
  if (refusal) return refusal;
  const value = Float64Array.from(a.value);
  const quality = Uint8Array.from(a.quality);
  for (let i = 0; i < value.length; i++) {
    const other = pairAt(b, a.at[i]!, { holdLimitMs, windowMs: 0 });
    const product = other.ok ? value[i]! * other.estimate : NaN;
    if (Number.isFinite(product)) value[i] = product;
    else quality[i] = bad;
  }
  return sound(a.at, value, quality);
}

/** A reading without a number is Bad and says 0, so that no NaN goes any further. */
function sound(at: Float64Array, value: Float64Array, quality: Uint8Array): Result<InputSeries> {
  for (let i = 0; i < value.length; i++) {
    if (Number.isFinite(value[i])) continue;
    value[i] = 0;
    quality[i] = bad;
  }
  return { ok: true, at, value, quality };
}

function isUsable(series: InputSeries, i: number): boolean {
  return series.quality[i]! < bad && Number.isFinite(series.value[i]);
}

function seriesRefusal(series: InputSeries): Refusal | null {
  const { at, value, quality } = series;
  if (!(at instanceof Float64Array)) return wrongShape('at');
  if (value?.length !== at.length) return wrongShape('value', at.length, value?.length);
  if (quality?.length !== at.length) return wrongShape('quality', at.length, quality?.length);
  for (let i = 0; i < at.length; i++) {
    if (!Number.isFinite(at[i])) return refuse('non-finite-input', { field: 'at' });
    if (i > 0 && at[i]! < at[i - 1]!) return refuse('not-sorted', { field: 'at' });
  }
  return null;
}
