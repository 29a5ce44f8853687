import type { Duty, DutyKind, GapCode, LastDecision } from '../contracts/duties.ts';
import { formatDate, formatDay, plural } from './format.ts';

/** The name of a duty: in tables, and as the part of an audit entry. */
export const dutyWords: Record<DutyKind, string> = {
  recalibration: 'recalibration',
  review: 'review',
  'ownership-gap': 'ownership gap',
};

type Dated = Pick<Duty, 'kind' | 'dueOn' | 'today' | 'siteZone' | 'tagName' | 'name' | 'gaps'>;

/** "TY-1402 Crown interior temperature". */
export const sensorWords = ({ tagName, name }: Pick<Duty, 'tagName' | 'name'>): string =>
  `${tagName} ${name}`;

/**
 * What a duty is about and when it is due, by the day at its site: "Recalibration of TY-1402 Crown interior temperature
 * is due on 8 Dec, in 7 days.", "… is due today.", "… is 9 days late."; for a gap what is missing and since when.
 */
export function dutySentence(duty: Dated, daysLate: number): string {
  if (duty.kind === 'ownership-gap') return gapSentence(duty, daysLate);
  const what = duty.kind === 'recalibration' ? 'Recalibration' : 'Review';
  return `${what} of ${sensorWords(duty)} ${dueWords(duty, daysLate)}.`;
}

/** When a duty is due: "is due on 8 Dec, in 7 days", "is due today", "is 9 days late, due on 22 Nov". */
export function dueWords(
  { dueOn, today, siteZone }: Pick<Duty, 'dueOn' | 'today' | 'siteZone'>,
  daysLate: number,
): string {
  const day = dayWords(dueOn, today, siteZone);
  if (daysLate > 0) return `is ${plural(daysLate, 'day')} late, due on ${day}`;
  if (daysLate === 0) return 'is due today';
  return daysLate === -1 ? `is due tomorrow, ${day}` : `is due on ${day}, in ${plural(-daysLate, 'day')}`;
}

const dayWords = (date: string, today: string, zone: string): string =>
  date.slice(0, 4) === today.slice(0, 4) ? formatDay(date, zone) : formatDate(date, zone);

const gapWords: Record<GapCode, string> = {
  'no-owner': 'has no owner',
  'owner-deactivated': 'has an owner who was deactivated',
  'owner-no-engineer': 'has an owner who is no engineer of the site',
  'no-deputy': 'has no deputy',
  'deputy-deactivated': 'has a deputy who was deactivated',
  'deputy-no-engineer': 'has a deputy who is no engineer of the site',
};

function gapSentence(duty: Dated, daysLate: number): string {
  const missing = duty.gaps.map((code) => gapWords[code]).join(' and ') || 'has an ownership gap';
  const since = daysLate > 0 ? ` for ${plural(daysLate, 'day')}` : '';
  return `${sensorWords(duty)} ${missing}${since}. Name somebody.`;
}

const conclusions = {
  keep: 'keep as it is',
  change: 'to be changed',
  retire: 'to be retired',
};

/** What was decided the last time: "Left as found on 8 Sep 2026 by Ines Okafor-Lund". */
export function lastDecisionWords(decision: LastDecision | null, zone: string): string {
  if (!decision) return 'Nothing decided yet';
  const who = decision.by ? ` by ${decision.by.name}` : '';
  const when = ` on ${formatDate(decision.at, zone)}${who}`;
  if (decision.what === 'waiver') return `Waived${when}: ${decision.reason}`;
  if (decision.what === 'review') return `Reviewed${when}: ${conclusions[decision.conclusion]}`;
  return decision.kind === 'as-found' ? `Left as found${when}` : `Corrected${when}`;
}
