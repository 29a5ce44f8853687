import type {
  ProposedMapping,
  SampleImportView,
  SampleMapping,
} from '../../../shared/contracts/sample-import.ts';
import { readTable } from '../../../shared/rules/sample-table.ts';

/** How a file is to be read, as far as it has been said; null is an open question. */
export type MappingForm = ProposedMapping;
export type ColumnRole = keyof SampleMapping['columns'];
/** By field; a column's error stands under `columns.<role>`. */
export type MappingErrors = Record<string, string>;

export const columnRoles: { role: ColumnRole; label: string; required: boolean }[] = [
  { role: 'sampleNumber', label: 'Sample number', required: false },
  { role: 'takenAt', label: 'Time the sample was taken', required: true },
  { role: 'reportedAt', label: 'Time the result was reported', required: false },
  { role: 'value', label: 'Value', required: true },
  { role: 'unit', label: 'Unit', required: false },
  { role: 'samplePoint', label: 'Sample point', required: false },
  { role: 'takenFrom', label: 'Time gathering began, of composites', required: false },
  { role: 'analyst', label: 'Analyst', required: false },
];

export type FilePreview = SampleImportView['preview'];

/** The first lines that a form speaks of: of a workbook those of its sheet, with tabs between the cells. */
export function headUnder(preview: FilePreview, { sheet }: Pick<MappingForm, 'sheet'>): string {
  return preview.sheets.find(({ name }) => name === sheet)?.head ?? preview.head;
}

/** What parts the columns of those lines. */
const delimiterUnder = ({ sheet, delimiter }: Pick<MappingForm, 'sheet' | 'delimiter'>) =>
  sheet === null ? delimiter : ('\t' as const);

export interface FileColumn {
  name: string;
  /** What stands in it in the first rows. */
  example: string;
}

/** The columns as the first lines show them under a delimiter and a header line; none where no row begins there. */
export function columnsOf(
  head: string,
  form: Pick<MappingForm, 'sheet' | 'delimiter' | 'headerLine'>,
): FileColumn[] {
  const { headerLine } = form;
  const table = readTable(head, delimiterUnder(form));
  if (!table.ok) return [];
  const at = table.rows.findIndex(({ line }) => line === headerLine);
  const below = table.rows.slice(at + 1, at + 3);
  return (table.rows[at]?.cells ?? []).map((cell, column) => ({
    name: cell.trim() || `Column ${column + 1}`,
    example: below.map(({ cells }) => cells[column]?.trim() ?? '').join(' · '),
  }));
}

/** The form under another sheet, delimiter or header line: columns that are no longer there are open again. */
export function withReading(
  form: MappingForm,
  reading: Partial<Pick<MappingForm, 'sheet' | 'delimiter' | 'headerLine'>>,
  preview: FilePreview,
): MappingForm {
  const next = { ...form, ...reading };
  const width = columnsOf(headUnder(preview, next), next).length;
  const kept = Object.entries(form.columns).map(([role, column]) => [
    role,
    column !== null && column < width ? column : null,
  ]);
  return { ...next, columns: Object.fromEntries(kept) as MappingForm['columns'] };
}

/** The mapping, or a sentence for each question that is still open. */
export function readMapping(
  form: MappingForm,
): { mapping: SampleMapping; errors?: undefined } | { errors: MappingErrors; mapping?: undefined } {
  const { decimal, dateOrder, zone, unit, columns, samplePointId } = form;
  const { takenAt, value } = columns;
  const errors: MappingErrors = {};
  if (takenAt === null) errors['columns.takenAt'] = 'Choose the column that says when each sample was taken.';
  if (value === null) errors['columns.value'] = 'Choose the column that holds the results.';
  if (columns.samplePoint === null && samplePointId === null)
    errors.samplePointId = 'No column names the sample point. Choose the point for the whole file.';
  if (columns.unit === null && unit === null)
    errors.unit =
      'No column names the unit. Write the one that the values are in, or say that they are pure numbers.';
  if (dateOrder === null) errors.dateOrder = 'Day and month may stand either way round in this file. Choose.';
  if (decimal === null)
    errors.decimal = 'Commas may be decimal signs or part thousands in this file. Choose.';
  if (zone === null)
    errors.zone = 'Times of this file do not exist on the clock of the site. Choose whose clock it is.';
  if (Object.keys(errors).length > 0 || decimal === null || dateOrder === null || zone === null)
    return { errors };
  if (takenAt === null || value === null) return { errors };
  return {
    mapping: { ...form, decimal, dateOrder, zone, unit: unit ?? '', columns: { ...columns, takenAt, value } },
  };
}

/** The server's field paths as those of the form. */
export const ownPaths = (errors: Record<string, string>): MappingErrors =>
  Object.fromEntries(Object.entries(errors).map(([path, text]) => [path.replace(/^mapping\./, ''), text]));

/** Words parted by commas as a list, each once. */
export const readWords = (text: string): string[] => [
  ...new Set(
    text
      .split(',')
      .map((word) => word.trim())
      .filter((word) => word !== ''),
  ),
];
