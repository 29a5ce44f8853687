import { biasWithInterval } from './bias.ts';
import type { BiasEstimate } from './bias.ts';
import { meanOf, rootMeanSquare, sdOf } from './descriptive.ts';
import { countRefusal, finiteAnswer, firstRefusal, optionRefusal, vectorRefusal } from './input-checks.ts';
import {
  applyCorrection,
  candidateKinds,
  fitCandidate,
  rollingCorrection,
  samplesRefusal,
  slopeBar,
} from './recalibration-candidates.ts';
import type {
  CalibrationSamples,
  Correction,
  FittedCandidate,
  SlopeBar,
} from './recalibration-candidates.ts';
import { notEnough, outOfRange } from './result.ts';
import type { Refusal, RefusalReason, Result } from './result.ts';

/**
 * A procedure that needs more than raw estimates, judged alike: `predictions[i]` is what it gives for sample i when it
 * may use only samples before i.
 */
export type RollingProcedure = { kind: 'refit' | 're-estimated-noise'; predictions: ArrayLike<number> };

/**
 * `current` correction in force; `labSd` repeatability SD of the laboratory method; `errorVarianceRatio` error variance
 * of the estimate over that of the reference (default 1); `firstTraining` samples before the first origin (default 8);
 * `standardErrors` that a gain must exceed (default 2); further procedures, simplest first.
 */
export type RecalibrationOptions = {
  current: Correction;
  labSd: number;
  closedLoop: boolean;
  errorVarianceRatio?: number;
  firstTraining?: number;
  standardErrors?: number;
  procedures?: RollingProcedure[];
};

/**
 * Why a candidate stands where it does: `chosen`, `improved-on` by a richer one, `gain-too-small` against the best
 * simpler one, a bar to slopes, or the reason why it could not be fitted.
 */
export type CandidateVerdict = 'chosen' | 'improved-on' | 'gain-too-small' | SlopeBar | RefusalReason;

/**
 * One candidate's record. `rmse`, `bias` of its rolling-origin errors (null where not tried); `gain` mean paired
 * squared-error gain over the best simpler candidate with its block standard error; `fitted` to all permitted samples
 * (null for procedures, whose owner fits them).
 */
export type CandidateRecord = {
  kind: string;
  verdict: CandidateVerdict;
  rmse: number | null;
  bias: number | null;
  gain: number | null;
  gainStandardError: number | null;
  over: string | null;
  fitted: FittedCandidate | null;
};

/** The judgement: every candidate, the chosen kind and its correction (null for a procedure). Unproven until later samples. */
export type RecalibrationJudgement = {
  n: number;
  origins: number;
  candidates: CandidateRecord[];
  chosen: string;
  correction: Correction | null;
};

/** Fewest rolling origins from which a gain can be told. */
const fewestOrigins = 10;

/**
 * Judges the recalibration candidates on permitted samples in time order (those up to the signal that called for a
 * recalibration left out by the caller). Rolling origin: each candidate is fitted to the samples before i and scored on
 * sample i. Going from simple to rich, a candidate replaces the best so far when its mean squared-error gain exceeds two
 * standard errors from blocks of ∛n neighbouring samples. This judges the procedure; the numbers that go in are fitted to
 * all samples, and their performance is that of `laterPerformance`. Refuses `not-enough-data` below firstTraining + 10
 * samples, and unsound input.
 */
export function judgeRecalibration(
  samples: CalibrationSamples,
  options: RecalibrationOptions,
): Result<RecalibrationJudgement> {
  const { firstTraining = 8, procedures = [] } = options;
  const refusal = samplesRefusal(samples, options.current, 1) ?? optionsRefusal(samples, options);
  if (refusal) return refusal;
  const n = samples.raw.length;
  if (n < firstTraining + fewestOrigins) return notEnough('raw', firstTraining + fewestOrigins, n);
  const tried = [
    ...candidateKinds.map((kind) => triedCandidate(kind, samples, options)),
    ...procedures.map((procedure) => triedProcedure(procedure, samples, firstTraining)),
  ];
  const candidates: CandidateRecord[] = [];
  let best = tried[0]!;
  for (const candidate of tried) {
    const entry = record(candidate, best, options.standardErrors ?? 2);
    if (entry.verdict === 'chosen') best = candidate;
    candidates.push(entry);
  }
  for (const entry of candidates) {
    if (entry.verdict === 'chosen' && entry.kind !== best.kind) entry.verdict = 'improved-on';
  }
  const correction = best.fitted?.correction ?? null;
  return finiteAnswer({ n, origins: n - firstTraining, candidates, chosen: best.kind, correction });
}

/**
 * Performance of a correction on samples that neither fitted nor chose it, at least three corrected errors in time order:
 * `proven` from ten on. Refuses as `biasWithInterval`.
 */
