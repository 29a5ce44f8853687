import type { Board, BoardRow } from '../contracts/board.ts';
import { formatCount, formatDay, plural } from './format.ts';
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
  return unfit === 1
    ? '; it is in closed loop'
    : `, ${formatCount(unfitInClosedLoop)} of them in closed loop`;
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

const months = [
  'January',
  'February',
  'March',
  'April',
  'May',
  'June',
  'July',
  'August',
  'September',
  'October',
  'November',
  'December',
];

/**
 * Better or worse than at the end of the month before: unfit and unproven of all sites that were judged then. Null where
 * no site has a record of that month.
 * @param now the board's instant
 */
export function changeWords(board: Pick<Board, 'counts' | 'sites'>, now: string): string | null {
  const before = monthBefore(now);
  const then = board.sites.map((site) => site.months.find(({ month }) => month === before));
  if (then.every((month) => month === undefined)) return null;
  const sum = (what: 'unfit' | 'unproven') => then.reduce((total, month) => total + (month?.[what] ?? 0), 0);
  const parts = [
    difference(board.counts.unfit - sum('unfit'), 'unfit'),
    difference(board.counts.unproven - sum('unproven'), 'unproven'),
  ].filter((words) => words !== null);
  const since = `since the end of ${months[Number(before.slice(5, 7)) - 1]}`;
  return parts.length === 0
    ? `As many unfit and unproven as at the end of ${months[Number(before.slice(5, 7)) - 1]}.`
    : `${capital(parts.join(', '))} ${since}.`;
}

const difference = (by: number, what: string): string | null =>
  by === 0 ? null : `${formatCount(Math.abs(by))} ${by > 0 ? 'more' : 'fewer'} ${what}`;

const capital = (words: string): string => words.charAt(0).toUpperCase() + words.slice(1);

function monthBefore(now: string): string {
  const [year, month] = [Number(now.slice(0, 4)), Number(now.slice(5, 7))];
  return new Date(Date.UTC(year, month - 2, 1)).toISOString().slice(0, 7);
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
  if (days < 0) return { late: true, words: `${duty.kind} ${-days} d late` };
  return { late: false, words: days === 0 ? `${duty.kind} due today` : `${duty.kind} in ${days} d` };
}
