import type {
  SampleCounts,
  SampleImport,
  SampleImportView,
  SampleOutcome,
  SampleRow,
} from '../../../shared/contracts/sample-import.ts';
import type { Sample } from '../../../shared/contracts/samples.ts';
import { formatAge, formatCount, formatDate, formatInstant, plural } from '../../../shared/rules/format.ts';
import { sayFlags as sayFlagWords } from '../../../shared/rules/laboratory-sentences.ts';
import { outcomeWords, sayCounts } from '../../../shared/rules/sample-sentences.ts';
import { columnRoles, type FileColumn, type MappingForm } from './mapping-form.ts';

/** The finding about a site: "1,204 samples at Tarnby Works; the last taken 3 h ago." */
export function saySamples(
  siteName: string,
  total: number,
  last: Pick<Sample, 'takenAt' | 'takenOn'> | undefined,
  zone: string,
  now: Date,
): string {
  if (total === 0) return `No samples at ${siteName} yet.`;
  const count = `${plural(total, 'sample')} at ${siteName}`;
  if (last?.takenAt) return `${count}; the last taken ${formatAge(last.takenAt, now)}.`;
  return last?.takenOn ? `${count}; the last taken on ${formatDate(last.takenOn, zone)}.` : `${count}.`;
}

/** When a sample was taken, on the site's clock; a date alone where no time is known. */
export const sayTaken = ({ takenAt, takenOn }: Pick<Sample, 'takenAt' | 'takenOn'>, zone: string): string =>
  takenAt ? formatInstant(takenAt, zone) : takenOn ? formatDate(takenOn, zone) : '';

type Result = Pick<Sample, 'value' | 'asWritten' | 'qualifier' | 'unit' | 'statedUnit' | 'replicates'>;

/**
 * A result as the laboratory wrote it, with its limit sign and unit: "< 1200 °C". One that was converted, or that is the
 * mean of repeats, is in no cell as it stands; it shows six digits at most.
 */
export function sayValue({ value, asWritten, qualifier, unit, statedUnit, replicates }: Result): string {
  const computed = statedUnit !== null || (replicates !== null && replicates.length > 1);
  const written = computed ? String(Number(value.toPrecision(6))) : asWritten;
  const bare = written.replace(/^\s*[<>≤≥]\s*/, '').replace(/^-/, '−');
  return `${qualifier ? `${qualifier}\u00a0` : ''}${bare}${unit ? `\u00a0${unit}` : ''}`;
}

/** What the laboratory wrote before it was converted: "written as 2,700 °F"; empty where nothing was. */
export function sayStated({ statedUnit, statedValue }: Pick<Sample, 'statedUnit' | 'statedValue'>): string {
  if (statedUnit === null || statedValue === null) return '';
  return `written as ${String(statedValue).replace('-', '−')}${statedUnit ? `\u00a0${statedUnit}` : ''}`;
}

/** What is to be known of a sample, in words: that it is held or was changed, and its flags; empty for most. */
export const sayFlags = ({
  flags,
  heldSince,
  changed,
}: Pick<Sample, 'flags' | 'heldSince' | 'changed'>): string =>
  [heldSince ? 'held' : '', sayFlagWords(flags), changed ? 'corrected' : '']
    .filter((part) => part !== '')
    .join('; ');

/** What became of a file: "404 added, 5 refused", or what is still to do. */
export function sayFile({ state, counts }: Pick<SampleImport, 'state' | 'counts'>): string {
  if (!counts) return 'open: say what its columns hold';
  const words = sayCounts(counts, state === 'uploaded' ? 'will' : state === 'undone' ? 'undone' : 'was');
  const told = words.replace(/^[^:]*: /, '').replace(/\.$/, '');
  return state === 'uploaded' ? `not added yet: ${told}` : told;
}

/** The headline of a file's page. */
export function sayImport({ import: row, outcome }: SampleImportView): string {
  if (row.counts && row.state !== 'uploaded')
    return sayCounts(row.counts, row.state === 'undone' ? 'undone' : 'was');
  return row.counts && outcome ? sayCounts(row.counts, 'will') : `${row.fileName} leaves something open.`;
}

