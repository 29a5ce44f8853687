import type { Baseline } from '../contracts/calibration-evidence.ts';
import type { Health, HealthReason } from '../contracts/judging.ts';
import { biasWithInterval } from '../numerics/bias.ts';
import { holdLast } from '../numerics/hold-last.ts';
import { bandFactor } from './band.ts';
import { severityOf } from './severity.ts';

/** A counted error with the times and the value of its reference; in order of the time taken. */
export interface CountedError {
  takenMs: number;
  reportedMs: number;
  reference: number;
  error: number;
  /** Allowed error at that value. */
  allowed: number;
}

export interface HealthInput {
  nowMs: number;
  /** Counted errors since the baseline, oldest first; at least the last 60 where there are so many. */
  errors: readonly CountedError[];
  /** Accepted references of the last window that did not count, and all of them. */
  uncounted: { count: number; of: number };
  lastReferenceMs: number | null;
  /** Since when errors count, and why from then: a revision, a correction, an event; null: always. */
  baseline: Baseline['code'];
  baselineMs: number | null;
  /** When the unit last started again; null where it never stood. */
  runningSinceMs: number | null;
  lastEstimateMs: number | null;
  promisedReferenceMs: number;
  historyArrives: 'live' | 'uploaded';
  historyEveryMs: number;
  /** SD of a single error on held-out samples, if known. */
  residualSd: number | null;
  allowedSpread: number | null;
}

/** Errors that the bias is taken over: the last 30 since the baseline. */
export const biasWindow = 30;
/** Counted errors needed since the baseline before anything is said to be proven. */
export const fewestErrors = 8;
/** A statistical reason enters after this many samples in a row, and leaves after that many. */
const entersAfter = 2;
const leavesAfter = 9;
const errorsForHolding = 30;
const uncountedShare = 0.3;

/**
 * Health of a soft sensor with its reasons, worst first (product rules: Unfit > Unproven > Watch > Fit). Reasons carry
 * figures in the unit of the estimate; nothing here reads a clock.
 */
export function healthOf(input: HealthInput): { health: Health; reasons: HealthReason[] } {
  const reasons = [...proofReasons(input), ...settledReasons(input), ...uncountedReason(input)];
  reasons.sort((a, b) => severityOf(b.health) - severityOf(a.health));
  const worst = reasons[0];
  if (worst) return { health: worst.health, reasons };
  return {
    health: 'fit',
    reasons: [{ code: 'within-allowed', health: 'fit', figures: biasFigures(input.errors) }],
  };
}

/** Silence is never good news: what is missing to prove anything. */
function proofReasons(input: HealthInput): HealthReason[] {
  const reasons: HealthReason[] = [];
  const say = (code: HealthReason['code'], figures: HealthReason['figures']) =>
    reasons.push({ code, health: 'unproven', figures });
  const heardMs = Math.max(input.lastEstimateMs ?? 0, input.runningSinceMs ?? 0);
  if (input.lastEstimateMs === null || input.nowMs - heardMs > patience(input)) {
    say('no-inputs', { sinceMs: input.lastEstimateMs, nowMs: input.nowMs });
  }
  const { baseline, baselineMs } = input;
  if (input.lastReferenceMs === null) say('no-reference', { sinceMs: baselineMs, baseline });
  else if (
    input.nowMs - Math.max(input.lastReferenceMs, input.runningSinceMs ?? 0) >
    input.promisedReferenceMs
  ) {
    say('reference-overdue', {
      ageMs: input.nowMs - input.lastReferenceMs,
      promisedMs: input.promisedReferenceMs,
    });
  }
  const recent = input.errors.slice(-biasWindow);
  if (input.lastReferenceMs !== null && recent.length < fewestErrors) {
    say('too-few-errors', { counted: recent.length, needed: fewestErrors, sinceMs: baselineMs, baseline });
  }
  return reasons;
}

/** An upload-only site is judged by its own promise; a live one is missed after three readings, at least 30 minutes. */
const patience = (input: HealthInput): number =>
  input.historyArrives === 'live'
    ? Math.max(3 * input.historyEveryMs, 30 * 60_000)
    : 1.5 * input.historyEveryMs;

function uncountedReason(input: HealthInput): HealthReason[] {
  const { count, of } = input.uncounted;
  if (of === 0 || count / of <= uncountedShare) return [];
  return [{ code: 'too-many-uncounted', health: 'watch', figures: { count, of } }];
}

