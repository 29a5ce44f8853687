import { optionRefusal } from './input-checks.ts';
import { nonFinite, refuse, wrongShape } from './result.ts';
import type { Refusal, Result } from './result.ts';

/** Readings of the estimate: `at` UTC ms ascending, `value` and `sd` in its unit, `quality` 0 Good, 1 Uncertain, 2 Bad. */
export type EstimateSeries = {
  at: Float64Array;
  value: Float64Array;
  sd?: Float64Array;
  quality: Uint8Array;
};

/** The estimate at an instant: its SD where every reading used carries one, the spread over the window, readings used. */
export type PairedEstimate = { estimate: number; sd: number | null; spread: number; readings: number };

/** Longest gap bridged between two Good readings, and full width of the averaging window (0: no averaging), in ms. */
export type PairingOptions = { holdLimitMs: number; windowMs: number };

/**
 * The estimate at `atMs`, to be set against a sample taken then (transport delay already subtracted).
 *
 * The instant must be covered: a Good reading exactly there, or one on each side no further apart than `holdLimitMs`.
 * Without a window the exact reading is used as is, else linear interpolation. With a window the Good readings within
 * ± windowMs/2 are averaged, each weighted with the time it stands for (half the gap to each neighbour, gaps counted
 * up to the hold limit), so that a regular grid gives the plain mean; `spread` is their weighted SD (divisor n − 1 for
 * equal weights, 0 for one reading). SDs are averaged, not divided by √n: errors of neighbouring estimates move
 * together.
 *
 * Refuses `no-estimate` with `field` 'before' or 'after' (no Good reading on that side) or 'gap' (`figure` its
 * length, `needed` the hold limit, ms), `wrong-shape`, `non-finite-input`, `out-of-range`, `not-sorted` (checked
 * around the instant only).
 */
export function pairAt(
  series: EstimateSeries,
  atMs: number,
  options: PairingOptions,
): Result<PairedEstimate> {
  const refusal = inputRefusal(series, atMs, options);
  if (refusal) return refusal;
  const after = firstGoodFrom(series, firstNotBefore(series.at, atMs));
  if (after < series.at.length && series.at[after] === atMs)
    return answerAt(series, after, after, atMs, options);
  const before = lastGoodFrom(series, firstNotBefore(series.at, atMs) - 1);
  if (before < 0) return refuse('no-estimate', { field: 'before' });
  if (after >= series.at.length) return refuse('no-estimate', { field: 'after' });
  const gap = series.at[after]! - series.at[before]!;
  if (!(gap > 0)) return refuse('not-sorted', { field: 'at' });
  if (gap > options.holdLimitMs) {
    return refuse('no-estimate', { field: 'gap', figure: gap, needed: options.holdLimitMs });
  }
  return answerAt(series, before, after, atMs, options);
}

function inputRefusal(series: EstimateSeries, atMs: number, options: PairingOptions): Refusal | null {
  const { at, value, sd, quality } = series;
  if (!(at instanceof Float64Array)) return wrongShape('at');
  if (value?.length !== at.length) return wrongShape('value', at.length, value?.length);
  if (quality?.length !== at.length) return wrongShape('quality', at.length, quality?.length);
  if (sd && sd.length !== at.length) return wrongShape('sd', at.length, sd.length);
  if (!Number.isFinite(atMs)) return nonFinite('atMs');
  return (
    optionRefusal('holdLimitMs', options.holdLimitMs, 0, Number.MAX_VALUE) ??
    optionRefusal('windowMs', options.windowMs, 0, Number.MAX_VALUE)
  );
}

