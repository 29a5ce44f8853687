import type { SampleReason, SampleRow } from '../../../shared/contracts/sample-import.ts';
import type { Mendable, SampleMends } from '../../../shared/contracts/sample-mends.ts';
import { formatClock } from '../../../shared/rules/format.ts';

export const partLabels: Record<Mendable, string> = {
  sampleNumber: 'Sample number',
  takenAt: 'Time the sample was taken',
  reportedAt: 'Time the result was reported',
  value: 'Value',
  unit: 'Unit',
  samplePoint: 'Sample point',
};

const timeWritten = (row: SampleRow, column: 'taken' | 'reported'): string =>
  String(row.reasons.find(({ figures }) => figures.column === column)?.figures.written ?? '');

/** A part of a row as the file has it, to be mended from there. */
export function writtenOf(row: SampleRow, part: Mendable): string {
  if (part === 'takenAt') return row.taken;
  if (part === 'reportedAt') return timeWritten(row, 'reported');
  return row[part];
}

/** Of an hour that occurred twice: both instants, to choose from. */
export function choicesOfHour(
  reasons: readonly SampleReason[],
  zone: string,
): { part: 'takenAt' | 'reportedAt'; text: string; label: string }[] {
  return reasons
    .filter(({ code }) => code === 'double-hour')
    .flatMap(({ figures }) => {
      const part = figures.column === 'reported' ? ('reportedAt' as const) : ('takenAt' as const);
      return [figures.earlier, figures.later].map((instant) => {
        const text = String(instant);
        return { part, text, label: `It was ${formatClock(text, zone)}, ${formatClock(text, 'UTC')} UTC` };
      });
    });
}

/** What was written anew in a row, beside what the file has: "Value mended to 1482.5; the file has “14 82.5”." */
export function sayMend(mend: SampleMends[string] | undefined, row: SampleRow): string {
  if (!mend) return '';
  if (mend.leaveOut) return '';
  const parts = Object.entries(mend) as [Mendable, string][];
  return parts
    .filter(([part]) => part in partLabels)
    .map(([part, text]) => `${partLabels[part]} written anew: “${text}”${fileHas(row, part)}.`)
    .join(' ');
}

const fileHas = (row: SampleRow, part: Mendable): string => {
  const cell = row.inFile?.[part];
  return cell ? `; the file has “${cell}”` : '';
};
