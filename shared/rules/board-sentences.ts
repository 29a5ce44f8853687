import type { Board, BoardRow, CountsByHealth } from '../contracts/board.ts';
import { formatCount, formatDay, monthNames, plural } from './format.ts';
import { healthWord } from './sentences.ts';

/** Counts of soft sensors in service, as the board has them. */
export type BoardCounts = Pick<
  Board['counts'],
  'total' | 'fit' | 'watch' | 'unfit' | 'unproven' | 'unfitInClosedLoop'
>;

/** The board's headline: its finding, as a sentence. */
export function boardHeadline(counts: BoardCounts): string {
  const { total, unfit, unproven, watch } = counts;
  const of = `of ${formatCount(total)} ${total === 1 ? 'soft sensor' : 'soft sensors'}`;
  if (total === 0) return 'No soft sensor is in service yet.';
  if (unfit > 0) return `${formatCount(unfit)} ${of} can’t be relied on${loopWords(counts)}.`;
  if (unproven > 0) {
    return `${formatCount(unproven)} ${of} ${unproven === 1 ? 'is' : 'are'} unproven; none is known to be unfit.`;
  }
  if (watch > 0)
    return `No soft sensor is unfit; ${formatCount(watch)} of ${formatCount(total)} ${watch === 1 ? 'needs' : 'need'} watching.`;
  return total === 1
    ? 'The one soft sensor in service is fit.'
    : `All ${formatCount(total)} soft sensors are fit.`;
}

function loopWords({ unfit, unfitInClosedLoop }: BoardCounts): string {
  if (unfitInClosedLoop === 0) return '';
  if (unfit === 1) return '; it is in closed loop';
  if (unfitInClosedLoop === unfit) return `, ${unfit === 2 ? 'both' : 'all'} in closed loop`;
  return `, ${formatCount(unfitInClosedLoop)} of them in closed loop`;
}

/** Below the headline: the rest of the counts. */
export function boardSubline(counts: BoardCounts): string {
  const { total, fit, watch, unfit, unproven } = counts;
  const parts = [
    ...(unproven > 0 && unfit > 0
      ? [`${formatCount(unproven)} ${unproven === 1 ? 'is' : 'are'} unproven`]
      : []),
    ...(watch > 0 && unfit + unproven > 0
      ? [`${formatCount(watch)} ${watch === 1 ? 'needs' : 'need'} watching`]
      : []),
    ...(fit > 0 && fit < total ? [`${formatCount(fit)} ${fit === 1 ? 'is' : 'are'} fit`] : []),
  ];
  return parts.length === 0 ? '' : `${parts.join(', ')}.`;
}

/** What the healths leave out: late duties, soft sensors without an owner, units that stand. */
export function standingWords({ overdue, unowned, stopped }: Board['counts']): string {
  const parts = [
    ...(overdue > 0
      ? [`${plural(overdue, 'recalibration or review', 'recalibrations and reviews')} late`]
      : []),
    ...(unowned > 0 ? [`${plural(unowned, 'soft sensor')} without an owner or deputy`] : []),
    ...(stopped > 0
      ? [`${formatCount(stopped)} stopped with ${stopped === 1 ? 'its unit' : 'their units'}`]
      : []),
  ];
  if (parts.length === 0) return 'No recalibration or review is late, and everything has an owner.';
  return `${parts.join(', ')}.`;
}

/** A month that ended within these days is too near to compare with. */
const settledAfterMs = 7 * 86_400_000;

/**
 * Better or worse than at the end of the last month; in the first week of a month than at the end of the one before it.
 * Over those sites that have a record of that month; null where none has.
 * @param now the board's instant
 */
export function changeWords({ sites }: Pick<Board, 'sites'>, now: string): string | null {
  const before = monthBefore(new Date(Date.parse(now) - settledAfterMs));
  const known = sites.flatMap((site) => {
    const then = site.months.find(({ month }) => month === before);
    return then ? [{ site, then }] : [];
  });
  if (known.length === 0) return null;
  const change = (what: 'unfit' | 'unproven') =>
    known.reduce((total, { site, then }) => total + site[what] - then[what], 0);
  const parts = [difference(change('unfit'), 'unfit'), difference(change('unproven'), 'unproven')];
  const words = parts.filter((part) => part !== null).join(' and ');
  const end = `at the end of ${monthNames[Number(before.slice(5, 7)) - 1]}`;
  return words === '' ? `As many unfit and unproven as ${end}.` : `${words} than ${end}.`;
}

const difference = (by: number, what: string): string | null =>
  by === 0 ? null : `${formatCount(Math.abs(by))} ${by > 0 ? 'more' : 'fewer'} ${what}`;

/** The month before an instant's, "2026-11". */
function monthBefore(instant: Date): string {
  return new Date(Date.UTC(instant.getUTCFullYear(), instant.getUTCMonth() - 1, 1)).toISOString().slice(0, 7);
}

/** "2 unfit, 1 unproven, 3 to watch, 14 fit, 1 stopped"; what there is none of is left out. */
export function countsWords(counts: CountsByHealth): string {
  const { unfit, unproven, watch, fit, stopped } = counts;
  const parts: [number, string][] = [
    [unfit, 'unfit'],
    [unproven, 'unproven'],
    [watch, 'to watch'],
    [fit, 'fit'],
    [stopped, 'stopped'],
  ];
  const said = parts.filter(([count]) => count > 0).map(([count, word]) => `${formatCount(count)} ${word}`);
  return said.length === 0 ? 'none in service' : said.join(', ');
}

/** Why a row is among what changed: "Watch since 28 Nov, was Fit" or that it was recalibrated. */
export function whatChanged(row: BoardRow, since: string, zone: string, now: string): string {
  const day = (at: string) => formatDay(at, zone, now);
  if (row.healthSince > since) {
    const was = row.healthBefore === null ? '' : `, was ${healthWord[row.healthBefore]}`;
    return `${healthWord[row.health]} since ${day(row.healthSince)}${was}`;
  }
  return row.recalibratedAt === null ? '' : `Recalibrated ${day(row.recalibratedAt)}`;
}

/** The duty that falls due first: "recalibration 9 d late", "review in 40 d". `today`: the date at the site. */
export function dutyWords(
  duty: NonNullable<BoardRow['duty']>,
  today: string,
): { late: boolean; words: string } {
  const days = Math.round((Date.parse(duty.dueOn) - Date.parse(today)) / 86_400_000);
  if (days < 0) return { late: true, words: `${duty.kind} ${-days}\u00a0d\u00a0late` };
  return {
    late: false,
    words: days === 0 ? `${duty.kind} due today` : `${duty.kind} in\u00a0${days}\u00a0d`,
  };
}
