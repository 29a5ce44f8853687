import type { ProposedMapping, SampleCounts, SampleOutcome } from '../contracts/sample-import.ts';
import { formatCount, plural } from './format.ts';
import type { Encoding, FileProblem } from './sample-text.ts';

export { sayReason } from './sample-reason-sentences.ts';

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
  'serial-days': 'days as spreadsheets count them',
};

/** How a file is read: "Read as UTF-8, semicolons, decimal commas, day before month.", "Read as a workbook, sheet Week 48." */
export function sayReading(
  encoding: Encoding | null,
  mapping: Pick<ProposedMapping, 'delimiter' | 'decimal' | 'dateOrder'> & { sheet?: string | null },
): string {
  const parts =
    encoding === null
      ? ['a workbook', `sheet ${mapping.sheet}`]
      : [encodingWords[encoding], delimiterWords[mapping.delimiter]];
  if (mapping.decimal && encoding !== null)
    parts.push(mapping.decimal === ',' ? 'decimal commas' : 'decimal points');
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
    case 'old-workbook':
      return 'This is a workbook of an old kind (.xls or .xlsb). In the spreadsheet choose “Save as” and the type XLSX or CSV, then send that file.';
    case 'locked-workbook':
      return 'This workbook is locked with a password. Save it without one, then send it again.';
    case 'damaged-workbook':
      return 'This workbook is damaged and can’t be read. Open it in the spreadsheet, save it anew, then send it again.';
    case 'large-workbook':
      return 'This workbook unpacks to more than can be read at once. Save the sheet with the results as CSV, then send that file.';
    case 'other-archive':
      return 'This is an archive or a document, no workbook and no CSV. Send the file with the results itself.';
    case 'no-sheet':
      return `This workbook has no sheet “${problem.sheet}”. Choose another.`;
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
