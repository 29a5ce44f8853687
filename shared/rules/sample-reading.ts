import type { SampleMapping } from '../contracts/sample-import.ts';
import type { SampleMends } from '../contracts/sample-mends.ts';
import { createValueReader } from './sample-number.ts';
import { expectedUnits, type SampleRegistry } from './sample-registry.ts';
import type { TableRow } from './sample-table.ts';
import { type Clock, dayOn } from './sample-taken.ts';
import { createSampleTimes } from './sample-times.ts';

export interface RowRules {
  mapping: SampleMapping;
  registry: SampleRegistry;
  /** Unit of the chosen method; null without a method. */
  methodUnit: string | null;
  header: readonly string[];
  /** The present instant, UTC milliseconds. */
  now: number;
  /** When the file came in; a sample taken at that very minute is flagged. */
  uploadedAt?: number | undefined;
  mends?: SampleMends | undefined;
  /** Of days as spreadsheets count them: a whole count is a midnight, since others have a time of day. */
  wholeIsMidnight?: boolean | undefined;
}

/** What bears on every row of a file, made once. */
export interface Reading {
  rules: RowRules;
  clock: Clock;
  /** Reads times that a person wrote anew, which always may be in ISO form. */
  isoClock: Clock;
  readValue: ReturnType<typeof createValueReader>;
  missing: ReadonlySet<string>;
  unitsAt: (samplePointId: number) => string[];
  /** Columns that no role is mapped to. */
  others: number[];
  width: number;
}

/** Makes, once for a file, what bears on each of its rows. */
export function prepareReading(rules: RowRules): Reading {
  const { mapping, registry, header, now, wholeIsMidnight = false } = rules;
  const { dateOrder: order, zone } = mapping;
  const used = new Set<number | null>(Object.values(mapping.columns));
  const about = { zone, now, today: dayOn(now, registry.zone) };
  return {
    rules,
    clock: { ...about, read: createSampleTimes({ order, zone, wholeIsMidnight }) },
    isoClock: { ...about, read: createSampleTimes({ order: 'iso', zone }) },
    readValue: createValueReader(mapping.decimal, mapping.missingWords),
    missing: new Set(mapping.missingWords.map((word) => word.toLowerCase())),
    unitsAt: rememberUnits(rules),
    others: header.map((_, column) => column).filter((column) => !used.has(column)),
    width: header.findLastIndex((name) => name.trim() !== '') + 1,
  };
}

function rememberUnits({ registry, methodUnit }: RowRules): (samplePointId: number) => string[] {
  const known = new Map<number, string[]>();
  return (samplePointId) => {
    const units = known.get(samplePointId) ?? expectedUnits(registry, samplePointId, methodUnit);
    known.set(samplePointId, units);
    return units;
  };
}

/** Has any of the days that spreadsheets count a time of day, so that a whole count among them is a midnight? */
export function holdsTimesOfDay(rows: readonly TableRow[], { dateOrder, columns }: SampleMapping): boolean {
  if (dateOrder !== 'serial-days') return false;
  return rows.some(({ cells }) => /^\d{5}[.,]\d*[1-9]/.test((cells[columns.takenAt] ?? '').trim()));
}
