import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { nextTick } from 'vue';
import DataTable from '../../src/components/base/DataTable.vue';
import type { DataColumn } from '../../src/components/base/table-columns.ts';
import { mountPart } from './mount-part.ts';

interface Row {
  tag: string;
  bias: number | null;
  owner: string;
  area: string;
}

const rows: Row[] = [
  { tag: 'TY-1402', bias: 15.3, owner: 'M. Castellane', area: 'melting' },
  { tag: 'AY-2207', bias: null, owner: '=cmd', area: 'lime kiln 2' },
  { tag: 'TY-1405', bias: -6, owner: 'J. Brightwell', area: 'melting' },
];
const columns: DataColumn<Row>[] = [
  { name: 'tag', label: 'Soft sensor', always: true },
  { name: 'bias', label: 'Bias', numeric: true },
  { name: 'owner', label: 'Owner' },
  { name: 'area', label: 'Area', optional: true },
];

function table(props: Record<string, unknown> = {}, slots: Record<string, unknown> = {}) {
  return mountPart(DataTable, {
    props: {
      rows,
      columns,
      rowKey: 'tag',
      label: 'Soft sensors',
      noun: ['soft sensor', 'soft sensors'],
      ...props,
    },
    slots,
  });
}

const firstCells = (part: ReturnType<typeof table>) =>
  part.findAll('tbody tr').map((row) => row.find('td')?.text?.() ?? '');

const saved: { name: string; blob: Blob }[] = [];
const createUrl = URL.createObjectURL;
beforeEach(() => {
  saved.length = 0;
  URL.createObjectURL = (blob) => {
    saved.push({ name: '', blob: blob as Blob });
    return createUrl.call(URL, blob);
  };
  document.addEventListener('click', nameSaved, true);
});
afterEach(() => {
  URL.createObjectURL = createUrl;
  document.removeEventListener('click', nameSaved, true);
  document.body.innerHTML = '';
});

function nameSaved(event: Event) {
  const link = (event.target as Element).closest('a[download]');
  if (link === null) return;
  event.preventDefault();
  saved.at(-1)!.name = link.getAttribute('download')!;
}

