import type {
  ProposedMapping,
  SampleCounts,
  SampleOutcome,
  SampleReason,
  SampleReasonCode,
} from '../contracts/sample-import.ts';
import {
  formatClock,
  formatCount,
  formatDate,
  formatInstant,
  monthNames,
  plural,
  zoneOffsetMinutes,
} from './format.ts';
import type { Encoding, FileProblem } from './sample-text.ts';

type Figures = SampleReason['figures'];

/** Offset of a zone at an instant as a file would write it: "+02:00". */
function offsetText(instant: string, zone: string): string {
  const minutes = zoneOffsetMinutes(instant, zone);
  const two = (count: number) => String(count).padStart(2, '0');
  return `${minutes < 0 ? '-' : '+'}${two(Math.floor(Math.abs(minutes) / 60))}:${two(Math.abs(minutes) % 60)}`;
}

const clockWithOffset = (instant: string, zone: string) =>
  `${formatClock(instant, zone)}${offsetText(instant, zone)}`;
const whichTime = ({ column }: Figures) =>
  column === 'reported' ? 'The time of reporting' : 'The time of taking';

function impossibleDate({ day, month, year, column }: Figures): string {
  const name = monthNames[Number(month) - 1];
  const where = column === 'reported' ? ' (in the time of reporting)' : '';
  if (!name) return `There is no month ${month}${where}. Is the order of day and month the other way round?`;
  const leap = month === 2 && day === 29 ? ` ${year}` : '';
  return `${day} ${name}${leap} does not exist${where}. Write the right date in the file.`;
}

function skippedOrDouble(code: 'missing-hour' | 'double-hour', figures: Figures, zone: string): string {
  const earlier = String(figures.earlier);
  const later = String(figures.later);
  const either = `${clockWithOffset(earlier, zone)} or ${clockWithOffset(later, zone)}`;
  if (code === 'missing-hour') {
    return `“${figures.written}” did not occur: the clocks were put forward. Write the time that is meant, ${either}.`;
  }
  return (
    `${whichTime(figures)} “${figures.written}” occurred twice, as the clocks were put back: at ${formatClock(earlier, 'UTC')} and ` +
    `${formatClock(later, 'UTC')} UTC. Write it with its offset, ${either}.`
  );
}

function storedDiffers(figures: Figures, zone: string): string {
  const taken = String(figures.taken);
  const when = taken.length === 10 ? formatDate(taken, zone) : formatInstant(taken, zone);
  const limit = figures.qualifier === '' ? '' : `${figures.qualifier} `;
  const stands = `${limit}${figures.value} ${figures.unit}`.trim();
  if (figures.differs === 'method') {
    return `This sample is stored with another method, or with none where this file has one (${stands}, taken ${when}).`;
  }
  return `This sample is stored with another ${figures.differs}: ${stands}, taken ${when}. A file does not overwrite a stored result.`;
}

const sentences: Record<SampleReasonCode, (figures: Figures, zone: string) => string> = {
  ragged: ({ expected, found }) =>
    `${plural(Number(found), 'cell')} where the header has ${formatCount(Number(expected))}. Is a delimiter missing, or is one inside a text without quotation marks?`,
  'no-value': ({ written }) =>
    `No value${written === '' ? '' : `, only “${written}”`}. Write it in the file, or leave the row out.`,
  'text-value': ({ written }) => `“${written}” is no number as this file writes them.`,
  'no-time': () => 'No time of taking. Write it in the file.',
  'unreadable-time': (figures) =>
    `${whichTime(figures)}, “${figures.written}”, can’t be read. One looks like 2026-11-29 06:00.`,
  'impossible-date': impossibleDate,
  'impossible-time': (figures) => `${whichTime(figures)}, “${figures.written}”, is no time of day.`,
  'missing-hour': (figures, zone) => skippedOrDouble('missing-hour', figures, zone),
  'double-hour': (figures, zone) => skippedOrDouble('double-hour', figures, zone),
  ahead: (figures) =>
    `${whichTime(figures)}, “${figures.written}”, is still to come. Check date, order of day and month, and zone.`,
  'before-1970': (figures) =>
    `${whichTime(figures)}, “${figures.written}”, lies before 1970. Check the year.`,
  'reported-before-taken': ({ reported }) =>
    `Reported before it was taken (“${reported}”). One of the two times is wrong.`,
  'no-point': () => 'No sample point. Write it in the file, or choose one for the whole file.',
  'unknown-point': ({ point }) =>
    `There is no sample point ${point} at this site. Add it under Points and methods, or correct the name.`,
  'no-unit': ({ expected }) => `No unit; samples of this point are in ${expected}.`,
  'other-unit': ({ unit, expected }) =>
    `In ${unit}, but samples of this point are in ${expected}. Nothing is converted.`,
  'long-number': ({ length, most }) => `The sample number has ${length} characters; ${most} are the most.`,
  'other-value-in-file': ({ line, value, unit }) =>
    `Row ${formatCount(Number(line))} gives this sample as ${`${value} ${unit}`.trim()}. Keep the right one of the two.`,
  'stored-differs': storedDiffers,
  'same-row': ({ line }) => `The same sample as row ${formatCount(Number(line))}.`,
  unchanged: () => 'Stored before, unchanged.',
  censored: ({ qualifier }) =>
    `${qualifier === '<' ? 'Below' : 'Above'} the method’s range: kept, not used to judge the estimate.`,
  'date-only': () => 'A date without a time: kept, never compared with the estimate.',
};