export function laterPerformance(
  correctedErrors: ArrayLike<number>,
): Result<BiasEstimate & { proven: boolean }> {
  const judged = biasWithInterval(correctedErrors);
  return judged.ok ? { ...judged, proven: judged.n >= fewestOrigins } : judged;
}

/** A candidate after its rolling run: its errors at each origin, or why there are none. */
type Tried = {
  kind: string;
  errors: Float64Array | null;
  bar: SlopeBar | RefusalReason | null;
  fitted: FittedCandidate | null;
};

function triedCandidate(
  kind: (typeof candidateKinds)[number],
  samples: CalibrationSamples,
  options: RecalibrationOptions,
): Tried {
  const { current, labSd, closedLoop, errorVarianceRatio = 1, firstTraining = 8 } = options;
  const fitted = fitCandidate(kind, samples, current, errorVarianceRatio);
  if (!fitted.ok) return { kind, errors: null, bar: fitted.reason, fitted: null };
  const bar = slopeBar(fitted, samples.reference, { labSd, closedLoop });
  const own = {
    correction: fitted.correction,
    slope: fitted.slope,
    slopeLow: fitted.slopeLow,
    slopeHigh: fitted.slopeHigh,
  };
  if (bar) return { kind, errors: null, bar, fitted: own };
  const n = samples.raw.length;
  const errors = new Float64Array(n - firstTraining);
  const raw = Float64Array.from(samples.raw);
  const reference = Float64Array.from(samples.reference);
  for (let i = firstTraining; i < n; i++) {
    const earlier = { raw: raw.subarray(0, i), reference: reference.subarray(0, i) };
    const rolling = rollingCorrection(kind, earlier, current, errorVarianceRatio);
    if (!rolling) return { kind, errors: null, bar: 'cannot-tell', fitted: own };
    errors[i - firstTraining] = applyCorrection(rolling, raw[i]!) - reference[i]!;
  }
  return { kind, errors, bar: null, fitted: own };
}

function triedProcedure(
  procedure: RollingProcedure,
  samples: CalibrationSamples,
  firstTraining: number,
): Tried {
  const n = samples.raw.length;
  const errors = Float64Array.from(
    { length: n - firstTraining },
    (_, k) => procedure.predictions[firstTraining + k]! - samples.reference[firstTraining + k]!,
  );
  return { kind: procedure.kind, errors, bar: null, fitted: null };
}

function record(candidate: Tried, best: Tried, standardErrors: number): CandidateRecord {
  const { kind, errors, bar, fitted } = candidate;
  const none = { rmse: null, bias: null, gain: null, gainStandardError: null, over: null };
  if (!errors) return { kind, verdict: bar!, ...none, fitted };
  const scored = { rmse: rootMeanSquare(errors), bias: meanOf(errors) };
  if (candidate.kind === best.kind) return { ...none, kind, verdict: 'chosen', ...scored, fitted };
  const gains = errors.map((error, i) => best.errors![i]! ** 2 - error ** 2);
  const gain = meanOf(gains);
  const gainStandardError = blockStandardError(gains);
  const verdict = gain > standardErrors * gainStandardError ? 'chosen' : 'gain-too-small';
  return { kind, verdict, ...scored, gain, gainStandardError, over: best.kind, fitted };
}

/** Standard error of a mean of neighbouring values that hang together, from the means of blocks of ∛n of them. */
function blockStandardError(values: Float64Array): number {
  const length = Math.max(1, Math.round(Math.cbrt(values.length)));
  const blocks = Math.floor(values.length / length);
  const means = Float64Array.from({ length: blocks }, (_, b) => {
    const to = b === blocks - 1 ? values.length : (b + 1) * length;
    return meanOf(values.subarray(b * length, to));
  });
  return sdOf(means) / Math.sqrt(blocks);
}

function optionsRefusal(samples: CalibrationSamples, options: RecalibrationOptions): Refusal | null {
  const { labSd, errorVarianceRatio = 1, firstTraining = 8, standardErrors = 2, procedures = [] } = options;
  const refusal = firstRefusal(
    optionRefusal('labSd', labSd, 0, Number.MAX_VALUE),
    optionRefusal('errorVarianceRatio', errorVarianceRatio, 1e-12, 1e12),
    countRefusal('firstTraining', firstTraining, 6, 1e6),
    optionRefusal('standardErrors', standardErrors, 0, 100),
  );
  if (refusal) return refusal;
  for (const { kind, predictions } of procedures) {
    const wrong = vectorRefusal(kind, predictions, 1, samples.raw.length);
    if (wrong) return wrong;
    if (kind !== 'refit' && kind !== 're-estimated-noise') return outOfRange('procedures');
  }
  return null;
}
