import type { CalibrationKind } from '../../../shared/contracts/calibration-evidence.ts';
import type { Sample } from '../../../shared/contracts/samples.ts';
import type {
  DecidedOnSample,
  HeldSample,
  Retest,
  SampleHistory,
} from '../../../shared/contracts/standing-samples.ts';
import { formatDate, formatInstant, plural } from '../../../shared/rules/format.ts';
import { sayHeld, sayResult } from '../../../shared/rules/laboratory-sentences.ts';
import { kindWords } from '../../../shared/rules/recalibration-sentences.ts';
import { sayDuration } from '../register/durations.ts';
import { sayStated } from '../samples/sample-words.ts';

/** How a sample stands, in a sentence: counted, held since, withdrawn by whom. */
export function sayStanding({ versions, deeds, siteZone }: SampleHistory): string {
  const [newest] = versions;
  if (!newest) return '';
  if (newest.withdrawnAt) {
    const deed = deeds.findLast(({ what }) => what === 'withdrawn');
    const by = deed ? ` by ${deed.by}` : '';
    const why = deed?.reason ? `: “${deed.reason}”` : '.';
    return `Withdrawn${by} on ${formatInstant(newest.withdrawnAt, siteZone)}${why}`;
  }
  if (newest.heldSince) {
    return `Held since ${formatInstant(newest.heldSince, siteZone)}: ${sayHeld(newest.flags)}. It does not count.`;
  }
  if (versions.length > 1) {
    return `Version ${newest.version} stands, since ${formatInstant(newest.enteredAt, siteZone)}.`;
  }
  return 'It stands as it was entered.';
}

/** How a result came about, where it is more than one number on one sheet: mean of repeats, composite, converted. */
export function sayMade(
  sample: Pick<Sample, 'replicates' | 'compositeMs' | 'statedUnit' | 'statedValue'>,
): string {
  const { replicates, compositeMs } = sample;
  const stated = sayStated(sample);
  const parts = [
    replicates && replicates.length > 1
      ? `Mean of ${plural(replicates.length, 'result')}: ${replicates.map((one) => String(one).replace('-', '−')).join('; ')}.`
      : '',
    compositeMs
      ? `Gathered over ${sayDuration(compositeMs)}, and compared with the average of the estimate over that time.`
      : '',
    stated === '' ? '' : `${stated.replace(/^w/, 'W')}.`,
  ];
  return parts.filter((part) => part !== '').join(' ');
}

/** Why a held sample is held and whether a re-test is asked for. */
export const sayHeldRow = (row: Pick<HeldSample, 'flags' | 'retest'>, zone: string): string =>
  row.retest
    ? `${row.retest.askedBy} asked for a re-test on ${formatDate(row.retest.askedAt, zone)}: “${row.retest.reason}”`
    : sayHeld(row.flags);

const decisions = {
  approved: 'Approved',
  confirmed: 'Confirmed',
  declined: 'Declined',
  withdrawn: 'Withdrawn',
} as const;

/** "Approved by Ines Okafor-Lund on 30 Nov 2026", or that it waits. */
export function sayDecision({ decision, decidedBy, decidedAt }: DecidedOnSample, zone: string): string {
  if (decision === null || decidedAt === null) return 'Waits for a decision';
  return `${decisions[decision]}${decidedBy ? ` by ${decidedBy}` : ''} on ${formatDate(decidedAt, zone)}`;
}

/** What a recalibration proposed, in a few words. */
export const sayKind = (kind: string): string => kindWords[kind as CalibrationKind] ?? kind;

/** What a correction leaves as it was; empty where nothing was decided. */
export function sayDecisions(decisions: readonly DecidedOnSample[]): string {
  if (decisions.length === 0) return '';
  const were = decisions.length === 1 ? 'was' : 'were';
  return (
    `${plural(decisions.length, 'recalibration')} ${were} judged on this sample. ` +
    'Its evidence keeps the value that it was judged on; look at whether the decision still holds.'
  );
}

/** What came of a re-test: who answered, what, and with which result. */
export function sayAnswer(retest: Retest, zone: string): string {
  const { answer, answeredBy, answeredAt, resultValue, unit, note } = retest;
  if (answer === null || answeredAt === null) return 'Not answered yet.';
  const what = {
    result: `a second result${resultValue === null ? '' : `, ${sayResult({ value: resultValue, qualifier: null, unit })}`}`,
    'no-bottle': 'no bottle left',
    'not-needed': 'not needed any more',
  }[answer];
  const words = note === '' ? '.' : `: “${note}”`;
  return `${answeredBy ?? 'Somebody'} answered on ${formatInstant(answeredAt, zone)}: ${what}${words}`;
}
