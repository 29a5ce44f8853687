import type {
  ProposedMapping,
  SampleCounts,
  SampleImportView,
  SampleMapping,
} from '../../../shared/contracts/sample-import.ts';
import { AppError } from '../../../shared/contracts/errors.ts';
import { countOutcomes, rowsToShow, showRow } from '../../../shared/rules/sample-outcomes.ts';
import { proposeMapping } from '../../../shared/rules/sample-proposal.ts';
import { refusedCsv } from '../../../shared/rules/sample-refused.ts';
import { headOf } from '../../../shared/rules/sample-table.ts';
import type { Encoding } from '../../../shared/rules/sample-text.ts';
import type { Context } from '../../context.ts';
import type { Queryable, Tx } from '../../db/client.ts';
import type { Download } from '../../http/front-door.ts';
import type { Actor, Origin } from '../../http/request.ts';
import { type Permitted, type SiteRow, lockRow } from '../../http/rows.ts';
import type { StoredUpload } from '../../http/upload.ts';
import { toWire } from '../../http/wire.ts';
import { recordAudit } from '../audit/service.ts';
import { dropFile } from '../files/service.ts';
import { type ImportRow, addImport, findSameFile, getImportView, setImport } from './imports-repo.ts';
import { type DryRun, loadRegistry, readText, refuseForeign, runDry, unreadable } from './reading.ts';

export interface By {
  actor: Actor;
  origin: Origin;
}

const shownOfEach = 200;
const previewLines = 40;

/** Takes note of an uploaded file; one that holds no table of samples is not kept, and a sentence says why. */
export async function addUpload(
  context: Context,
  by: By,
  site: SiteRow,
  file: StoredUpload,
): Promise<SampleImportView> {
  const about = { siteId: site.id, fileId: file.id, fileName: file.name, sha256: file.sha256 };
  try {
    return await context.db.transaction(async (tx) => {
      const made = await addImport(tx, { ...about, createdBy: by.actor.id, createdAt: context.clock() });
      await note(context, tx, by, 'add', made, null);
      const { text, encoding } = await readText(tx, made);
      const proposed = await propose(tx, made, text);
      const preview = { encoding, head: headOf(text, previewLines), proposed };
      const mapping = settled(proposed);
      if (!mapping) return await assemble(tx, made, preview, null);
      const dry = await runDry(tx, made, text, mapping, context.clock());
      const row = await setImport(tx, made, { mapping, counts: countOutcomes(dry.rows) });
      return await assemble(tx, row, preview, { mapping, dry });
    });
  } catch (error) {
    await dropFile(context.db, file);
    throw error;
  }
}

async function propose(db: Queryable, row: ImportRow, text: string): Promise<ProposedMapping> {
  const proposal = proposeMapping(text, await loadRegistry(db, row.siteId, false));
  if (!proposal.ok) throw unreadable(row.fileName, proposal.problem);
  return proposal.proposed;
}

/** The proposal as a mapping, where the file left nothing open. */
function settled(proposed: ProposedMapping): SampleMapping | null {
  const { decimal, dateOrder, unit, columns, samplePointId } = proposed;
  const { takenAt, value, samplePoint } = columns;
  if (decimal === null || dateOrder === null || unit === null || takenAt === null || value === null)
    return null;
  if (samplePoint === null && samplePointId === null) return null;
  return { ...proposed, decimal, dateOrder, unit, columns: { ...columns, takenAt, value } };
}

/** How a file is read and what would become, or became, of each row. */
export async function viewImport(db: Queryable, row: ImportRow, now: Date): Promise<SampleImportView> {
  const file = await readText(db, row);
  const dry = row.mapping && (await dryRunThatFits(db, row, file.text, row.mapping, now));
  return viewOf(db, row, file, dry);
}

/** The view of an import whose rows have just been decided; `dry` is null while its mapping is open. */
export async function viewOf(
  db: Queryable,
  row: ImportRow,
  file: { text: string; encoding: Encoding },
  dry: DryRun | null,
): Promise<SampleImportView> {
  const proposed = row.mapping ?? (await propose(db, row, file.text));
  const preview = { encoding: file.encoding, head: headOf(file.text, previewLines), proposed };
  return assemble(db, row, preview, dry && { mapping: row.mapping!, dry });
}

