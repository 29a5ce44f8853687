import { cusumDesignRefusal, cusumStart, cusumStep } from './control-charts.ts';
import type { CusumDesign, CusumState } from './control-charts.ts';
import { vectorRefusal } from './input-checks.ts';
import { refuse } from './result.ts';
import type { Result } from './result.ts';

/**
 * Where the bias CUSUM of one soft sensor stands. `signal`: a sum has exceeded h and is not confirmed; `confirmed`: it
 * was still beyond h after two further counted samples.
 */
export type DriftStatus = 'in-control' | 'signal' | 'confirmed';

/**
 * State carried from one counted sample to the next. `crossedAt`: index of the sample with which the sum last rose above
 * h and that awaits confirmation; `side` and `onset` (index of the error with which the sum left zero) of the standing
 * signal; totals of the errors since each sum left zero.
 */
export type DriftState = {
  cusum: CusumState;
  status: DriftStatus;
  side: 'high' | 'low' | null;
  onset: number | null;
  crossedAt: number | null;
  highTotal: number;
  lowTotal: number;
};

/** Further counted samples after which a sum still beyond h confirms its signal. */
export const samplesToConfirm = 2;

/**
 * What one counted sample changed: `signalled`, `confirmed` or `cleared` true on that sample only; the sums in SDs, and
 * of a standing signal the mean error since onset with its count.
 */
export type DriftPoint = {
  status: DriftStatus;
  side: 'high' | 'low' | null;
  onset: number | null;
  high: number;
  low: number;
  meanSinceOnset: number | null;
  countSinceOnset: number;
  signalled: boolean;
  confirmed: boolean;
  cleared: boolean;
};

/** A bias CUSUM at the start, or after an event or a decision that restarts its sums: next counted error has index `n`. */
export function driftStart(n = 0): DriftState {
  return {
    cusum: cusumStart(n),
    status: 'in-control',
    side: null,
    onset: null,
    crossedAt: null,
    highTotal: 0,
    lowTotal: 0,
  };
}

/**
 * Takes one counted error. Target zero (never the recent mean), `design.sd` the overall SD of at least 30 held-out
 * errors, k = 0.5, h from `designCusum`. A signal is cleared when both sums are below h/2; the design is not checked here.
 */
export function driftStep(
  state: DriftState,
  error: number,
  design: CusumDesign,
): { state: DriftState; point: DriftPoint } {
  const before = state.cusum;
  const { state: cusum, point } = cusumStep(before, error, design);
  const highTotal = cusum.high > 0 ? state.highTotal + error : 0;
  const lowTotal = cusum.low > 0 ? state.lowTotal + error : 0;
  const standing = point.signal ? beyond(state, cusum, point.signal) : within(state, cusum, design.h);
  const { status, side, onset, crossedAt } = standing;
  const next: DriftState = { cusum, status, side, onset, crossedAt, highTotal, lowTotal };
  const since = next.side === 'high' ? cusum.highSince : next.side === 'low' ? cusum.lowSince : null;
  const count = since === null ? 0 : cusum.n - since;
  const total = next.side === 'high' ? highTotal : lowTotal;
  return {
    state: next,
    point: {
      status: next.status,
      side: next.side,
      onset: next.onset,
      high: point.high,
      low: point.low,
      meanSinceOnset: count > 0 ? total / count : null,
      countSinceOnset: count,
      signalled: next.status !== 'in-control' && (state.status === 'in-control' || state.side !== next.side),
      confirmed: next.status === 'confirmed' && (state.status !== 'confirmed' || state.side !== next.side),
      cleared: next.status === 'in-control' && state.status !== 'in-control',
    },
  };
}

type Standing = Pick<DriftState, 'status' | 'side' | 'onset' | 'crossedAt'>;

const inControl: Standing = { status: 'in-control', side: null, onset: null, crossedAt: null };

/** A sum beyond h: a new signal, one that waits for its confirmation, or one that stands. */
function beyond(state: DriftState, cusum: CusumState, side: 'high' | 'low'): Standing {
  const last = cusum.n - 1;
  const onset = side === 'high' ? cusum.highSince : cusum.lowSince;
  const sameSide = state.side === side;
  const crossedAt = sameSide && state.crossedAt !== null ? state.crossedAt : last;
  const stands = sameSide && state.status === 'confirmed';
  const confirmed = stands || last - crossedAt >= samplesToConfirm;
  return { status: confirmed ? 'confirmed' : 'signal', side, onset, crossedAt };
}

/** Neither sum beyond h: a standing signal stays until both are below h/2; its crossing lapses at the second sample. */
function within(state: DriftState, cusum: CusumState, h: number): Standing {
  if (state.status === 'in-control' || (cusum.high < h / 2 && cusum.low < h / 2)) return inControl;
  const waited = state.crossedAt !== null && cusum.n - 1 - state.crossedAt >= samplesToConfirm;
  const { status, side, onset } = state;
  return { status, side, onset, crossedAt: waited ? null : state.crossedAt };
}

/**
 * Runs the bias CUSUM over counted errors in time order (at least one); `restarts` holds the indices of errors before
 * which an event or decision restarted the sums. Refuses unsound designs and input.
 */
export function driftHistory(
  errors: ArrayLike<number>,
  design: CusumDesign,
  restarts: readonly number[] = [],
): Result<{ points: DriftPoint[]; state: DriftState }> {
  const refusal =
    cusumDesignRefusal(design) ??
    vectorRefusal('errors', errors, 1) ??
    vectorRefusal('restarts', restarts, 0);
  if (refusal) return refusal;
  const restarted = new Set(restarts);
  const points: DriftPoint[] = [];
  let state = driftStart();
  for (let i = 0; i < errors.length; i++) {
    if (restarted.has(i)) state = driftStart(i);
    const step = driftStep(state, errors[i]!, design);
    state = step.state;
    points.push(step.point);
    if (!Number.isFinite(state.cusum.high + state.cusum.low + state.highTotal - state.lowTotal)) {
      return refuse('out-of-range', { field: 'errors', figure: errors[i] });
    }
  }
  return { ok: true, points, state };
}