/** What came of adding a file: "2 soft sensors changed health." */
export function sayReceipt({
  softSensors,
  waiting,
  changedHealth,
}: NonNullable<SampleImportView['receipt']>): string {
  if (softSensors === 0) return 'No soft sensor in service is judged by these samples.';
  if (waiting > 0) return `${plural(waiting, 'soft sensor is', 'soft sensors are')} still being judged.`;
  if (changedHealth.length === 0) return `No health changed at ${plural(softSensors, 'soft sensor')}.`;
  return `${plural(changedHealth.length, 'soft sensor')} changed health.`;
}

/** How a file was known. */
export const sayRecognised = ({ name, taken }: NonNullable<SampleImportView['recognised']>): string =>
  taken
    ? `Known by its columns as “${name}”, and read as the last of these files was.`
    : `Read otherwise than the last file with these columns (“${name}”). Adding it makes this the way they are read.`;

/** "3 of the added carry a flag."; empty where none does. */
export function sayFlagged({ flagged }: SampleCounts): string {
  if (flagged === 0) return '';
  return `${formatCount(flagged)} of the added ${flagged === 1 ? 'carries' : 'carry'} a flag.`;
}

export interface ColumnWords {
  name: string;
  /** Null: not used. */
  holds: string | null;
}
/** What each column holds, from left to right. */
export const sayColumns = (
  columns: readonly FileColumn[],
  form: Pick<MappingForm, 'columns'>,
  zoneName: string,
): ColumnWords[] =>
  columns.map(({ name }, column) => {
    const role = columnRoles.find((known) => form.columns[known.role] === column);
    const timed = role?.role === 'takenAt' || role?.role === 'reportedAt';
    return { name, holds: role ? `${role.label}${timed ? `, ${zoneName}` : ''}` : null };
  });

/** The value of a row of a file with its unit; nothing where no value stands. */
export const sayRowValue = ({ value, unit }: Pick<SampleRow, 'value' | 'unit'>): string =>
  value.trim() === '' ? '' : `${value}${unit && !value.includes(unit) ? `\u00a0${unit}` : ''}`;

/** When a row of a file says it was taken: on the site's clock where it can be read, else as it is written. */
export const sayRowTaken = (row: Pick<SampleRow, 'taken' | 'takenAt' | 'takenOn'>, zone: string): string =>
  sayTaken(row, zone) || row.taken;

/** The outcomes in the order of their urgency. */
export const outcomeOrder: SampleOutcome[] = ['refused', 'held', 'added-with-flag', 'skipped', 'added'];

/** How many rows of an outcome there are in all; `added` of the counts holds the flagged ones too. */
export function countOf(counts: SampleCounts, outcome: SampleOutcome): number {
  if (outcome === 'added') return counts.added - counts.flagged;
  return outcome === 'added-with-flag' ? counts.flagged : counts[outcome];
}

/** "200 of 399 added are shown", for an outcome with more rows than are sent. */
export const sayShown = (shown: number, counts: SampleCounts, outcome: SampleOutcome): string =>
  `The first ${formatCount(shown)} of ${formatCount(countOf(counts, outcome))} ${outcomeWords[outcome]} are shown.`;

/** The name of a point or method; what is archived says so. */
export const withArchived = ({ name, archivedAt }: { name: string; archivedAt: string | null }): string =>
  archivedAt ? `${name}, archived` : name;

/** A precision limit in its full digits: "4 °C"; "not known" without one. */
export const sayLimit = (limit: number | null, unit: string): string =>
  limit === null ? 'not known' : `${limit}${unit ? `\u00a0${unit}` : ''}`;

/** The finding about points and methods: "5 sample points and 3 laboratory methods at Tarnby Works." */
export function sayPoints(siteName: string, points: number, methods: number): string {
  return `${plural(points, 'sample point')} and ${plural(methods, 'laboratory method')} in use at ${siteName}.`;
}
