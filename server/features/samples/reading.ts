import { createHash } from 'node:crypto';
import type { FileNotice } from '../../../shared/contracts/sample-evidence.ts';
import type { SampleMapping } from '../../../shared/contracts/sample-import.ts';
import { AppError, type FieldProblem } from '../../../shared/contracts/errors.ts';
import { type FileRead, type Sheet, tableOf } from '../../../shared/rules/sample-file.ts';
import { completeMapping } from '../../../shared/rules/sample-mapping.ts';
import { findNotices } from '../../../shared/rules/sample-notices.ts';
import { type DecidedRow, decideRows } from '../../../shared/rules/sample-outcomes.ts';
import { holdsTimesOfDay, type RowRules } from '../../../shared/rules/sample-reading.ts';
import type { SampleRegistry } from '../../../shared/rules/sample-registry.ts';
import { createRowReader } from '../../../shared/rules/sample-row.ts';
import { sayFileProblem } from '../../../shared/rules/sample-sentences.ts';
import type { TableRow } from '../../../shared/rules/sample-table.ts';
import { type FileProblem, decodeFile } from '../../../shared/rules/sample-text.ts';
import type { Queryable } from '../../db/client.ts';
import { getSite } from '../sites/repo.ts';
import { readWholeFile } from '../files/service.ts';
import type { ImportRow } from './imports-repo.ts';
import { findMethod, listMethods, listSamplePoints } from './points-repo.ts';
import { recentValues } from './recent-values.ts';
import { type AddedLine, findStored, linesAdded } from './repo.ts';
import { isWorkbook, readWorkbook } from './workbook.ts';

export { type FileRead, cutsOf } from '../../../shared/rules/sample-file.ts';
export { recentValues } from './recent-values.ts';

/** What becomes of each row of a file under a mapping. */
export interface DryRun {
  header: string[];
  rows: DecidedRow[];
  registry: SampleRegistry;
  /** What strikes in the file as a whole. */
  notices: FileNotice[];
  /** Changes when the outcome of any row does. */
  outcome: string;
}

export function unreadable(fileName: string, problem: FileProblem): AppError {
  const sentence = sayFileProblem(problem);
  return new AppError('unreadable', `${fileName}: ${sentence}`, {
    fields: [{ path: 'file', message: sentence }],
  });
}

/** The workbook last unpacked: that takes seconds, and one file is looked at several times in a row. */
let lastWorkbook: { sha256: string; sheets: Sheet[] } | null = null;

/** An import's file, as text or as the sheets of a workbook. */
export async function readText(db: Queryable, row: ImportRow): Promise<FileRead> {
  if (lastWorkbook?.sha256 === row.sha256) return { kind: 'workbook', sheets: lastWorkbook.sheets };
  const bytes = await readWholeFile(db, row);
  if (!isWorkbook(bytes)) {
    const decoded = decodeFile(bytes);
    if (!decoded.ok) throw unreadable(row.fileName, decoded.problem);
    return { kind: 'text', text: decoded.text, encoding: decoded.encoding };
  }
  const read = await readWorkbook(bytes);
  if (!read.ok) throw unreadable(row.fileName, read.problem);
  lastWorkbook = { sha256: row.sha256, sheets: read.sheets };
  return { kind: 'workbook', sheets: read.sheets };
}

/** Points and soft sensors of a site that a file may name; `everAt` includes points that were archived since. */
export async function loadRegistry(db: Queryable, siteId: number, everAt: boolean): Promise<SampleRegistry> {
  const points = (await listSamplePoints(db, siteId)).filter((point) => everAt || point.archivedAt === null);
  const inUse = new Set(
    (await listMethods(db, siteId)).filter(({ archivedAt }) => !archivedAt).map(({ id }) => id),
  );
  const named = (id: number | null) => (id !== null && inUse.has(id) ? id : null);
  return {
    zone: (await getSite(db, siteId)).zone,
    pointsByName: namesOf(points),
    sensorsAt: new Map(
      points.map(({ id, goesTo }) => [
        id,
        goesTo.map((sensor) => ({ ...sensor, methodId: named(sensor.methodId) })),
      ]),
    ),
  };
}

/** Points by every name they go by; where two share one, it is the one that bears it as its own. */
function namesOf(points: readonly { id: number; name: string; aliases: string[] }[]) {
  const names = new Map<string, { id: number; name: string }>();
  for (const { id, name, aliases } of points) {
    for (const alias of aliases) names.set(alias.trim().replace(/\s+/g, ' ').toLowerCase(), { id, name });
  }
  for (const { id, name } of points) names.set(name.replace(/\s+/g, ' ').toLowerCase(), { id, name });
  return names;
}

/** Points and methods that a mapping names must be of the site and in use. */
export async function refuseForeign(db: Queryable, siteId: number, mapping: SampleMapping): Promise<void> {
  const fields: FieldProblem[] = [];
  const points = await listSamplePoints(db, siteId);
  const { samplePointId, methodId } = mapping;
  if (
    samplePointId !== null &&
    !points.some(({ id, archivedAt }) => id === samplePointId && archivedAt === null)
  ) {
    fields.push({
      path: 'mapping.samplePointId',
      message: 'This sample point is not one in use at the site. Choose another.',
    });
  }
  if (methodId !== null && !(await findMethod(db, siteId, methodId))) {
    fields.push({
      path: 'mapping.methodId',
      message: 'This method is not one in use at the site. Choose another.',
    });
  }
  refuse(fields);
}

