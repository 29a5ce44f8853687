/** One error of a strip, as a multiple of the allowed error: 1 is the allowed error high, −1 as much low. */
export interface StripError {
  ratio: number;
  /** A recalibration lies between the error before and this one. */
  recalibratedBefore?: boolean;
}

export interface StripMark {
  x: number;
  y: number;
  /** Beyond twice the allowed error: a caret at the edge, pointing out. */
  beyond: 'above' | 'below' | null;
}

export interface StripLayout {
  marks: StripMark[];
  /** Stretches between recalibrations, over which the allowed error is drawn. */
  stretches: { from: number; to: number }[];
  y: (ratio: number) => number;
}

export const STRIP_COUNT = 20;
const LIMIT = 2;
const EDGE = 4;
const GAP_SLOTS = 1;

/**
 * Places the last 20 errors on a strip: a slot each, the newest at the right, a slot left out at a recalibration, and
 * y from −2 to +2 allowed errors in every strip so that rows compare.
 */
export function layStrip(errors: readonly StripError[], width: number, height: number): StripLayout {
  const last = errors.slice(-STRIP_COUNT);
  const gaps = last.map((error, index) => index > 0 && error.recalibratedBefore === true);
  const slots = STRIP_COUNT + gaps.filter(Boolean).length * GAP_SLOTS;
  const slot = width / slots;
  const y = (ratio: number) => height / 2 - (ratio / LIMIT) * (height / 2 - EDGE);

  const stretches: { from: number; to: number }[] = [];
  const marks: StripMark[] = [];
  let right = width;
  let end = width;
  for (let index = last.length - 1; index >= 0; index -= 1) {
    const { ratio } = last[index]!;
    const beyond = ratio > LIMIT ? 'above' : ratio < -LIMIT ? 'below' : null;
    marks.unshift({ x: right - slot / 2, y: y(Math.max(-LIMIT, Math.min(LIMIT, ratio))), beyond });
    right -= slot;
    if (gaps[index] === true) {
      stretches.unshift({ from: right, to: end });
      right -= slot * GAP_SLOTS;
      end = right;
    }
  }
  stretches.unshift({ from: 0, to: end });
  return { marks, stretches, y };
}
