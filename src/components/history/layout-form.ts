import type {
  DecimalSign,
  Delimiter,
  HistoryDateOrder,
  HistoryLayout,
  HistoryPreview,
} from '../../../shared/contracts/history.ts';

/** How a file is to be read, as far as it has been said; null is an open question. */
export interface LayoutForm {
  shape: 'wide' | 'long';
  delimiter: Delimiter;
  headerLine: number;
  decimal: DecimalSign | null;
  dateOrder: HistoryDateOrder | null;
  zone: string;
  timeColumn: number | null;
  /** Tag of each column, by column; columns that stand not here are left out. */
  tagOf: Record<number, number>;
  tagColumn: number | null;
  valueColumn: number | null;
  qualityColumn: number | null;
}

/** What the file gives away is filled in; what it leaves in doubt is left open, to be said. */
export function layoutFormOf({ proposed, doubts }: HistoryPreview): LayoutForm {
  const { columns, ...rest } = proposed;
  return {
    ...rest,
    decimal: doubts.includes('decimal') ? null : proposed.decimal,
    dateOrder: doubts.includes('date-order') ? null : proposed.dateOrder,
    tagOf: Object.fromEntries(columns.map(({ column, tagId }) => [column, tagId])),
  };
}

export type LayoutErrors = Partial<Record<keyof LayoutForm, string>>;

/** The layout to start with, or a sentence for each question that is still open. */
export function readLayout(form: LayoutForm): { layout: HistoryLayout } | { errors: LayoutErrors } {
  const { shape, delimiter, headerLine, zone, decimal, dateOrder, timeColumn } = form;
  const errors: LayoutErrors = {};
  if (decimal === null) errors.decimal = 'Commas may be decimal signs or part thousands here. Choose.';
  if (dateOrder === null) errors.dateOrder = 'Day and month may stand either way round here. Choose.';
  if (timeColumn === null) errors.timeColumn = 'Choose the column that holds date and time.';
  const base = {
    delimiter,
    headerLine,
    zone,
    decimal: decimal!,
    dateOrder: dateOrder!,
    timeColumn: timeColumn!,
  };
  if (shape === 'wide') {
    const columns = usedColumns(form);
    if (columns.length === 0) errors.tagOf = 'Choose a tag for at least one column.';
    return Object.keys(errors).length > 0 ? { errors } : { layout: { shape, ...base, columns } };
  }
  const { tagColumn, valueColumn, qualityColumn } = form;
  if (tagColumn === null) errors.tagColumn = 'Choose the column that names the tag.';
  if (valueColumn === null) errors.valueColumn = 'Choose the column that holds the value.';
  if (Object.keys(errors).length > 0) return { errors };
  return { layout: { shape, ...base, tagColumn: tagColumn!, valueColumn: valueColumn!, qualityColumn } };
}

/** Columns of a wide file that go to a tag, from left to right; the column of times can't. */
export function usedColumns(form: LayoutForm): { column: number; tagId: number }[] {
  return Object.entries(form.tagOf)
    .map(([column, tagId]) => ({ column: Number(column), tagId }))
    .filter(({ column }) => column !== form.timeColumn);
}
