import type {
  Baseline,
  CalibrationCandidate,
  CalibrationEvidence,
  CalibrationKind,
  Correction,
} from '../contracts/calibration-evidence.ts';
import { biasWithInterval } from '../numerics/bias.ts';
import { designCusum } from '../numerics/cusum-design.ts';
import { driftHistory } from '../numerics/drift.ts';
import { fitCandidate } from '../numerics/recalibration-candidates.ts';
import { type RecalibrationOptions, judgeRecalibration } from '../numerics/recalibration.ts';
import { corrected } from './correction-steps.ts';
import { allowedOver, biasWindow, fewestErrors } from './health.ts';

/** A counted sample of the evidence, in order of the time taken; raw estimate and reference in the sensor's unit. */
export interface EvidenceSample {
  takenMs: number;
  raw: number;
  reference: number;
  allowed: number;
}

/** What the evidence needs of a soft sensor besides its samples. SDs in its unit, null while unknown. */
export interface EvidenceBasis {
  current: Correction;
  baseline: Baseline;
  /** Repeatability SD of the laboratory method, r / 2.77. */
  labSd: number | null;
  /** SD of a single error on held-out samples. */
  residualSd: number | null;
  closedLoop: boolean;
  notCounted: CalibrationEvidence['notCounted'];
}

export type Evidence =
  { ok: true; evidence: CalibrationEvidence } | { ok: false; counted: number; needed: number };

/** Rolling origins start after 8 samples, and 10 are needed to tell candidates apart. */
const fewestToJudge = 18;
/** Errors since the baseline from which their autocorrelation is taken. */
const errorsForPhi = 30;
/** A false signal every ten years, as the limits of drift are set. */
const falseSignalsPerYear = 0.1;
const yearMs = 365.25 * 86_400_000;

/**
 * Candidates of a recalibration side by side, simplest first, judged on counted samples since the baseline. Where a
 * CUSUM of the corrected errors (target zero) stands beyond its limit, the samples up to the signal neither fit nor
 * choose: at the signal the mean is the winner's curse of the search. Of the others the last 30 count, as for the bias that
 * is shown: older ones say little of today. With 18 permitted samples or more, rolling origin
 * judges each procedure on later samples (`judgeRecalibration`); with 8 to 17 only a bias is offered, unproven.
 */
export function gatherEvidence(samples: readonly EvidenceSample[], basis: EvidenceBasis): Evidence {
  if (samples.length < fewestErrors) return { ok: false, counted: samples.length, needed: fewestErrors };
  const errors = samples.map((sample) => corrected(basis.current, sample.raw) - sample.reference);
  const asFound = biasWithInterval(errors.slice(-biasWindow));
  if (!asFound.ok) return { ok: false, counted: samples.length, needed: fewestErrors };
  const { signal, excluded } = signalIn(samples, errors, basis.residualSd ?? asFound.sd);
  const permitted = samples.slice(excluded).slice(-biasWindow);
  const allowed = allowedOver(samples.slice(-biasWindow));
  const judged = judgedCandidates(permitted, basis, allowed, signal !== null);
  return {
    ok: true,
    evidence: {
      from: new Date(samples[0]!.takenMs).toISOString(),
      to: new Date(samples.at(-1)!.takenMs).toISOString(),
      baseline: basis.baseline,
      allowed,
      asFound,
      signal,
      excluded,
      used: permitted.length,
      ...judged,
      residualSd: basis.residualSd,
      notCounted: basis.notCounted,
    },
  };
}

function signalIn(
  samples: readonly EvidenceSample[],
  errors: readonly number[],
  sd: number,
): { signal: CalibrationEvidence['signal']; excluded: number } {
  const none = { signal: null, excluded: 0 };
  const span = samples.at(-1)!.takenMs - samples[0]!.takenMs;
  // How errors hang together is taken from the first of them: a change that came later would look like it.
  const first = biasWithInterval(errors.slice(0, errorsForPhi));
  if (!(span > 0) || !(sd > 0) || !first.ok) return none;
  const samplesPerYear = ((samples.length - 1) / span) * yearMs;
  const design = designCusum({ falseSignalsPerYear, samplesPerYear, phi: first.phi });
  if (!design.ok) return none;
  const history = driftHistory(errors, { sd, k: design.k, h: design.h });
  if (!history.ok || history.state.status === 'in-control') return none;
  const signalled = history.points.findLastIndex((point) => point.signalled);
  return {
    signal: {
      at: new Date(samples[signalled]!.takenMs).toISOString(),
      direction: history.state.side!,
      onsetAt: new Date(samples[history.points[signalled]!.onset!]!.takenMs).toISOString(),
      confirmed: history.state.status === 'confirmed',
    },
    excluded: signalled + 1,
  };
}

