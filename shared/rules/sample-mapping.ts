import type { ProposedMapping, SampleMapping } from '../contracts/sample-import.ts';

/** Words that laboratories write where there is no result (yet), unless a site says otherwise. */
export const defaultMissingWords: readonly string[] = [
  '-',
  '–',
  '—',
  '?',
  'n/a',
  '#n/a',
  'na',
  'n.a.',
  'nan',
  'null',
  'none',
  'pend',
  'pending',
];

/** No role has a column. */
export const noColumns: ProposedMapping['columns'] = {
  sampleNumber: null,
  takenAt: null,
  takenTime: null,
  takenFrom: null,
  reportedAt: null,
  value: null,
  unit: null,
  samplePoint: null,
  analyst: null,
};

type StoredColumns = Partial<SampleMapping['columns']> & Pick<SampleMapping['columns'], 'takenAt' | 'value'>;
type StoredMapping = Partial<SampleMapping> &
  Pick<SampleMapping, 'delimiter' | 'decimal' | 'headerLine' | 'dateOrder' | 'zone' | 'unit'> & {
    columns: StoredColumns;
  };

/** A mapping as it was stored, with what has been added to mappings since; whole ones come back as they are. */
export function completeMapping(stored: StoredMapping): SampleMapping {
  return {
    samplePointId: null,
    methodId: null,
    sheet: null,
    missingWords: [...defaultMissingWords],
    ...stored,
    columns: { ...noColumns, ...stored.columns },
  };
}
