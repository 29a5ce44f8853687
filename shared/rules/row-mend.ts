import type { SampleReason, SampleReasonCode } from '../contracts/sample-import.ts';
import type { Mendable, SampleMends } from '../contracts/sample-mends.ts';

const parts: Partial<Record<SampleReasonCode, Mendable[]>> = {
  'no-value': ['value'],
  'text-value': ['value'],
  'no-time': ['takenAt'],
  'reported-before-taken': ['takenAt', 'reportedAt'],
  'no-point': ['samplePoint'],
  'unknown-point': ['samplePoint'],
  'no-unit': ['unit'],
  'other-unit': ['unit'],
  'far-from-last': ['value', 'unit'],
  'damaged-number': ['sampleNumber'],
  'ends-before-start': ['takenAt'],
  'long-number': ['sampleNumber'],
  'other-value-in-file': ['sampleNumber', 'value'],
  'stored-differs': ['sampleNumber'],
};
const ofTimes: SampleReasonCode[] = [
  'unreadable-time',
  'impossible-date',
  'impossible-time',
  'missing-hour',
  'double-hour',
  'ahead',
  'before-1970',
];

/**
 * The parts of a row that a person would write anew to mend what speaks against it.
 * @returns each part once, in the order of the reasons; empty where only leaving the row out helps
 */
export function partsToMend(reasons: readonly SampleReason[]): Mendable[] {
  const of = ({ code, figures }: SampleReason): Mendable[] => {
    if (ofTimes.includes(code)) return [figures.column === 'reported' ? 'reportedAt' : 'takenAt'];
    return parts[code] ?? [];
  };
  return [...new Set(reasons.flatMap(of))];
}

/**
 * What a person wrote anew, with what they wrote before: lines given again replace what stood for them, an empty one
 * takes it back.
 */
export function mergeMends(before: SampleMends, given: SampleMends): SampleMends {
  const all = Object.entries({ ...before, ...given });
  return Object.fromEntries(all.filter(([, mend]) => Object.keys(mend).length > 0));
}