function answerAt(
  series: EstimateSeries,
  before: number,
  after: number,
  atMs: number,
  options: PairingOptions,
): Result<PairedEstimate> {
  const half = options.windowMs / 2;
  const end = firstNotBefore(series.at, atMs + half);
  let last = end;
  while (last < series.at.length && series.at[last] === atMs + half) last++;
  const inWindow =
    half > 0 ? windowAverage(series, firstNotBefore(series.at, atMs - half), last, options) : null;
  const paired = inWindow ?? interpolated(series, before, after, atMs);
  if (!Number.isFinite(paired.estimate) || !Number.isFinite(paired.spread)) {
    return refuse('out-of-range', { field: 'value' });
  }
  return { ok: true, ...paired };
}

function interpolated(series: EstimateSeries, before: number, after: number, atMs: number): PairedEstimate {
  const { at, value, sd } = series;
  if (before === after) return { estimate: value[before]!, sd: sdAt(sd, before), spread: 0, readings: 1 };
  const share = (atMs - at[before]!) / (at[after]! - at[before]!);
  const sdBefore = sdAt(sd, before);
  const sdAfter = sdAt(sd, after);
  return {
    estimate: value[before]! + share * (value[after]! - value[before]!),
    sd: sdBefore === null || sdAfter === null ? null : sdBefore + share * (sdAfter - sdBefore),
    spread: 0,
    readings: 2,
  };
}

/** Time-weighted mean of the Good readings with index in [from, to), or null when there is none. */
function windowAverage(
  series: EstimateSeries,
  from: number,
  to: number,
  options: PairingOptions,
): PairedEstimate | null {
  const { value, sd } = series;
  let weight = 0;
  let weightSquared = 0;
  let mean = 0;
  let squares = 0;
  let readings = 0;
  let sdSum: number | null = 0;
  for (let i = firstGoodFrom(series, from); i < to; i = firstGoodFrom(series, i + 1)) {
    const share = timeStoodFor(series, i, options.holdLimitMs);
    const step = value[i]! - mean;
    weight += share;
    weightSquared += share * share;
    mean += (share / weight) * step;
    squares += share * step * (value[i]! - mean);
    const own = sdAt(sd, i);
    sdSum = own === null || sdSum === null ? null : sdSum + share * own;
    readings++;
  }
  if (readings === 0) return null;
  const freedom = weight - weightSquared / weight;
  const spread = readings > 1 && freedom > 0 ? Math.sqrt(Math.max(0, squares) / freedom) : 0;
  return { estimate: mean, sd: sdSum === null ? null : sdSum / weight, spread, readings };
}

/** Half the gap to each Good neighbour, each gap counted up to the hold limit; at an end of the series the other side's twice. */
function timeStoodFor(series: EstimateSeries, i: number, holdLimitMs: number): number {
  const { at } = series;
  const previous = lastGoodFrom(series, i - 1);
  const next = firstGoodFrom(series, i + 1);
  const back = previous >= 0 ? Math.min(at[i]! - at[previous]!, holdLimitMs) : null;
  const ahead = next < at.length ? Math.min(at[next]! - at[i]!, holdLimitMs) : null;
  const whole = (back ?? ahead ?? 1) + (ahead ?? back ?? 1);
  return whole > 0 ? whole : 1;
}

/** Is a reading Good and its value finite? */
export function isGood(series: EstimateSeries, i: number): boolean {
  return series.quality[i] === 0 && Number.isFinite(series.value[i]);
}

function firstGoodFrom(series: EstimateSeries, from: number): number {
  let i = from;
  while (i < series.at.length && !isGood(series, i)) i++;
  return i;
}

function lastGoodFrom(series: EstimateSeries, from: number): number {
  let i = from;
  while (i >= 0 && !isGood(series, i)) i--;
  return i;
}

function sdAt(sd: Float64Array | undefined, i: number): number | null {
  const value = sd?.[i];
  return value !== undefined && Number.isFinite(value) && value >= 0 ? value : null;
}

/** Index of the first instant that is not before `atMs` (binary search), `at.length` when all are before. */
export function firstNotBefore(at: Float64Array, atMs: number): number {
  let low = 0;
  let high = at.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (at[middle]! < atMs) low = middle + 1;
    else high = middle;
  }
  return low;
}
