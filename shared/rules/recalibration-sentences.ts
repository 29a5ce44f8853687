import type {
  Baseline,
  CalibrationCandidate,
  CalibrationEvidence,
  CalibrationKind,
  Correction,
  EvidenceReply,
} from '../contracts/calibration-evidence.ts';
import { formatNumber, formatQuantity, formatSignedQuantity, plural } from './format.ts';
import { type Measure, biasDecimals, biasWords } from './sentences.ts';

export const kindWords: Record<CalibrationKind, string> = {
  'as-found': 'Left as found',
  bias: 'Bias correction',
  proportional: 'Proportional correction',
  linear: 'Slope and intercept',
  deming: 'Slope and intercept, errors in both (Deming)',
};

/** A correction in words: "−15.3 °C", "× 0.982", "× 0.982 + 3.1 °C"; "none" where the raw estimate stands. */
export function correctionWords({ slope, offset }: Correction, measure: Measure): string {
  let decimals = biasDecimals(measure);
  if (slope === 1) {
    if (offset === 0) return 'none';
    // A correction that is there is never said to be none.
    while (decimals < 6 && Number(offset.toFixed(decimals)) === 0) decimals++;
    return formatSignedQuantity(offset, measure.unit, decimals);
  }
  const times = `× ${formatNumber(slope, 4)}`;
  if (Number(offset.toFixed(decimals)) === 0) return times;
  return `${times} ${offset < 0 ? '−' : '+'} ${formatQuantity(Math.abs(offset), measure.unit, decimals)}`;
}

/** What the evidence recommends, as a sentence: what to do, how sure, on how many samples. */
export function recommendation(evidence: CalibrationEvidence, measure: Measure): string {
  const decimals = biasDecimals(measure);
  const say = (value: number) => formatQuantity(value, measure.unit, decimals);
  const { asFound, recommended, origins, used } = evidence;
  if (recommended === null) {
    return `Not yet: a change was signalled, and ${used === 0 ? 'no sample has' : `only ${plural(used, 'sample')} ${used === 1 ? 'has' : 'have'}`} come since; 8 are needed. The samples up to the signal would flatter any correction.`;
  }
  if (recommended === 'as-found') return leaveIt(evidence, say);
  const chosen = evidence.candidates.find(({ kind }) => kind === recommended)!;
  const now = evidence.candidates.find(({ kind }) => kind === 'as-found')!;
  const by = correctionWords({ slope: chosen.slope!, offset: chosen.offset! }, measure);
  const lead = `${kindWords[recommended]}: set it to ${by}.`;
  if (origins === null || chosen.laterRmse === null || now.laterRmse === null) {
    const found = asFound.ok ? `${biasWords(asFound.bias, measure.unit, decimals)}, and ` : '';
    return `${lead} ${found}${plural(used, 'sample')} ${used === 1 ? 'shows' : 'show'} it. Unproven until 10 later samples.`;
  }
  return `${lead} On ${plural(origins, 'later sample')}, each corrected by a fit to earlier ones only, the error falls from ${say(now.laterRmse)} to ${say(chosen.laterRmse)} RMSE.`;
}

function leaveIt(evidence: CalibrationEvidence, say: (value: number) => string): string {
  const { asFound, origins, used, allowed } = evidence;
  if (!asFound.ok) return 'Leave it as found.';
  const size = say(Math.abs(asFound.bias));
  if (asFound.low <= 0 && asFound.high >= 0) {
    return `Leave it: a bias of ${size} is within what ${plural(asFound.n, 'sample')} can show.`;
  }
  if (origins !== null) {
    return `Leave it: no correction did better on ${plural(origins, 'later sample')} by more than its own uncertainty.`;
  }
  return `Leave it: a bias of ${size} is small beside the allowed error of ${say(allowed)}, and ${plural(used, 'sample')} can’t prove a correction.`;
}

const verdicts: Record<string, string> = {
  chosen: 'Recommended',
  'improved-on': 'Improved on by a richer one',
  'gain-too-small': 'Gains less than its uncertainty',
  'closed-loop': 'Not offered: a closed loop uses the estimate',
  'reference-spread-too-small': 'Not offered: references spread too little to tell a slope',
  'slope-interval-includes-1': 'Not offered: the slope may as well be 1',
  'precision-unknown': 'Not offered: the precision of the method is not known',
  'not-enough-data': 'Too few samples',
  waits: 'Waits for more samples',
};

/** Why a candidate stands where it does, in words. */
export const verdictWords = ({ verdict }: Pick<CalibrationCandidate, 'verdict'>): string =>
  verdicts[verdict] ?? 'Could not be fitted to these samples';

/**
 * What a large correction calls for; null within the limits. The whole correction beyond 2 × the SD of held-out errors
 * is said, beyond 3 × the model needs a review.
 */
export function clampSentence(
  { slope, offset }: Correction,
  at: number,
  residualSd: number | null,
  measure: Measure,
): string | null {
  if (residualSd === null) return null;
  const whole = Math.abs(slope * at + offset - at);
  const size = formatQuantity(whole, measure.unit, biasDecimals(measure));
  if (whole > 3 * residualSd) {
    return `With ${size} the whole correction is more than 3 times the model’s own error: review the model rather than correct it further.`;
  }
  if (whole > 2 * residualSd)
    return `With ${size} the whole correction is more than twice the model’s own error.`;
  return null;
}

const baselines: Record<Baseline['code'], string> = {
  beginning: 'the beginning',
  training: 'the end of the training period',
  revision: 'the revision in force',
  calibration: 'the last correction',
  event: 'the last event',
};

/** Where the errors begin, in words. */
export const baselineWords = ({ code, eventKind }: Baseline): string =>
  (code === 'event' && eventKind !== null ? sinceEvent[eventKind] : undefined) ?? baselines[code];

const sinceEvent: Record<string, string> = {
  start: 'the unit started again',
  turnaround: 'the turnaround',
  'grade-change': 'the grade change',
  'instrument-replaced': 'an instrument was replaced',
  'method-change': 'the laboratory method changed',
};

/** Why there is nothing to judge, and what to do. */
export function evidenceRefusalSentence(reply: Extract<EvidenceReply, { ok: false }>): string {
  const since = `since ${baselineWords(reply.baseline)}`;
  switch (reply.reason) {
    case 'no-model':
      return 'No revision is in force yet, so there is nothing to recalibrate. Send a draft for approval first.';
    case 'no-sample-point':
      return 'No sample point is named on the data sheet, so no reference can judge the estimate. Name one first.';
    case 'only-censored':
      return `All samples ${since} are beyond the method’s range (< or >), so they show no error. Ask for a method that reaches the value.`;
    case 'only-held':
      return `All samples ${since} are held for a re-test. Settle those first.`;
    case 'too-few-samples':
      return `${reply.counted === 0 ? 'No sample counts' : `Only ${plural(reply.counted, 'sample')} ${reply.counted === 1 ? 'counts' : 'count'}`} ${since}; ${reply.needed} are needed to judge. Ask for samples, or have the duty waived with a reason.`;
  }
}
