import type { CalibrationKind } from '../../../shared/contracts/calibration-evidence.ts';
import type { Calibration } from '../../../shared/contracts/calibrations.ts';
import type { Sheet } from '../../../shared/contracts/register.ts';
import { formatDate, formatInstant } from '../../../shared/rules/format.ts';
import { correctionWords, kindWords } from '../../../shared/rules/recalibration-sentences.ts';
import type { Measure } from '../../../shared/rules/sentences.ts';

/** What a calibration does, in a few words: "Left as found", "Bias correction −15.3 °C". */
export function whatWords({ kind, slope, offset }: Calibration, measure: Measure): string {
  return kind === 'as-found'
    ? kindWords[kind]
    : `${kindWords[kind]} ${correctionWords({ slope, offset }, measure)}`;
}

const decisions = {
  approved: 'Approved',
  confirmed: 'Confirmed',
  declined: 'Declined',
  withdrawn: 'Withdrawn',
} as const;

/** How it was decided, when and by whom. */
export function decisionWords(calibration: Calibration, zone: string): string {
  const { decision, decidedAt, decidedBy } = calibration;
  if (decision === null) return 'Waits for a decision';
  return `${decisions[decision]} by ${decidedBy?.name ?? ''} on ${formatInstant(decidedAt!, zone)}`;
}

/** From when to when it holds, or why it does not. */
export function forceWords(calibration: Calibration, zone: string, now: Date): string {
  const { effectiveFrom, effectiveTo, toBeEntered, decision } = calibration;
  if (effectiveFrom === null) {
    return decision === 'approved' && toBeEntered ? 'To be entered in the control system' : '–';
  }
  if (new Date(effectiveFrom) > now) return `from ${formatInstant(effectiveFrom, zone)}`;
  const since = formatDate(effectiveFrom, zone);
  return effectiveTo === null ? `since ${since}` : `${since} to ${formatDate(effectiveTo, zone)}`;
}

/** Label of the button that proposes a candidate: it says what will be asked for. */
export function proposeLabel(kind: CalibrationKind, correction: string): string {
  return kind === 'as-found'
    ? 'Propose leaving it as found'
    : `Propose ${kindWords[kind].toLowerCase()}: ${correction}`;
}

/** What stands on the sheet beside the value: the correction in force, since when, approved by whom. */
export function correctionInForce({ correction, revisionInForce, fields, siteZone, status }: Sheet): string {
  if (correction === null) {
    return revisionInForce?.model.form === 'external' && fields.correctionMode !== 'monitor'
      ? 'no correction added here'
      : 'no correction in force';
  }
  if (correction.entered) {
    return `last correction entered in the control system ${correctionWords(correction, fields)} on ${formatDate(correction.since, siteZone)}, approved by ${correction.approvedBy}`;
  }
  const earlier =
    status?.currentAt && status.currentAt < correction.since ? ' and not yet in this value' : '';
  return `correction ${correctionWords(correction, fields)} since ${formatDate(correction.since, siteZone)}${earlier}, approved by ${correction.approvedBy}`;
}
