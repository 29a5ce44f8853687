import { describe, expect, test } from 'vitest';
import {
  type SampleCounts,
  exampleImport,
  exampleView,
  type ProposedMapping,
  type SampleRow,
} from '../../shared/contracts/sample-import.ts';
import { blankMethod, checkMethod, methodBodyOf } from '../../src/components/samples/method-form.ts';
import { columnsOf, ownPaths, readMapping, withReading } from '../../src/components/samples/mapping-form.ts';
import OutcomeRows from '../../src/components/samples/OutcomeRows.vue';
import {
  countOf,
  sayColumns,
  sayFile,
  sayFlags,
  sayImport,
  sayRowTaken,
  sayRowValue,
  saySamples,
  sayStated,
  sayValue,
} from '../../src/components/samples/sample-words.ts';
import { mountPart } from './mount-part.ts';

const { head, proposed } = exampleView.preview;
const zone = 'Europe/Copenhagen';
const counts: SampleCounts = { rows: 12, added: 9, flagged: 2, held: 0, skipped: 1, refused: 2 };

describe('what each column of a file of samples holds', () => {
  test('is taken from the line that names the columns, with what stands below it', () => {
    expect(columnsOf(head, proposed).map(({ name }) => name)).toEqual([
      'Probe no.',
      'Taken',
      'Reading',
      'Unit',
      'Point',
    ]);
    expect(columnsOf(head, proposed)[2]!.example).toBe('1482,5');
    expect(columnsOf(head, { ...proposed, headerLine: 9 })).toEqual([]);
  });

  test('is said from left to right, the clock beside times, the rest as not used', () => {
    const form = { columns: { ...proposed.columns, unit: null } };
    expect(sayColumns(columnsOf(head, proposed), form, 'Tarnby time').map(({ holds }) => holds)).toEqual([
      'Sample number',
      'Time the sample was taken, Tarnby time',
      'Value',
      null,
      'Sample point',
    ]);
  });

  test('is a mapping once nothing is open', () => {
    expect(readMapping(proposed).mapping).toEqual(proposed);
  });

  test('stays open, each question under its own field, where the file does not show it', () => {
    const open: ProposedMapping = {
      ...proposed,
      decimal: null,
      dateOrder: null,
      unit: null,
      columns: { ...proposed.columns, takenAt: null, value: null, unit: null, samplePoint: null },
    };
    expect(Object.keys(readMapping(open).errors ?? {}).sort()).toEqual([
      'columns.takenAt',
      'columns.value',
      'dateOrder',
      'decimal',
      'samplePointId',
      'unit',
    ]);
  });

  test('asks for no unit where a column names it, and takes a pure number for the whole file', () => {
    expect(readMapping({ ...proposed, unit: null }).mapping?.unit).toBe('');
    const pure = { ...proposed, unit: '', columns: { ...proposed.columns, unit: null } };
    expect(readMapping(pure).errors).toBeUndefined();
  });

  test('is open again where another delimiter leaves no such column', () => {
    const next = withReading(proposed, { delimiter: ',' }, { ...exampleView.preview, head });
    expect(next.columns.samplePoint).toBeNull();
    expect(next.columns.sampleNumber).toBe(0);
  });

  test('gets the server’s sentences under the fields of the form', () => {
    expect(ownPaths({ 'mapping.columns.value': 'Chosen twice.' })).toEqual({
      'columns.value': 'Chosen twice.',
    });
  });
});

