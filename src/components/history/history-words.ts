import type {
  Delimiter,
  HistoryImport,
  HistoryPreview,
  TextEncoding,
} from '../../../shared/contracts/history.ts';
import { formatCount, formatDate, plural } from '../../../shared/rules/format.ts';
import { sayHistoryOutcome } from '../../../shared/rules/history-sentences.ts';
import type { LayoutForm } from './layout-form.ts';
import { usedColumns } from './layout-form.ts';

export const delimiterWords: Record<Delimiter, string> = {
  ',': 'Commas',
  ';': 'Semicolons',
  '\t': 'Tabs',
  '|': 'Bars ( | )',
};
const encodingWords: Record<TextEncoding, string> = {
  'utf-8': 'UTF-8',
  'utf-16le': 'UTF-16',
  'utf-16be': 'UTF-16',
  'windows-1252': 'Windows-1252',
};
const orderWords = {
  iso: 'year first',
  'day-month-year': 'day before month',
  'month-day-year': 'month before day',
  'epoch-ms': 'milliseconds since 1970',
  'epoch-s': 'seconds since 1970',
};

export const stateWords: Record<HistoryImport['state'], string> = {
  uploaded: 'not read yet',
  waiting: 'waits for its turn',
  running: 'being read',
  done: 'added',
  failed: 'broke off',
  cancelled: 'stopped',
};

/** "Read as UTF-8, semicolons, decimal commas, day before month." */
export function sayReadAs({ encoding }: HistoryPreview, form: LayoutForm): string {
  const parts = [
    encodingWords[encoding],
    delimiterWords[form.delimiter].toLowerCase(),
    form.decimal === null ? '' : form.decimal === ',' ? 'decimal commas' : 'decimal points',
    form.dateOrder === null ? '' : orderWords[form.dateOrder],
  ];
  return `Read as ${parts.filter(Boolean).join(', ')}.`;
}

/** The finding at the head of a file that has not been read yet. */
export function sayLayout(preview: HistoryPreview, form: LayoutForm): string {
  if (form.timeColumn === null) return 'No column with date and time was found. Which is it?';
  if (form.shape === 'long') return 'Each line holds one reading: a time, a tag and a value.';
  const used = usedColumns(form).length;
  const all = preview.header.length - 1;
  if (used === 0) return `None of ${plural(all, 'column')} goes to a tag yet.`;
  return used === all
    ? `All ${plural(all, 'column')} go to tags.`
    : `${formatCount(used)} of ${plural(all, 'column')} go to tags.`;
}

/** What the button does: "Import 9 columns". */
export function sayStart(form: LayoutForm): string {
  const used = usedColumns(form).length;
  if (form.shape === 'long') return 'Import the readings';
  return used === 0 ? 'Import the columns' : `Import ${plural(used, 'column')}`;
}

export const counted = (row: HistoryImport): number =>
  row.added + row.unchanged + row.replaced + row.keptDifferent + row.refused;

/** What is stored already may only be gone on with; a file of which nothing is stored can be laid out anew. */
export const canLayOut = (row: HistoryImport): boolean =>
  row.state === 'uploaded' || ((row.state === 'failed' || row.state === 'cancelled') && counted(row) === 0);

/** The headline of an import that has ended or is under way. */
export function sayImport(row: HistoryImport): string {
  if (row.state === 'done') return sayHistoryOutcome(row);
  if (row.state === 'waiting') return 'The file waits for its turn.';
  if (row.state === 'running')
    return counted(row) === 0 ? 'The file is being read.' : `So far ${lowerFirst(sayHistoryOutcome(row))}`;
  const how = row.state === 'cancelled' ? 'Stopped' : 'Broke off';
  return counted(row) === 0
    ? `${how} before anything was added.`
    : `${how} after ${lowerFirst(sayHistoryOutcome(row))}`;
}

const lowerFirst = (text: string): string => text.charAt(0).toLowerCase() + text.slice(1);

/** "1 Jan 2011 to 31 Dec 2015", over what was added or replaced; empty where nothing was. */
export function sayPeriod(row: Pick<HistoryImport, 'firstAt' | 'lastAt'>, zone: string): string {
  if (row.firstAt === null || row.lastAt === null) return '';
  const [first, last] = [formatDate(row.firstAt, zone), formatDate(row.lastAt, zone)];
  return first === last ? first : `${first} to ${last}`;
}