function refuse(fields: FieldProblem[]): void {
  if (fields.length > 0) throw new AppError('invalid-input', fields[0]!.message, { fields });
}

interface Table {
  header: string[];
  rows: TableRow[];
  /** Rows above the header. */
  titleLines: number;
}

/** The header and the rows below it; a mapping that does not fit the file is refused field by field. */
function tableUnder(fileName: string, file: FileRead, mapping: SampleMapping): Table {
  const table = tableOf(file, mapping);
  if (!table.ok && table.problem.code === 'no-sheet')
    refuse([{ path: 'mapping.sheet', message: sayFileProblem(table.problem) }]);
  if (!table.ok) throw unreadable(fileName, table.problem);
  const at = table.rows.findIndex(({ line }) => line === mapping.headerLine);
  const message = `No row begins on line ${mapping.headerLine}. Choose the line that names the columns.`;
  if (at === -1) refuse([{ path: 'mapping.headerLine', message }]);
  const header = table.rows[at]!.cells;
  refuse(columnProblems(mapping, header.length));
  const rows = table.rows.slice(at + 1);
  if (rows.length === 0) throw unreadable(fileName, { code: 'no-rows' });
  return { header, rows, titleLines: at };
}

function columnProblems(mapping: SampleMapping, width: number): FieldProblem[] {
  const fields: FieldProblem[] = [];
  const used = new Set<number>();
  for (const [role, column] of Object.entries(mapping.columns)) {
    if (column === null) continue;
    const path = `mapping.columns.${role}`;
    if (column >= width) fields.push({ path, message: `The file has ${width} columns. Choose one of them.` });
    else if (used.has(column))
      fields.push({ path, message: 'This column is chosen twice. Choose another, or none.' });
    used.add(column);
  }
  if (mapping.columns.samplePoint === null && mapping.samplePointId === null) {
    const message = 'No column names the sample point. Choose the point for the whole file.';
    fields.push({ path: 'mapping.samplePointId', message });
  }
  return fields;
}

/**
 * Reads the file under the mapping and decides each row. Of an import that was committed the rows that were added stay
 * so, and the others are decided anew: a mend or a new name of a point may let them in. One that was undone is decided as
 * it was then, at that moment and beside what stood then, its own samples aside.
 */
export async function runDry(
  db: Queryable,
  row: ImportRow,
  file: FileRead,
  said: SampleMapping,
  now: Date,
): Promise<DryRun> {
  const mapping = completeMapping(said);
  const { header, rows, titleLines } = tableUnder(row.fileName, file, mapping);
  const asOf = row.state === 'undone' ? { importId: row.id, at: row.committedAt! } : null;
  const registry = await loadRegistry(db, row.siteId, asOf !== null);
  const method = (await listMethods(db, row.siteId)).find(({ id }) => id === mapping.methodId);
  const rules: RowRules = {
    mapping,
    registry,
    methodUnit: method?.unit ?? null,
    header,
    now: (asOf?.at ?? now).getTime(),
    uploadedAt: row.createdAt.getTime(),
    mends: row.mends,
    wholeIsMidnight: holdsTimesOfDay(rows, mapping),
  };
  const read = rows.map(createRowReader(rules));
  const drafts = read.flatMap(({ sample }) => (sample ? [sample] : []));
  const { methodId } = mapping;
  const stored = await findStored(db, row.siteId, methodId, drafts, asOf);
  const pointIds = [...new Set(drafts.map(({ samplePointId }) => samplePointId))];
  const lastValues = await recentValues(db, row.siteId, methodId, pointIds, asOf);
  const { repeatability = null, reproducibility = null } = method ?? {};
  const before = row.state === 'committed' ? await linesAdded(db, row) : new Map<number, AddedLine>();
  const decided = decideRows(read, stored, { repeatability, reproducibility, lastValues }).map((one) =>
    asAdded(one, before.get(one.row.line)),
  );
  const notices = findNotices(decided, { mapping, registry, titleLines, lastValues, reproducibility });
  return { header, rows: decided, registry, notices, outcome: fingerprint(decided) };
}

/** A row whose sample stands already is no longer decided: its flags say how it went in. */
function asAdded(decided: DecidedRow, before: AddedLine | undefined): DecidedRow {
  if (!before) return decided;
  const reasons = decided.reasons.filter(({ code }) => before.flags.includes(code));
  const outcome = before.held ? 'held' : before.flags.length > 0 ? 'added-with-flag' : 'added';
  return { ...decided, reasons, outcome, stored: true };
}

function fingerprint(rows: readonly DecidedRow[]): string {
  const lines = rows.map(
    ({ row, outcome, reasons }) => `${row.line} ${outcome} ${reasons.map(({ code }) => code).join(' ')}`,
  );
  return createHash('sha256').update(lines.join('\n')).digest('hex').slice(0, 32);
}