/** Null where what the mapping names has left the site since it was said: it must be said anew. */
async function dryRunThatFits(
  db: Queryable,
  row: ImportRow,
  text: string,
  mapping: SampleMapping,
  now: Date,
): Promise<DryRun | null> {
  try {
    if (row.state === 'uploaded') await refuseForeign(db, row.siteId, mapping);
    return await runDry(db, row, text, mapping, now);
  } catch (error) {
    if (error instanceof AppError && error.code === 'invalid-input') return null;
    throw error;
  }
}

async function assemble(
  db: Queryable,
  row: ImportRow,
  preview: SampleImportView['preview'],
  result: { mapping: SampleMapping; dry: DryRun } | null,
): Promise<SampleImportView> {
  const view = toWire(await getImportView(db, row.siteId, row.id));
  const counts = result && row.state === 'uploaded' ? countOutcomes(result.dry.rows) : view.counts;
  const shown = result ? rowsToShow(result.dry.rows, shownOfEach) : [];
  return {
    import: { ...view, counts },
    preview,
    rows: shown.map((decided) => showRow(decided, result!.mapping, result!.dry.registry)),
    outcome: result?.dry.outcome ?? null,
    sameAs: toWire(await findSameFile(db, row)),
  };
}

/** Keeps what a person says of the columns, and shows what would become of each row. Nothing is added. */
export async function sayMapping(
  context: Context,
  by: By,
  row: Permitted<ImportRow>,
  body: { mapping: SampleMapping; version: number },
): Promise<SampleImportView> {
  return context.db.transaction(async (tx) => {
    const before = await lockRow(tx, 'sampleImport', row);
    const now = context.clock();
    await refuseMoved(tx, before, body.version, now);
    await refuseForeign(tx, row.siteId, body.mapping);
    const file = await readText(tx, before);
    const dry = await runDry(tx, before, file.text, body.mapping, now);
    const counts = countOutcomes(dry.rows);
    const after = await setImport(tx, row, { mapping: body.mapping, counts, version: before.version + 1 });
    await note(
      context,
      tx,
      by,
      'change',
      after,
      { mapping: body.mapping, counts },
      { mapping: before.mapping },
    );
    return viewImport(tx, after, now);
  });
}

/** A file that was added already, or that somebody else mapped meanwhile, is shown as it stands instead. */
export async function refuseMoved(tx: Tx, row: ImportRow, version: number, now: Date): Promise<void> {
  if (row.state !== 'uploaded') {
    const done = row.state === 'committed' ? 'added already' : 'added and taken out again';
    throw new AppError(
      'conflict',
      `The samples of this file were ${done}. Upload the file again to add it once more.`,
    );
  }
  if (row.version === version) return;
  const current = { ...(await viewImport(tx, row, now)) };
  const message =
    'Somebody else said anew what the columns of this file hold. What would become of its rows now is shown.';
  throw new AppError('stale', message, { current });
}

/** The refused rows as they were written, with their reasons. */
export async function refusedRows(context: Context, row: Permitted<ImportRow>): Promise<Download> {
  const { text } = await readText(context.db, row);
  const dry = row.mapping && (await dryRunThatFits(context.db, row, text, row.mapping, context.clock()));
  if (!dry)
    throw new AppError('conflict', 'Say what each column holds first; then it shows which rows are refused.');
  return {
    fileName: `${row.fileName.replace(/\.\w{1,5}$/, '')}-refused.csv`,
    contentType: 'text/csv; charset=utf-8',
    content: refusedCsv(dry.header, dry.rows, row.mapping!),
  };
}

export async function note(
  context: Context,
  tx: Tx,
  by: By,
  action: 'add' | 'change' | 'commit' | 'undo',
  row: ImportRow,
  after: { mapping?: SampleMapping; counts?: SampleCounts | null } | null,
  before: Record<string, unknown> | null = null,
): Promise<void> {
  await recordAudit(tx, {
    at: context.clock(),
    siteId: row.siteId,
    ...by,
    action,
    entity: 'sample-import',
    entityId: row.id,
    entityName: row.fileName,
    before,
    after,
  });
}
