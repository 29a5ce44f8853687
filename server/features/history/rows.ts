import type { HistoryLayout, HistoryRefusalCode } from '../../../shared/contracts/history.ts';
import { historyTimeReader } from '../../../shared/rules/history-times.ts';
import {
  isAbsent,
  type Quality,
  readNumber,
  readQuality,
  whyNoNumber,
} from '../../../shared/rules/history-values.ts';
import type { Batch } from './batch.ts';
import type { TakeRow } from './records.ts';
import type { ImportTag } from './repo.ts';

/** Something that was refused, and how many values were lost by it. */
export interface Refused {
  line: number;
  column: number;
  code: HistoryRefusalCode;
  found: string;
  values: number;
}

export interface RowsInto {
  header: readonly string[];
  tags: readonly ImportTag[];
  latestMs: number;
  batch: Batch;
  refuse: (refused: Refused) => void;
}

/** Makes the function that turns rows of the file, read as laid out, into readings and refusals. */
export function rowTaker(layout: HistoryLayout, into: RowsInto): TakeRow {
  return layout.shape === 'wide' ? wideTaker(layout, into) : longTaker(layout, into);
}

type Layout<Shape> = Extract<HistoryLayout, { shape: Shape }>;

function wideTaker(layout: Layout<'wide'>, into: RowsInto): TakeRow {
  const { batch, refuse, latestMs } = into;
  const { decimal, timeColumn } = layout;
  const readTime = historyTimeReader({ ...layout, latestMs });
  const wrongCount = cellCount(into.header);
  const byId = new Map(into.tags.map((tag) => [tag.id, tag]));
  const columns = layout.columns.map(({ column, tagId }) => ({
    column,
    tagId,
    computed: byId.get(tagId)?.computed ?? false,
  }));
  return (cells, line) => {
    const filled = () => columns.filter(({ column }) => !isAbsent(cells[column] ?? '')).length;
    const miscounted = wrongCount(cells);
    if (miscounted) {
      const values = filled();
      if (values > 0) refuse({ line, column: cells.length, code: 'cell-count', found: miscounted, values });
      return;
    }
    const at = readTime(cells[timeColumn] ?? '');
    if (typeof at !== 'number') {
      const values = filled();
      if (values > 0) refuse({ line, column: timeColumn, code: at, found: cells[timeColumn] ?? '', values });
      return;
    }
    for (const { column, tagId, computed } of columns) {
      const text = cells[column]!;
      const value = readNumber(text, decimal);
      if (Number.isFinite(value) && !computed) batch.add(tagId, at, value, 0);
      else if (!isAbsent(text)) {
        refuse({
          line,
          column,
          code: computed ? 'computed-tag' : whyNoNumber(text, decimal),
          found: text,
          values: 1,
        });
      }
    }
  };
}

function longTaker(layout: Layout<'long'>, into: RowsInto): TakeRow {
  const { batch, latestMs } = into;
  const { decimal, timeColumn, tagColumn, valueColumn, qualityColumn } = layout;
  const readTime = historyTimeReader({ ...layout, latestMs });
  const wrongCount = cellCount(into.header);
  const byName = new Map(into.tags.map((tag) => [tag.name.toLowerCase(), tag]));
  const tagOf = (text: string) => byName.get(text) ?? byName.get(text.trim().toLowerCase());
  return (cells, line) => {
    const text = cells[valueColumn] ?? '';
    if (isAbsent(text)) return;
    const refuse = (column: number, code: HistoryRefusalCode, found = cells[column] ?? '') =>
      into.refuse({ line, column, code, found, values: 1 });
    const miscounted = wrongCount(cells);
    if (miscounted) return refuse(cells.length, 'cell-count', miscounted);
    const at = readTime(cells[timeColumn] ?? '');
    if (typeof at !== 'number') return refuse(timeColumn, at);
    const tag = tagOf(cells[tagColumn]!);
    if (!tag) return refuse(tagColumn, 'unknown-tag');
    if (tag.computed) return refuse(tagColumn, 'computed-tag');
    const value = readNumber(text, decimal);
    if (!Number.isFinite(value)) return refuse(valueColumn, whyNoNumber(text, decimal));
    const quality: Quality | null = qualityColumn === null ? 0 : readQuality(cells[qualityColumn]!);
    if (quality === null) return refuse(qualityColumn!, 'unknown-quality');
    batch.add(tag.id, at, value, quality);
  };
}

/**
 * Tells a line whose cells don't stand under the header: too few (cut off), or more than it, as decimal commas between
 * commas make. Separators at the end of header or line that part nothing do no harm.
 */
function cellCount(header: readonly string[]): (cells: readonly string[]) => string | null {
  let named = header.length;
  while (named > 0 && header[named - 1]!.trim() === '') named--;
  return (cells) => {
    if (cells.length === header.length) return null;
    const over = cells.slice(header.length).some((cell) => cell.trim() !== '');
    return cells.length < named || over ? `${cells.length} of ${named}` : null;
  };
}