describe('words about samples', () => {
  const now = new Date('2026-12-01T07:00:00Z');

  test('say how many there are and how old the last is', () => {
    const last = { takenAt: '2026-12-01T04:00:00Z', takenOn: null };
    expect(saySamples('Tarnby Works', 1204, last, zone, now)).toBe(
      '1,204 samples at Tarnby Works; the last taken 3 h ago.',
    );
    expect(saySamples('Tarnby Works', 1, { takenAt: null, takenOn: '2026-11-28' }, zone, now)).toBe(
      '1 sample at Tarnby Works; the last taken on 28 Nov 2026.',
    );
    expect(saySamples('Tarnby Works', 0, undefined, zone, now)).toBe('No samples at Tarnby Works yet.');
  });

  test('give a result as it was written, its limit sign once, a true minus', () => {
    const plain = { value: 1200, qualifier: null, unit: '°C', statedUnit: null, replicates: null };
    expect(sayValue({ ...plain, asWritten: '<1200', qualifier: '<' })).toBe('<\u00a01200\u00a0°C');
    expect(sayValue({ ...plain, asWritten: '-1.5', unit: '' })).toBe('−1.5');
  });

  test('give a converted result or the mean of repeats as it stands, not as a cell has it', () => {
    const plain = { value: 1482.2222222, asWritten: '2700', qualifier: null, unit: '°C' };
    const converted = { ...plain, statedUnit: '°F', statedValue: 2700, replicates: null };
    expect(sayValue(converted)).toBe('1482.22\u00a0°C');
    expect(sayStated(converted)).toBe('written as 2700\u00a0°F');
    expect(sayValue({ ...plain, value: 5.45, statedUnit: null, replicates: [5.4, 5.5] })).toBe(
      '5.45\u00a0°C',
    );
    expect(sayStated({ statedUnit: null, statedValue: null })).toBe('');
  });

  test('say a flag for people', () => {
    const plain = { flags: [], heldSince: null, changed: false };
    expect(sayFlags({ ...plain, flags: ['censored', 'date-only'] })).toBe(
      'outside the method’s range, not used to judge; no time of day, never compared',
    );
    expect(sayFlags({ flags: ['far-from-last'], heldSince: '2026-11-29T15:00:00Z', changed: true })).toBe(
      'held; far from the last results; corrected',
    );
    expect(sayFlags(plain)).toBe('');
  });

  test('say what became of a file, before and after it is added and taken out again', () => {
    expect(sayFile({ state: 'uploaded', counts: null })).toBe('open: say what its columns hold');
    expect(sayFile({ state: 'uploaded', counts })).toBe(
      'not added yet: 9 will be added, 1 skipped, 2 refused',
    );
    expect(sayFile({ state: 'committed', counts })).toBe('9 added, 1 skipped, 2 refused');
    expect(sayFile({ state: 'undone', counts })).toBe('9 added and taken out again');
  });

  test('head a file’s page with its outcome, or with what it leaves open', () => {
    const row = { ...exampleImport, counts };
    expect(sayImport({ ...exampleView, import: row, outcome: 'x' })).toContain('9 will be added');
    expect(sayImport({ ...exampleView, import: row, outcome: null })).toBe(
      'furnace-pyrometry-wk48.csv leaves something open.',
    );
    expect(sayImport({ ...exampleView, import: { ...row, state: 'committed' }, outcome: null })).toContain(
      '9 added',
    );
  });

  test('keep what can’t be read as it is written', () => {
    expect(sayRowTaken({ taken: '31.11.2026 06:00', takenAt: null, takenOn: null }, zone)).toBe(
      '31.11.2026 06:00',
    );
    expect(sayRowValue({ value: ' ', unit: '°C' })).toBe('');
    expect(sayRowValue({ value: '1481,0', unit: '°C' })).toBe('1481,0\u00a0°C');
  });
});

describe('the rows of a dry run', () => {
  const row = (
    line: number,
    outcome: SampleRow['outcome'],
    reasons: SampleRow['reasons'] = [],
  ): SampleRow => ({
    line,
    outcome,
    sampleNumber: `KX-${line}`,
    taken: '28.11.2026 06:00',
    takenAt: '2026-11-28T05:00:00.000Z',
    takenOn: null,
    value: '1482,5',
    unit: '°C',
    samplePoint: 'KX-09',
    goesTo: ['TY-1402'],
    reasons,
    stored: false,
    inFile: {},
  });
  const refused = row(9, 'refused', [{ code: 'no-value', figures: { written: '' } }]);
  const added = Array.from({ length: 8 }, (_none, index) => row(index + 10, 'added'));

  test('stand refused first, with the reason, and the many added on asking', async () => {
    const wrapper = mountPart(OutcomeRows, {
      props: {
        rows: [...added, refused],
        counts,
        site: { zone, name: 'Tarnby Works' },
        zone,
        mends: {},
        points: [],
        added: false,
        mayMend: false,
        mayName: false,
        busy: false,
      },
    });
    const lines = () => wrapper.findAll('tbody tr').map((line) => line.find('td').text());
    expect(lines()).toEqual(['9', '10', '11', '12', '13', '14']);
    expect(wrapper.find('tbody tr').text()).toContain('No value.');
    await wrapper.find('button.word-link').trigger('click');
    expect(lines()).toHaveLength(9);
    wrapper.unmount();
  });

  test('are counted without counting the flagged twice', () => {
    expect(countOf(counts, 'added')).toBe(7);
    expect(countOf(counts, 'added-with-flag')).toBe(2);
    expect(countOf(counts, 'refused')).toBe(2);
  });
});

describe('a laboratory method as typed', () => {
  test('refuses a comma that may mean either, beside its field', () => {
    expect(Object.keys(checkMethod({ ...blankMethod, reproducibility: '1,234' }))).toEqual([
      'reproducibility',
    ]);
  });

  test('leaves an unknown precision unknown', () => {
    const body = methodBodyOf({ ...blankMethod, name: 'Immersion pyrometry', repeatability: '4.5' });
    expect([body.repeatability, body.reproducibility]).toEqual([4.5, null]);
  });
});