/**
 * Statistical reasons with their delay: a reason stands once it was found after 2 consecutive samples, and goes once it
 * was absent after 9. Worked out anew from the errors, so that computing step by step or at once gives the same.
 */
function settledReasons(input: HealthInput): HealthReason[] {
  const standing = new Map<string, number>();
  const found = new Map<string, number>();
  const absent = new Map<string, number>();
  let latest: HealthReason[] = [];
  for (let n = fewestErrors; n <= input.errors.length; n++) {
    latest = momentaryReasons(input.errors.slice(Math.max(0, n - biasWindow), n), input);
    const codes = new Set(latest.map((reason) => `${reason.code}:${reason.health}`));
    for (const key of new Set([...codes, ...standing.keys(), ...found.keys()])) {
      found.set(key, codes.has(key) ? (found.get(key) ?? 0) + 1 : 0);
      absent.set(key, codes.has(key) ? 0 : (absent.get(key) ?? 0) + 1);
      // The first judgement there is has no sample before it to wait for.
      if (found.get(key)! >= entersAfter || (n === fewestErrors && codes.has(key))) standing.set(key, n);
      else if (absent.get(key)! >= leavesAfter) standing.delete(key);
    }
  }
  const now = new Map(latest.map((reason) => [`${reason.code}:${reason.health}`, reason]));
  return [...standing.keys()].map((key) => {
    const [code, health] = key.split(':') as [HealthReason['code'], Health];
    return now.get(key) ?? { code, health, figures: { ...biasFigures(input.errors), leaving: 1 } };
  });
}

/** What the last window of errors says by itself. */
function momentaryReasons(window: readonly CountedError[], input: HealthInput): HealthReason[] {
  const errors = window.map(({ error }) => error);
  const found = biasWithInterval(errors);
  if (!found.ok) return [];
  const allowed = allowedOver(window);
  const figures = biasFigures(window);
  const reasons: HealthReason[] = [];
  // "An interval wider than A" is read as half its width: bias ± more than A can show nothing about A.
  if ((found.high - found.low) / 2 > allowed)
    reasons.push({ code: 'interval-wider-than-allowed', health: 'unproven', figures });
  if (found.low > allowed || found.high < -allowed)
    reasons.push({ code: 'bias-beyond-allowed', health: 'unfit', figures });
  else if ((found.high > allowed || found.low < -allowed) && Math.abs(found.bias) > allowed / 2) {
    reasons.push({ code: 'bias-reaches-allowed', health: 'watch', figures });
  }
  const spread = bandFactor * found.sd;
  const allowedSpread =
    input.allowedSpread ?? (input.residualSd === null ? null : 1.5 * bandFactor * input.residualSd);
  const wide = allowedSpread !== null && spread > allowedSpread;
  const holding = holdingReason(window, found.rmse);
  // Both together are worse than either: the estimate adds nothing to the laboratory's last word.
  const health: Health = wide && holding ? 'unfit' : 'watch';
  if (wide)
    reasons.push({
      code: 'spread-beyond-allowed',
      health,
      figures: { spread, allowedSpread, n: window.length },
    });
  if (holding) reasons.push({ code: 'worse-than-holding', health, figures: holding });
  return reasons;
}

function holdingReason(window: readonly CountedError[], rmse: number): HealthReason['figures'] | null {
  if (window.length < errorsForHolding) return null;
  const held = holdLast({
    takenAt: window.map(({ takenMs }) => takenMs),
    reportedAt: window.map(({ reportedMs }) => reportedMs),
    value: window.map(({ reference }) => reference),
  });
  return held.ok && rmse > held.rmse ? { rmse, holdRmse: held.rmse, n: window.length } : null;
}

/** Allowed error over a window: the median, so that one odd value moves nothing. */
export function allowedOver(window: readonly { allowed: number }[]): number {
  const sorted = window.map(({ allowed }) => allowed).sort((a, b) => a - b);
  return sorted[Math.floor(sorted.length / 2)] ?? 0;
}

/** Bias, interval and allowed error over the last window, as figures for a sentence. */
export function biasFigures(errors: readonly CountedError[]): HealthReason['figures'] {
  const window = errors.slice(-biasWindow);
  const found = biasWithInterval(window.map(({ error }) => error));
  const base = { n: window.length, allowed: allowedOver(window) };
  return found.ok ? { ...base, bias: found.bias, low: found.low, high: found.high } : base;
}
