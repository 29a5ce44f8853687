import Papa from 'papaparse';
import type { z } from 'zod';
import { tagFields } from '../../../shared/contracts/tags.ts';
import { readNumber } from '../register/number-text.ts';

export type NewTag = Omit<z.input<typeof tagFields>, 'unitId'>;

/** One line of a pasted list: the tag it gives, and sentences about what of it can’t be used. */
export interface ListedTag {
  line: number;
  name: string;
  tag: NewTag;
  problems: string[];
}

/** Columns of a pasted list, in this order; what is missing at the end stays blank. */
export const listColumns = ['Tag', 'Description', 'Engineering unit', 'Range from', 'Range to'] as const;

const heads = /^(tag|tag ?names?|name|point)$/i;

/**
 * Reads tags as copied from a spreadsheet (tabs), or as CSV. A first line that names its columns is passed over.
 * @param decimalComma numbers are written with a comma ("0,5")
 * @param known names that the site has already, in lower case
 */
export function readTagList(text: string, decimalComma: boolean, known: ReadonlySet<string>): ListedTag[] {
  const { data } = Papa.parse<string[]>(text.replace(/^\ufeff/, ''), {
    delimiter: delimiterOf(text, decimalComma),
    skipEmptyLines: false,
  });
  const seen = new Map<string, number>();
  return data.flatMap((cells, index) => {
    const line = index + 1;
    if (cells.every((cell) => cell.trim() === '')) return [];
    if (index === 0 && heads.test(cells[0]!.trim())) return [];
    const listed = readLine(line, cells, decimalComma);
    const key = listed.name.toLowerCase();
    const before = seen.get(key);
    if (key !== '' && known.has(key))
      listed.problems.push(`There is a tag ${listed.name} at this site already.`);
    else if (key !== '' && before !== undefined) listed.problems.push(`Stands in line ${before} already.`);
    else seen.set(key, line);
    return [listed];
  });
}

/** Tabs where there are any, as a spreadsheet copies; a comma parts columns only where it is no decimal sign. */
function delimiterOf(text: string, decimalComma: boolean): string {
  if (text.includes('\t')) return '\t';
  if (text.includes(';') || decimalComma) return ';';
  return ',';
}

function readLine(line: number, cells: string[], decimalComma: boolean): ListedTag {
  const [name = '', description = '', unit = '', low = '', high = '', ...rest] = cells.map((cell) =>
    cell.trim(),
  );
  const problems: string[] = [];
  const range = { rangeLow: number(low, 'Range from'), rangeHigh: number(high, 'Range to') };
  const parsed = tagFields.safeParse({ name, description, unit, unitId: null, ...range });
  for (const issue of parsed.error?.issues ?? []) problems.push(issue.message);
  if (range.rangeLow !== null && range.rangeHigh !== null && range.rangeLow >= range.rangeHigh)
    problems.push('The upper end of the range must be above the lower.');
  if (rest.some((cell) => cell !== ''))
    problems.push(
      `Has more than ${listColumns.length} columns; “${rest.find((cell) => cell !== '')}” has no place.`,
    );
  return { line, name, problems, tag: { name, description, unit, ...range } };

  function number(text: string, label: string): number | null {
    const read = readNumber(decimalComma ? text.replaceAll('.', '').replace(',', '.') : text);
    if ('value' in read) return read.value;
    const comma = !decimalComma && /^[+\-−]?\d+,\d+$/.test(text);
    problems.push(
      comma ? `${label}: ${text} has a comma. Choose the decimal comma above.` : `${label}: ${read.wrong}`,
    );
    return null;
  }
}