type Judged = Pick<CalibrationEvidence, 'origins' | 'candidates' | 'recommended'>;

function judgedCandidates(
  permitted: readonly EvidenceSample[],
  basis: EvidenceBasis,
  allowed: number,
  signalled: boolean,
): Judged {
  const samples = {
    raw: permitted.map(({ raw }) => raw),
    reference: permitted.map(({ reference }) => reference),
  };
  if (permitted.length < fewestErrors) return tooFewSince(basis);
  if (permitted.length < fewestToJudge) return simplestOf(samples, basis, allowed, signalled);
  const judged = judgeRecalibration(samples, optionsOf(basis));
  if (!judged.ok) return simplestOf(samples, basis, allowed, signalled);
  return {
    origins: judged.origins,
    candidates: judged.candidates.map(({ kind, verdict, rmse, bias, fitted, ...gain }) => ({
      kind: kind as CalibrationKind,
      verdict:
        basis.labSd === null && verdict === 'reference-spread-too-small' ? 'precision-unknown' : verdict,
      slope: fitted?.correction.slope ?? null,
      offset: fitted?.correction.offset ?? null,
      laterRmse: rmse,
      laterBias: bias,
      ...gain,
    })),
    recommended: judged.chosen as CalibrationKind,
  };
}

/** Without a known precision of the method no slope may be fitted: nothing says how much of the spread is its own. */
function optionsOf({ current, labSd, residualSd, closedLoop }: EvidenceBasis): RecalibrationOptions {
  if (labSd === null) return { current, closedLoop, labSd: Number.MAX_VALUE / 4 };
  const own =
    residualSd === null ? labSd : Math.sqrt(Math.max(residualSd ** 2 - labSd ** 2, 0.01 * labSd ** 2));
  return { current, closedLoop, labSd, errorVarianceRatio: labSd > 0 ? (own / labSd) ** 2 : 1 };
}

const untried = { laterRmse: null, laterBias: null, gain: null, gainStandardError: null, over: null };

const leftAsFound = ({ current }: EvidenceBasis, verdict: string): CalibrationCandidate => ({
  kind: 'as-found',
  verdict,
  ...current,
  ...untried,
});

/** A change was signalled and too few samples came since: nothing can be recommended yet. */
function tooFewSince(basis: EvidenceBasis): Judged {
  const bias = { kind: 'bias' as const, verdict: 'not-enough-data', slope: null, offset: null, ...untried };
  return { origins: null, candidates: [leftAsFound(basis, 'waits'), bias], recommended: null };
}

/** Too few samples to judge procedures on later ones: a bias is offered where its interval leaves zero and it matters. */
function simplestOf(
  samples: { raw: number[]; reference: number[] },
  basis: EvidenceBasis,
  allowed: number,
  signalled: boolean,
): Judged {
  const fitted = fitCandidate('bias', samples, basis.current, 1);
  const found = biasWithInterval(
    samples.raw.map((raw, i) => corrected(basis.current, raw) - samples.reference[i]!),
  );
  const shown = found.ok && (found.low > 0 || found.high < 0);
  const matters = found.ok && (signalled || Math.abs(found.bias) > allowed / 2);
  const recommended = shown && matters && fitted.ok ? 'bias' : 'as-found';
  const bias: CalibrationCandidate = {
    kind: 'bias',
    verdict: recommended === 'bias' ? 'chosen' : 'gain-too-small',
    slope: fitted.ok ? fitted.correction.slope : null,
    offset: fitted.ok ? fitted.correction.offset : null,
    ...untried,
  };
  const verdict = recommended === 'bias' ? 'improved-on' : 'chosen';
  return { origins: null, candidates: [leftAsFound(basis, verdict), bias], recommended };
}
