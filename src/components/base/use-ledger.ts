import { computed, ref, type Ref } from 'vue';
import { formatCount, plural } from '../../../shared/rules/format.ts';
import { filterRows, gatherGroups, sortRows, type DataColumn, type TablePaging } from './table-columns.ts';

/** What a DataTable was given, read afresh at each use. */
export interface LedgerSource<Row> {
  rows: readonly Row[];
  columns: readonly DataColumn<Row>[];
  noun: readonly [one: string, many: string];
  loading: boolean;
  total?: number;
  groupOf?: (row: Row) => string;
}

export interface LedgerChoices {
  filter: Ref<string>;
  hidden: Ref<string[] | undefined>;
  paging: Ref<TablePaging>;
}

/** The rows of a DataTable as found, ordered and counted; with a `total` the server has done so already. */
export function useLedger<Row extends object>(source: LedgerSource<Row>, choices: LedgerChoices) {
  const ownHidden = ref<string[]>();
  const out = computed({
    get: () =>
      choices.hidden.value ??
      ownHidden.value ??
      source.columns.filter(({ optional }) => optional).map(({ name }) => name),
    set: (names: string[]) => {
      ownHidden.value = names;
      choices.hidden.value = names;
    },
  });
  const shown = computed(() => source.columns.filter(({ name }) => !out.value.includes(name)));
  const served = computed(() => source.total !== undefined);
  const found = computed(() =>
    served.value ? [...source.rows] : filterRows(source.rows, source.columns, choices.filter.value),
  );
  const ordered = computed(() => {
    const { sortBy, descending } = choices.paging.value;
    const column = source.columns.find(({ name }) => name === sortBy);
    const rows = served.value ? found.value : sortRows(found.value, column, descending);
    return source.groupOf === undefined ? rows : gatherGroups(rows, source.groupOf);
  });

  const all = computed(() => source.total ?? source.rows.length);
  const nothing = computed(() => all.value === 0 && !source.loading && choices.filter.value === '');
  const count = computed(() => {
    const every = plural(all.value, ...source.noun);
    const some = found.value.length;
    return served.value || some === all.value ? every : `${formatCount(some)} of ${every}`;
  });
  const paged = computed(() => {
    const { rowsPerPage } = choices.paging.value;
    return rowsPerPage > 0 && (source.total ?? found.value.length) > rowsPerPage;
  });

  /** The words of the line above a row, where a group begins on this page. */
  function groupAbove(pageIndex: number, rowIndex: number): string | null {
    const at = served.value ? pageIndex : rowIndex;
    const row = ordered.value[at];
    if (source.groupOf === undefined || row === undefined) return null;
    const before = pageIndex === 0 ? undefined : ordered.value[at - 1];
    const words = source.groupOf(row);
    return before !== undefined && source.groupOf(before) === words ? null : words;
  }

  return { out, shown, served, ordered, all, nothing, count, paged, groupAbove };
}