/**
 * Says why a row fares as it does and what to do about it.
 * @param reason the code with its figures
 * @param zone IANA zone in which the file is read
 */
export const sayReason = ({ code, figures }: SampleReason, zone: string): string =>
  sentences[code](figures, zone);

/** The words of an outcome. */
export const outcomeWords: Record<SampleOutcome, string> = {
  added: 'added',
  'added-with-flag': 'added with a flag',
  held: 'held for a re-test',
  skipped: 'skipped',
  refused: 'refused',
};

/**
 * The finding of a dry run or a receipt: "412 rows: 404 will be added, 1 held for a re-test, 2 skipped, 5 refused."
 * @param when `will` before the commit, `was` after it, `undone` once taken out again
 */
export function sayCounts(counts: SampleCounts, when: 'will' | 'was' | 'undone'): string {
  const rows = plural(counts.rows, 'row');
  if (when === 'undone')
    return `${rows}: ${formatCount(counts.added + counts.held)} added and taken out again.`;
  const added = `${counts.added === 0 ? 'none' : formatCount(counts.added)} ${when === 'will' ? 'will be added' : 'added'}`;
  const others = [
    [counts.held, 'held for a re-test'],
    [counts.skipped, 'skipped'],
    [counts.refused, 'refused'],
  ] as const;
  return `${rows}: ${[added, ...others.filter(([count]) => count > 0).map(([count, word]) => `${formatCount(count)} ${word}`)].join(', ')}.`;
}

const encodingWords: Record<Encoding, string> = {
  'utf-8': 'UTF-8',
  'utf-16le': 'UTF-16',
  'utf-16be': 'UTF-16',
  'windows-1252': 'Windows-1252',
};
const delimiterWords = { ',': 'commas', ';': 'semicolons', '\t': 'tabs', '|': 'vertical bars' };
const orderWords = {
  iso: 'year first',
  'day-month-year': 'day before month',
  'month-day-year': 'month before day',
  'epoch-ms': 'milliseconds since 1970',
};

/** How a file is read: "Read as UTF-8, semicolons, decimal commas, day before month." */
export function sayReading(
  encoding: Encoding,
  mapping: Pick<ProposedMapping, 'delimiter' | 'decimal' | 'dateOrder'>,
): string {
  const parts = [encodingWords[encoding], delimiterWords[mapping.delimiter]];
  if (mapping.decimal) parts.push(mapping.decimal === ',' ? 'decimal commas' : 'decimal points');
  if (mapping.dateOrder) parts.push(orderWords[mapping.dateOrder]);
  return `Read as ${parts.join(', ')}.`;
}

/** Why a file can’t be taken, and what to do. */
export function sayFileProblem(problem: FileProblem): string {
  switch (problem.code) {
    case 'empty':
      return 'This file is empty. Export it again and send it once more.';
    case 'spreadsheet':
      return 'This is a workbook, not a CSV. In the spreadsheet choose “Save as” and the type CSV, then send that file.';
    case 'document':
      return 'This is a PDF, not a CSV. Ask the laboratory for the results as CSV.';
    case 'web-page':
      return 'This is a web page, not a CSV: perhaps a sign-in page was saved instead of the export. Export the results again.';
    case 'binary':
      return 'This is no text file, so no rows can be read from it. Save the results as CSV and send that file.';
    case 'no-rows':
      return 'This file names its columns but holds no rows below them.';
    case 'too-many-columns':
      return 'This file has more than 1,000 columns; reference samples come one to a row.';
    case 'one-column':
      return `Only one column was found (“${problem.found}”). Save the table as CSV with semicolons, commas or tabs between the columns.`;
    case 'no-header':
      return `No line names the columns; the first reads “${problem.found}”. Put a line such as “Sample number;Taken;Value” above the results.`;
    case 'open-quote':
      return `A quotation mark opens on line ${formatCount(problem.line)} and never closes. Close it, or leave it out.`;
    case 'stray-quote':
      return `On line ${formatCount(problem.line)} a quotation mark stands inside a quoted text. Write it twice there, or leave it out.`;
  }
}
