import { finiteAnswer, optionRefusal } from './input-checks.ts';
import { type EstimateSeries, firstNotBefore, isGood } from './pairing.ts';
import { nonFinite, refuse, wrongShape } from './result.ts';
import type { Result } from './result.ts';

/**
 * Mean of the estimate over a span: its SD where every reading used carries one, the spread of the estimate over the
 * span, the share of the span with estimates (0 to 1) and the readings used.
 */
export type CompositeEstimate = {
  estimate: number;
  sd: number | null;
  spread: number;
  coverage: number;
  readings: number;
};

/** Least share of the span of a composite that must have estimates. */
export const fewestCovered = 0.9;

/**
 * Time average of the estimate over [fromMs, toMs], to be set against a sample that was gathered over that span
 * (transport delay already subtracted from both ends).
 *
 * Between two Good readings no further apart than `holdLimitMs` the estimate runs straight from one to the other, as in
 * `pairAt`; a longer gap is not covered. The mean is that of the covered parts, each instant weighing the same; its SD
 * is the mean of the SDs, not divided by √n, since errors of neighbouring estimates move together. `spread` is the SD of
 * the estimate over the covered time: how much it moved, not how sure it is.
 *
 * Refuses `no-estimate` with field 'coverage' (`figure` the share covered, `needed` 0.9), `out-of-range` for an empty
 * span, `wrong-shape` and `non-finite-input`.
 */
export function compositeOver(
  series: EstimateSeries,
  fromMs: number,
  toMs: number,
  holdLimitMs: number,
): Result<CompositeEstimate> {
  const { at, value, quality } = series;
  if (!(at instanceof Float64Array)) return wrongShape('at');
  if (value?.length !== at.length) return wrongShape('value', at.length, value?.length);
  if (quality?.length !== at.length) return wrongShape('quality', at.length, quality?.length);
  if (series.sd && series.sd.length !== at.length) return wrongShape('sd', at.length, series.sd.length);
  if (!Number.isFinite(fromMs) || !Number.isFinite(toMs)) return nonFinite('span');
  const refusal = optionRefusal('holdLimitMs', holdLimitMs, 0, Number.MAX_VALUE);
  if (refusal) return refusal;
  if (!(toMs > fromMs)) return refuse('out-of-range', { field: 'span', figure: toMs - fromMs });
  const pieces = piecesOf(series, fromMs, toMs, holdLimitMs);
  const covered = pieces.reduce((sum, { duration }) => sum + duration, 0);
  const coverage = covered / (toMs - fromMs);
  if (coverage < fewestCovered) {
    return refuse('no-estimate', { field: 'coverage', figure: coverage, needed: fewestCovered });
  }
  return finiteAnswer({ coverage, ...average(pieces, covered) });
}

/** A straight piece of the estimate inside the span; SDs null where its readings carry none. */
interface Piece {
  duration: number;
  start: number;
  end: number;
  sd: number | null;
}

function piecesOf(series: EstimateSeries, fromMs: number, toMs: number, holdLimitMs: number): Piece[] {
  const { at } = series;
  const pieces: Piece[] = [];
  let before = firstNotBefore(at, fromMs) - 1;
  while (before >= 0 && !isGood(series, before)) before--;
  for (let i = before + 1; i < at.length; i++) {
    if (!isGood(series, i)) continue;
    const piece = before < 0 ? null : pieceBetween(series, before, i, fromMs, toMs, holdLimitMs);
    if (piece) pieces.push(piece);
    if (at[i]! >= toMs) break;
    before = i;
  }
  return pieces;
}

function pieceBetween(
  { at, value, sd }: EstimateSeries,
  before: number,
  after: number,
  fromMs: number,
  toMs: number,
  holdLimitMs: number,
): Piece | null {
  const gap = at[after]! - at[before]!;
  const from = Math.max(fromMs, at[before]!);
  const to = Math.min(toMs, at[after]!);
  if (!(gap > 0) || gap > holdLimitMs || !(to > from)) return null;
  const along = (values: Float64Array, ms: number) =>
    values[before]! + ((ms - at[before]!) / gap) * (values[after]! - values[before]!);
  const known = sd && sd[before]! >= 0 && sd[after]! >= 0;
  return {
    duration: to - from,
    start: along(value, from),
    end: along(value, to),
    sd: known ? (along(sd, from) + along(sd, to)) / 2 : null,
  };
}

function average(pieces: readonly Piece[], covered: number): Omit<CompositeEstimate, 'coverage'> {
  let estimate = 0;
  let sd: number | null = 0;
  for (const piece of pieces) {
    const share = piece.duration / covered;
    estimate += share * ((piece.start + piece.end) / 2);
    sd = sd === null || piece.sd === null ? null : sd + share * piece.sd;
  }
  let variance = 0;
  for (const { duration, start, end } of pieces) {
    const first = start - estimate;
    const last = end - estimate;
    variance += ((duration / covered) * (first * first + first * last + last * last)) / 3;
  }
  return { estimate, sd, spread: Math.sqrt(variance), readings: pieces.length + 1 };
}
