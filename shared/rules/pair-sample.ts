import { compositeOver } from '../numerics/composite.ts';
import { type EstimateSeries, pairAt } from '../numerics/pairing.ts';
import { steadyStateTest } from '../numerics/steady-state.ts';

/** What pairing needs of a data sheet and its model. */
export interface PairingRule {
  transportDelayMs: number;
  pairingWindowMs: number;
  holdLimitMs: number;
  /** Leave out samples taken while the estimate was moving; off for slow data. */
  steadyStateGate: boolean;
}

/** A reference sample as pairing sees it; `takenMs` null where only its date is known. */
export interface SampleToPair {
  takenMs: number | null;
  /** A composite gathered over this long, ending at `takenMs`. */
  compositeMs?: number | null;
  value: number;
  censored: boolean;
  held: boolean;
}

/** A sample beside the estimate of its moment; error = estimate − reference. `notCounted`: the code of the reason. */
export interface SamplePair {
  estimate: number | null;
  sd: number | null;
  spread: number | null;
  error: number | null;
  notCounted: string | null;
}

/** Readings of the estimate, up to the sample, that the steady-state test looks at, and the fewest it needs. */
export const steadyReadings = 30;
const fewestSteadyReadings = 10;
const bad = 2;

/**
 * Sets a sample beside the estimate at takenAt − transport delay. The pair counts unless a reason is known: a date
 * without a time, no estimate, a censored result, a held one, or an unsteady process. A composite is compared with the
 * average of the estimate over its span; gaps in that are a reason too.
 */
export function pairSample(series: EstimateSeries, sample: SampleToPair, rule: PairingRule): SamplePair {
  const nothing = { estimate: null, sd: null, spread: null, error: null };
  if (sample.takenMs === null) return { ...nothing, notCounted: 'date-without-time' };
  const atMs = sample.takenMs - rule.transportDelayMs;
  if (sample.compositeMs) return pairComposite(series, sample, sample.compositeMs, atMs, rule.holdLimitMs);
  const paired = pairAt(series, atMs, { holdLimitMs: rule.holdLimitMs, windowMs: rule.pairingWindowMs });
  if (!paired.ok) return { ...nothing, notCounted: 'no-estimate' };
  const { estimate, sd, spread } = paired;
  return {
    estimate,
    sd,
    spread,
    error: estimate - sample.value,
    notCounted: whyNotCounted(series, sample, rule, atMs),
  };
}

/**
 * A composite stands beside the time average of the estimate over its span. The steady-state gate does not apply: that
 * the process moved is what a composite averages over. Below 90 % of the span with estimates it does not count.
 */
function pairComposite(
  series: EstimateSeries,
  { value, censored, held }: SampleToPair,
  compositeMs: number,
  endMs: number,
  holdLimitMs: number,
): SamplePair {
  const paired = compositeOver(series, endMs - compositeMs, endMs, holdLimitMs);
  if (!paired.ok) {
    const some = paired.field === 'coverage' && paired.figure! > 0;
    const notCounted = some ? 'composite-gaps' : 'no-estimate';
    return { estimate: null, sd: null, spread: null, error: null, notCounted };
  }
  const { estimate, sd, spread } = paired;
  const notCounted = censored ? 'censored' : held ? 'held' : null;
  return { estimate, sd, spread, error: estimate - value, notCounted };
}

function whyNotCounted(
  series: EstimateSeries,
  sample: SampleToPair,
  rule: PairingRule,
  atMs: number,
): string | null {
  if (sample.censored) return 'censored';
  if (sample.held) return 'held';
  return rule.steadyStateGate && isUnsteady(series, atMs) ? 'unsteady' : null;
}

/** Was the estimate moving when the sample was taken? Ratio of two variances after Cao & Rhinehart 1995. */
function isUnsteady(series: EstimateSeries, atMs: number): boolean {
  const readings: number[] = [];
  let i = lastAtOrBefore(series.at, atMs);
  for (; i >= 0 && readings.length < steadyReadings; i--) {
    if (series.quality[i] !== bad) readings.unshift(series.value[i]!);
  }
  if (readings.length < fewestSteadyReadings) return false;
  const tested = steadyStateTest(readings);
  return tested.ok && !tested.points.at(-1)!.steady;
}

function lastAtOrBefore(at: Float64Array, atMs: number): number {
  let low = 0;
  let high = at.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (at[middle]! <= atMs) low = middle + 1;
    else high = middle;
  }
  return low - 1;
}
