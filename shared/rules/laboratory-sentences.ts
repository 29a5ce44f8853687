import type { SampleHistory, SampleVersion } from '../contracts/standing-samples.ts';
import { formatCount, formatDate, formatInstant, plural } from './format.ts';

/** A result with its limit sign, true minus and unit: "< 1200 °C". */
export function sayResult({
  value,
  qualifier,
  unit,
}: Pick<SampleVersion, 'value' | 'qualifier' | 'unit'>): string {
  const limit = qualifier ? `${qualifier}\u00a0` : '';
  return `${limit}${String(value).replace('-', '−')}${unit ? `\u00a0${unit}` : ''}`;
}

/** What became of a sample that somebody meant to change: who withdrew or corrected it, and what stands now. */
export function sayStands({ versions, deeds, siteZone }: SampleHistory): string {
  const [newest] = versions;
  if (!newest) return 'This sample is no longer there.';
  if (newest.withdrawnAt !== null) {
    const by = deeds.findLast(({ what }) => what === 'withdrawn')?.by;
    const when = formatInstant(newest.withdrawnAt, siteZone);
    return by ? `${by} withdrew this sample on ${when}.` : `This sample was withdrawn on ${when}.`;
  }
  const when = formatInstant(newest.enteredAt, siteZone);
  return (
    `${newest.enteredBy} changed this sample on ${when}: version ${newest.version} stands, ${sayResult(newest)}. ` +
    'Look at it first; nothing you typed is lost.'
  );
}

/** What was done on the samples of a file since they were added. */
export interface Resting {
  decisions: {
    tagName: string;
    number: number;
    decision: 'approved' | 'confirmed';
    decidedAt: string;
    samples: number;
    sampleNumber: string;
  }[];
  /** Sample numbers of which another version stands. */
  corrected: string[];
  /** Sample numbers of which a re-test was asked for. */
  retested: string[];
}

/**
 * Says what rests on the samples of a file and how to go on without undoing it.
 * @param zone IANA zone in which dates are said
 * @returns null where nothing rests on them
 */
export function sayWhatRests({ decisions, corrected, retested }: Resting, zone: string): string | null {
  const parts = [
    ...someOf(decisions, 3).map(
      ({ tagName, number, decision, decidedAt, samples, sampleNumber }) =>
        `recalibration ${number} of ${tagName}, ${decision} on ${formatDate(decidedAt, zone)}, was decided on ` +
        (samples === 1 ? sampleNumber : plural(samples, 'sample')),
    ),
    ...(decisions.length > 3 ? [`so were ${formatCount(decisions.length - 3)} more recalibrations`] : []),
    ...(corrected.length > 0
      ? [`${names(corrected)} ${corrected.length === 1 ? 'has' : 'have'} been corrected`]
      : []),
    ...(retested.length > 0 ? [`a re-test of ${names(retested)} was asked for`] : []),
  ];
  if (parts.length === 0) return null;
  return `These samples can’t be taken out again: ${parts.join('; ')}. Correct or withdraw single samples instead.`;
}

const someOf = <T>(list: readonly T[], most: number): T[] => list.slice(0, most);

function names(list: readonly string[]): string {
  const shown = someOf(list, 3);
  const rest = list.length - shown.length;
  if (rest > 0) return `${shown.join(', ')} and ${formatCount(rest)} more`;
  return shown.length === 1 ? shown[0]! : `${shown.slice(0, -1).join(', ')} and ${shown.at(-1)}`;
}

const flagWords: Record<string, string> = {
  censored: 'outside the method’s range, not used to judge',
  'date-only': 'no time of day, never compared',
  composite: 'composite, compared with the average over its time',
  converted: 'converted from another unit',
  averaged: 'mean of repeats',
  'like-report-time': 'taken and reported at one time',
  'far-from-last': 'far from the last results',
  'beyond-repeatability': 'repeats further apart than r',
  'repeatability-unknown': 'repeats differ, and r of the method is not known',
};
const holdWords = ['far-from-last', 'beyond-repeatability', 'repeatability-unknown'];

/** What is to be known of a sample, in words; empty for most. A code without words stands as it is. */
export const sayFlags = (flags: readonly string[]): string =>
  flags.map((flag) => flagWords[flag] ?? flag).join('; ');

/** Why a sample is held; one that no rule held was held by a person who asked for a re-test. */
export function sayHeld(flags: readonly string[]): string {
  const why = flags.filter((flag) => holdWords.includes(flag));
  return why.length > 0 ? sayFlags(why) : 'a re-test was asked for';
}
