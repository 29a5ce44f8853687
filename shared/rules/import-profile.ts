import type { SampleMapping } from '../contracts/sample-import.ts';
import type { ProfileMapping } from '../contracts/sample-profiles.ts';
import { refusedColumns } from './sample-refused.ts';
import type { TableRow } from './sample-table.ts';

type Role = keyof SampleMapping['columns'];
const headerWithin = 100;

/** A profile as far as recognising goes. */
export interface KnownProfile {
  id: number;
  name: string;
  signature: string;
  mapping: ProfileMapping;
}

/** The beginning of a file under one way of cutting it into columns. */
export interface CutFile {
  delimiter: SampleMapping['delimiter'];
  sheet: string | null;
  rows: readonly TableRow[];
}

/**
 * The names of columns, simplified so that case, points and spaces make no other file of it; a repeated name is
 * numbered. Nameless columns are empty.
 * @param header cells of the line that names the columns
 */
export function columnNames(header: readonly string[]): string[] {
  const met = new Map<string, number>();
  return header.map((cell) => {
    const name = cell
      .normalize('NFKC')
      .toLowerCase()
      .replace(/[\s_.:]+/g, ' ')
      .trim();
    const times = (met.get(name) ?? 0) + 1;
    met.set(name, times);
    return name === '' || times === 1 ? name : `${name} ${times}`;
  });
}

/** The two columns that a download of refused rows puts before those of the file make it no other file. */
const ownColumns = (names: readonly string[]): string[] => {
  const added = columnNames(refusedColumns);
  return added.every((name, index) => names[index] === name) ? names.slice(added.length) : [...names];
};

/**
 * What files of a kind are known by: the names of their columns, in any order.
 * @param header cells of the line that names the columns
 */
export function signatureOf(header: readonly string[]): string {
  return ownColumns(columnNames(header))
    .filter((name) => name !== '')
    .sort()
    .join('\n');
}

/** The names in a signature. */
export const namesIn = (signature: string): string[] => signature.split('\n');

/**
 * A mapping as a profile keeps it.
 * @param header cells of the line that names the columns
 */
export function profileOf(
  { headerLine: _ofOneFile, columns, ...rest }: SampleMapping,
  header: readonly string[],
): ProfileMapping {
  const names = columnNames(header);
  const byName = Object.entries(columns).map(([role, column]) => [
    role,
    column === null ? null : names[column],
  ]);
  return { ...rest, columns: Object.fromEntries(byName) as ProfileMapping['columns'] };
}

/**
 * A profile's mapping for one file.
 * @returns null where a column that the profile reads is nameless or missing
 */
function mappingUnder(profile: ProfileMapping, { line, cells }: TableRow): SampleMapping | null {
  const names = columnNames(cells);
  const columns = Object.entries(profile.columns).map(([role, name]) => [
    role,
    name === null ? null : names.indexOf(name),
  ]);
  if (columns.some(([, column]) => column === -1)) return null;
  return { ...profile, headerLine: line, columns: Object.fromEntries(columns) as Record<Role, never> };
}

/**
 * Recognises a file by the names of its columns, wherever its header stands and however its columns are ordered.
 * @param cuts the beginning of the file under each way of cutting it
 * @param profiles of the site
 * @returns the profile and the mapping that it makes for this file; null where none fits
 */
export function recogniseFile(
  cuts: readonly CutFile[],
  profiles: readonly KnownProfile[],
): { profile: KnownProfile; mapping: SampleMapping } | null {
  const bySignature = new Map(profiles.map((profile) => [profile.signature, profile]));
  if (bySignature.size === 0) return null;
  for (const { delimiter, sheet, rows } of cuts) {
    for (const row of rows) {
      if (row.line > headerWithin) break;
      const profile = bySignature.get(signatureOf(row.cells));
      const mapping = profile && mappingUnder({ ...profile.mapping, delimiter, sheet }, row);
      if (mapping) return { profile: profile!, mapping };
    }
  }
  return null;
}

/**
 * The name of a profile until somebody gives it a better one: that of its first file without dates and numbers.
 * @param fileName as uploaded
 */
export function nameFrom(fileName: string): string {
  const stem = fileName.replace(/\.\w{1,5}$/, '');
  const words = stem.split(/[\s_-]+/).filter((word) => !/\d/.test(word) && word !== '');
  return (words.join(' ') || stem).slice(0, 80);
}
