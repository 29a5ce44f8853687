import type { SampleMapping, SampleOutcome, SampleRow } from '../contracts/sample-import.ts';
import type { Mendable } from '../contracts/sample-mends.ts';
import type { DecidedRow } from './sample-outcomes.ts';
import type { SampleRegistry } from './sample-registry.ts';
import { cellAt } from './sample-row.ts';

const parts: Mendable[] = ['sampleNumber', 'takenAt', 'reportedAt', 'value', 'unit', 'samplePoint'];
const shownOrder: SampleOutcome[] = ['refused', 'held', 'added-with-flag', 'skipped', 'added'];

/** The rows to look at: refused first, then held, flagged, skipped, added; at most `most` of each, in file order. */
export function rowsToShow(rows: readonly DecidedRow[], most: number): DecidedRow[] {
  const by = new Map<SampleOutcome, DecidedRow[]>(shownOrder.map((outcome) => [outcome, []]));
  for (const row of rows) {
    const list = by.get(row.outcome)!;
    if (list.length < most) list.push(row);
  }
  return shownOrder.flatMap((outcome) => by.get(outcome)!);
}

/** A decided row as it is shown: what was written, in the file or anew by a person, beside how it is read. */
export function showRow(decided: DecidedRow, mapping: SampleMapping, registry: SampleRegistry): SampleRow {
  const { row, sample, taken, outcome, reasons, samplePointId, mend, stored = false } = decided;
  const { columns } = mapping;
  const inFile = (part: Mendable) => cellAt(row.cells, columns[part]);
  const text = (part: Mendable) => mend?.[part]?.trim() ?? inFile(part);
  const named = [...registry.pointsByName.values()].find(({ id }) => id === samplePointId);
  const ofDay = mend?.takenAt === undefined ? cellAt(row.cells, columns.takenTime) : '';
  return {
    line: row.line,
    outcome,
    sampleNumber: sample?.sampleNumber ?? text('sampleNumber'),
    taken: `${text('takenAt')} ${ofDay}`.trim(),
    takenAt: taken?.at == null ? null : new Date(taken.at).toISOString(),
    takenOn: taken?.on ?? null,
    value: sample?.replicates ? sample.asWritten : text('value'),
    unit: sample?.statedUnit ?? sample?.unit ?? (text('unit') || mapping.unit),
    samplePoint: named?.name ?? text('samplePoint'),
    goesTo:
      samplePointId === null
        ? []
        : (registry.sensorsAt.get(samplePointId) ?? []).map(({ tagName }) => tagName),
    reasons,
    stored,
    inFile: Object.fromEntries(
      parts.filter((part) => mend?.[part] !== undefined).map((part) => [part, inFile(part)]),
    ),
  };
}