describe('a data table', () => {
  test('shows its rows, an en dash for what is missing, and the count in words', () => {
    const part = table();
    expect(firstCells(part)).toEqual(['TY-1402', 'AY-2207', 'TY-1405']);
    expect(part.findAll('tbody tr')[1]!.findAll('td')[1]!.text()).toBe('–');
    expect(part.get('.count').text()).toBe('3 soft sensors');
  });

  test('sorts by a header on click and on Enter, with what is missing last either way', async () => {
    const part = table();
    const header = part.findAll('thead th')[1]!;
    await header.trigger('click');
    expect(firstCells(part)).toEqual(['TY-1405', 'TY-1402', 'AY-2207']);
    expect(header.attributes('aria-sort')).toBe('ascending');
    await header.trigger('keyup', { key: 'Enter' });
    expect(firstCells(part)).toEqual(['TY-1402', 'TY-1405', 'AY-2207']);
    expect(header.attributes('aria-sort')).toBe('descending');
  });

  test('finds rows that hold every word of the filter, also in columns out of sight', async () => {
    const part = table({ filter: 'melting castell' });
    expect(firstCells(part)).toEqual(['TY-1402']);
    expect(part.get('.count').text()).toBe('1 of 3 soft sensors');
    await part.setProps({ filter: 'nowhere' });
    expect(part.text()).toContain('No match among 3.');
  });

  test('clears the filters from the words that say nothing was found', async () => {
    const part = table({ filter: 'nowhere' });
    await part.get('button.word-link').trigger('click');
    expect(part.emitted('update:filter')!.at(-1)).toEqual(['']);
  });

  test('keeps optional columns out of sight until they are chosen', async () => {
    const part = table();
    expect(part.findAll('thead th').map((th) => th.text())).toEqual(['Soft sensor', 'Bias', 'Owner']);
    await part.setProps({ hidden: ['owner'] });
    expect(part.findAll('thead th').map((th) => th.text())).toEqual(['Soft sensor', 'Bias', 'Area']);
  });

  test('writes the rows as found and sorted to CSV: numbers as numbers, formulas made harmless', async () => {
    const part = table();
    await part.findAll('thead th')[0]!.trigger('click');
    await part.get('[aria-label="Download as CSV"]').trigger('click');
    expect(saved).toHaveLength(1);
    expect(saved[0]!.name).toBe('Soft sensors.csv');
    const text = new TextDecoder('utf-8', { ignoreBOM: true }).decode(await saved[0]!.blob.arrayBuffer());
    expect(text).toBe(
      '\ufeffSoft sensor,Bias,Owner\r\nAY-2207,,"\'=cmd"\r\nTY-1402,15.3,M. Castellane\r\nTY-1405,-6,J. Brightwell',
    );
  });

  test('says the next step when it holds nothing at all', () => {
    const part = table(
      { rows: [] },
      { empty: 'No soft sensors at Tarnby yet. Register the first or import a CSV.' },
    );
    expect(part.text()).toBe('No soft sensors at Tarnby yet. Register the first or import a CSV.');
    expect(table({ rows: [] }).text()).toContain('No soft sensors yet.');
  });

  test('never calls a table empty while it is loading', () => {
    const part = table({ rows: [], loading: true });
    expect(part.text()).not.toContain('No soft sensors yet.');
    expect(part.get('[aria-busy=true]').attributes('aria-label')).toBe('Loading soft sensors');
  });

  test('keeps one line above each group however the filter changes', async () => {
    const many = ['melting', 'refining', 'lime kiln 2'].flatMap((area) =>
      ['AY', 'TY'].map((kind): Row => ({ tag: `${kind} ${area}`, bias: 1, owner: '', area })),
    );
    const part = table({ rows: many, groupOf: (row: Row) => row.area });
    for (const filter of ['AY', 'AY lime', 'AY', 'TY', '']) {
      await part.setProps({ filter });
      await nextTick();
      const groups = part.findAll('tr.group').map((group) => group.text());
      const wanted = filter === 'AY lime' ? ['lime kiln 2'] : ['melting', 'refining', 'lime kiln 2'];
      expect(groups, filter).toEqual(wanted);
    }
  });

  test('gathers groups under a ruled line, also when sorted', async () => {
    const part = table({ groupOf: (row: Row) => row.area });
    const lines = () => part.findAll('tbody tr').map((row) => row.find('th, td').text());
    expect(lines()).toEqual(['melting', 'TY-1402', 'TY-1405', 'lime kiln 2', 'AY-2207']);
    await part.findAll('thead th')[1]!.trigger('click');
    expect(lines()).toEqual(['melting', 'TY-1405', 'TY-1402', 'lime kiln 2', 'AY-2207']);
  });

  test('opens a row by click and by Enter, but not where the row has an action of its own', async () => {
    const part = table({ opens: true }, { 'cell-owner': '<button class="own">Mail</button>' });
    await part.findAll('tbody tr')[0]!.trigger('click');
    await part.findAll('tbody tr')[2]!.trigger('keydown', { key: 'Enter' });
    await part.get('button.own').trigger('click');
    expect(part.emitted('open')!.map(([row]) => (row as Row).tag)).toEqual(['TY-1402', 'TY-1405']);
  });

  test('says that nothing was found, not that there is nothing, where the server filtered', () => {
    const part = table({ rows: [], total: 0, filter: 'nowhere' });
    expect(part.text()).not.toContain('No soft sensors yet.');
    expect(part.get('.q-table__bottom--nodata').text()).toMatch(/^No match\.\s+Clear filters$/);
  });

  test('leaves order and paging to the server where it is given a total', async () => {
    const part = table({ total: 120, paging: { sortBy: null, descending: false, page: 1, rowsPerPage: 3 } });
    expect(part.get('.count').text()).toBe('120 soft sensors');
    await part.findAll('thead th')[1]!.trigger('click');
    await nextTick();
    expect(firstCells(part)).toEqual(['TY-1402', 'AY-2207', 'TY-1405']);
    expect(part.emitted('update:paging')!.at(-1)).toEqual([
      { sortBy: 'bias', descending: false, page: 1, rowsPerPage: 3 },
    ]);
  });
});
