import type { BoardRow } from '../../../shared/contracts/board.ts';
import type { Consumer } from '../../../shared/contracts/register.ts';
import { filterRows } from '../base/table-columns.ts';
import { consumerKinds, kindWord } from '../register/sheet-words.ts';

/** What a list of the board is narrowed to, as its address says it; '' where everything is meant. */
export interface BoardFilter {
  find: string;
  importance: string;
  use: string;
}

/** Rows of the class and with a consumer of the kind. */
export function narrowRows(
  rows: readonly BoardRow[],
  { importance, use }: Omit<BoardFilter, 'find'>,
): BoardRow[] {
  return rows.filter(
    (row) =>
      (importance === '' || row.importanceClass === importance) &&
      (use === '' || row.consumers.some(({ kind }) => kind === use)),
  );
}

/** The same for paper, with the typed words too, which on screen the table looks for. */
export function rowsForPaper(rows: readonly BoardRow[], filter: BoardFilter): BoardRow[] {
  const words = [
    {
      name: 'words',
      label: 'Words',
      field: (row: BoardRow) =>
        [row.tagName, row.name, row.siteName, row.unitName, row.owner ?? 'no owner'].join(' '),
    },
  ];
  return filterRows(narrowRows(rows, filter), words, filter.find);
}

/** "class A, closed loop, “melting”": what a list is narrowed to; '' where it is not. */
export function filterWords({ find, importance, use }: BoardFilter): string {
  const parts = [
    ...(importance === '' ? [] : [`class ${importance}`]),
    ...(isKind(use) ? [kindWord(use)] : []),
    ...(find === '' ? [] : [`“${find}”`]),
  ];
  return parts.join(', ');
}

/** Kinds of consumers that a use can be chosen from. */
export const uses: readonly string[] = consumerKinds.map(({ value }) => value);
const isKind = (word: string): word is Consumer['kind'] => uses.includes(word);
