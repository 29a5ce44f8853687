import type {
  HistoryDateOrder,
  HistoryImport,
  HistoryRefusal,
  HistoryRefusalCode,
} from '../contracts/history.ts';
import { formatCount, plural } from './format.ts';

type Counts = Pick<HistoryImport, 'added' | 'unchanged' | 'replaced' | 'keptDifferent' | 'refused'>;

const sentences: Record<HistoryRefusalCode, (found: string) => string> = {
  'not-a-number': (found) =>
    `${found} is not a number. Correct it, or leave the cell empty where there is no reading.`,
  'decimal-sign': (found) => `${found} has another decimal sign than the one chosen for this file.`,
  'not-finite': (found) => `${found} is not a finite number.`,
  'unknown-quality': (found) =>
    `${found} is no quality. Write Good, Uncertain or Bad, or the OPC number (192, 64, 0).`,
  'unknown-tag': (found) =>
    `There is no tag ${found} at this site. Add it as a tag, then upload the file again; what is stored stays.`,
  'computed-tag': () => 'Cupel computes this tag itself, so its readings are not taken from a file.',
  'cell-count': () => 'This line has another number of cells than the header.',
  'time-missing': () => 'There is no time in this line.',
  'time-unreadable': (found) => `${found} can’t be read as a time in the order chosen for this file.`,
  'time-without-clock': (found) => `${found} is a day without a time of day, and a reading needs both.`,
  'no-such-time': (found) => `${found} does not exist in the calendar or on the clock.`,
  'hour-skipped': (found) =>
    `${found} does not exist: the clocks go forward over it. Write the time with its offset, or in UTC.`,
  'hour-twice': (found) =>
    `${found} happens twice: the clocks go back over it. Write the time with its offset, such as +01:00.`,
  'before-1970': (found) => `${found} is before 1970.`,
  'in-the-future': (found) => `${found} is yet to come. Check the order of day and month, and the zone.`,
};

/** Each reason in few words, as a heading over many of one kind. */
export const refusalWords: Record<HistoryRefusalCode, string> = {
  'not-a-number': 'Not a number',
  'decimal-sign': 'The other decimal sign',
  'not-finite': 'Not finite',
  'unknown-quality': 'No quality that is known',
  'unknown-tag': 'No tag of the site',
  'computed-tag': 'Computed by Cupel itself',
  'cell-count': 'Too many or too few cells',
  'time-missing': 'No time',
  'time-unreadable': 'Time that can’t be read',
  'time-without-clock': 'Day without a time of day',
  'no-such-time': 'Time that does not exist',
  'hour-skipped': 'In the hour that the clocks skip',
  'hour-twice': 'In the hour that the clocks repeat',
  'before-1970': 'Before 1970',
  'in-the-future': 'Yet to come',
};

/** Codes with which no value of the line was taken. */
const wholeLine: readonly HistoryRefusalCode[] = [
  'cell-count',
  'time-missing',
  'time-unreadable',
  'time-without-clock',
  'no-such-time',
  'hour-skipped',
  'hour-twice',
  'before-1970',
  'in-the-future',
];

/** Did this refusal cost every value of its line, not only its own cell? */
export const costsWholeLine = (code: HistoryRefusalCode): boolean => wholeLine.includes(code);

/**
 * Why something in a file of tag history was refused and what to do, for people.
 * @param refusal code and the text found; that of "cell-count" is "5 of 3": cells of the line, columns of the header
 */
export function sayHistoryRefusal({ code, found }: Pick<HistoryRefusal, 'code' | 'found'>): string {
  if (code === 'cell-count') return sayCellCount(found);
  return sentences[code](`“${found}”`);
}

function sayCellCount(found: string): string {
  const counts = /^(\d+) of (\d+)$/.exec(found);
  if (!counts) return sentences['cell-count'](found);
  const [cells, columns] = [Number(counts[1]), Number(counts[2])];
  const start = `This line has ${plural(cells, 'cell')} under a header of ${formatCount(columns)}`;
  return cells < columns
    ? `${start}: it seems to be cut off.`
    : `${start}. A cell that holds the separator needs quotation marks.`;
}

/**
 * What became of a file of tag history, as a headline: "330,597 readings added, 12 refused."
 * Skipped are readings for which a value was stored already, the same or another.
 */
export function sayHistoryOutcome(counts: Counts): string {
  const skipped = counts.unchanged + counts.keptDifferent;
  const others = counts.replaced + counts.keptDifferent + counts.refused;
  if (counts.added + skipped + others === 0) return 'This file holds no readings.';
  if (counts.added + others === 0) return `Nothing new: ${all(counts.unchanged)} stored already.`;
  const more = [
    [counts.replaced, 'replaced'],
    [skipped, 'skipped'],
    [counts.refused, 'refused'],
  ] as const;
  const words = more.filter(([count]) => count > 0).map(([count, word]) => `${formatCount(count)} ${word}`);
  return [`${plural(counts.added, 'reading')} added`, ...words].join(', ') + '.';
}

const all = (count: number): string =>
  count === 1 ? 'the one reading was' : `all ${formatCount(count)} readings were`;

/** The words behind the figures of {@link sayHistoryOutcome}; empty where they need none. */
export function explainHistoryOutcome(counts: Counts): string {
  const parts = [
    counts.unchanged > 0 && counts.added + counts.refused + counts.replaced + counts.keptDifferent > 0
      ? `${formatCount(counts.unchanged)} skipped: stored already with the same value.`
      : '',
    counts.keptDifferent > 0
      ? `${formatCount(counts.keptDifferent)} skipped: another value is stored for that instant, and it was kept.`
      : '',
    counts.replaced > 0 ? `${formatCount(counts.replaced)} replaced a value that differed.` : '',
  ];
  return parts.filter(Boolean).join(' ');
}

/** Orders of dates as people choose them, each with an instance. */
export const dateOrderWords: Record<HistoryDateOrder, string> = {
  iso: 'Year, month, day (2026-11-29 14:00)',
  'day-month-year': 'Day before month (29.11.2026 14:00)',
  'month-day-year': 'Month before day (11/29/2026 2:00 PM)',
  'epoch-ms': 'Milliseconds since 1970 (1795960800000)',
  'epoch-s': 'Seconds since 1970 (1795960800)',
};
