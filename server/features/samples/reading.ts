import { createHash } from 'node:crypto';
import type { SampleMapping } from '../../../shared/contracts/sample-import.ts';
import { AppError, type FieldProblem } from '../../../shared/contracts/errors.ts';
import { type DecidedRow, decideRows } from '../../../shared/rules/sample-outcomes.ts';
import type { SampleRegistry } from '../../../shared/rules/sample-registry.ts';
import { createRowReader } from '../../../shared/rules/sample-row.ts';
import { sayFileProblem } from '../../../shared/rules/sample-sentences.ts';
import { type TableRow, readTable } from '../../../shared/rules/sample-table.ts';
import { type Encoding, type FileProblem, decodeFile } from '../../../shared/rules/sample-text.ts';
import type { Queryable } from '../../db/client.ts';
import { getSite } from '../sites/repo.ts';
import { readWholeFile } from '../files/service.ts';
import type { ImportRow } from './imports-repo.ts';
import { findMethod, listMethods, listSamplePoints } from './points-repo.ts';
import { findStored } from './repo.ts';

/** What becomes of each row of a file under a mapping. */
export interface DryRun {
  header: string[];
  rows: DecidedRow[];
  registry: SampleRegistry;
  /** Changes when the outcome of any row does. */
  outcome: string;
}

export function unreadable(fileName: string, problem: FileProblem): AppError {
  const sentence = sayFileProblem(problem);
  return new AppError('unreadable', `${fileName}: ${sentence}`, {
    fields: [{ path: 'file', message: sentence }],
  });
}

/** The text of an import's file. */
export async function readText(db: Queryable, row: ImportRow): Promise<{ text: string; encoding: Encoding }> {
  const decoded = decodeFile(await readWholeFile(db, row));
  if (!decoded.ok) throw unreadable(row.fileName, decoded.problem);
  return decoded;
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
    pointsByName: new Map(points.map(({ id, name }) => [name.toLowerCase(), { id, name }])),
    sensorsAt: new Map(
      points.map(({ id, goesTo }) => [
        id,
        goesTo.map((sensor) => ({ ...sensor, methodId: named(sensor.methodId) })),
      ]),
    ),
  };
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

/** The header and the rows below it; a mapping that does not fit the file is refused field by field. */
function tableUnder(
  fileName: string,
  text: string,
  mapping: SampleMapping,
): { header: string[]; rows: TableRow[] } {
  const table = readTable(text, mapping.delimiter);
  if (!table.ok) throw unreadable(fileName, table.problem);
  const at = table.rows.findIndex(({ line }) => line === mapping.headerLine);
  const message = `No row begins on line ${mapping.headerLine}. Choose the line that names the columns.`;
  if (at === -1) refuse([{ path: 'mapping.headerLine', message }]);
  const header = table.rows[at]!.cells;
  refuse(columnProblems(mapping, header.length));
  const rows = table.rows.slice(at + 1);
  if (rows.length === 0) throw unreadable(fileName, { code: 'no-rows' });
  return { header, rows };
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
 * Reads the file under the mapping and decides each row. For an import that was committed it is decided as it was then:
 * at that moment and beside what stood then, its own samples aside.
 */
export async function runDry(
  db: Queryable,
  row: ImportRow,
  text: string,
  mapping: SampleMapping,
  now: Date,
): Promise<DryRun> {
  const { header, rows } = tableUnder(row.fileName, text, mapping);
  const asOf = row.committedAt ? { importId: row.id, at: row.committedAt } : null;
  const registry = await loadRegistry(db, row.siteId, asOf !== null);
  const method = (await listMethods(db, row.siteId)).find(({ id }) => id === mapping.methodId);
  const rules = {
    mapping,
    registry,
    methodUnit: method?.unit ?? null,
    header,
    now: (asOf?.at ?? now).getTime(),
  };
  const read = rows.map(createRowReader(rules));
  const drafts = read.flatMap(({ sample }) => (sample ? [sample] : []));
  const stored = await findStored(db, row.siteId, mapping.methodId, drafts, asOf);
  const decided = decideRows(read, stored);
  return { header, rows: decided, registry, outcome: fingerprint(decided) };
}

function fingerprint(rows: readonly DecidedRow[]): string {
  const lines = rows.map(
    ({ row, outcome, reasons }) => `${row.line} ${outcome} ${reasons.map(({ code }) => code).join(' ')}`,
  );
  return createHash('sha256').update(lines.join('\n')).digest('hex').slice(0, 32);
}
