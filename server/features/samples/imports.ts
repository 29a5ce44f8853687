import type {
  ProposedMapping,
  SampleCounts,
  SampleImportView,
  SampleMapping,
} from '../../../shared/contracts/sample-import.ts';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { SampleMends } from '../../../shared/contracts/sample-mends.ts';
import { mergeMends } from '../../../shared/rules/row-mend.ts';
import { countOutcomes } from '../../../shared/rules/sample-outcomes.ts';
import { refusedCsv } from '../../../shared/rules/sample-refused.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import type { Download } from '../../http/front-door.ts';
import type { Actor, Origin } from '../../http/request.ts';
import { type Permitted, type SiteRow, lockRow } from '../../http/rows.ts';
import type { StoredUpload } from '../../http/upload.ts';
import { recordAudit } from '../audit/service.ts';
import { dropFile } from '../files/service.ts';
import { dryRunThatFits, propose, viewImport, viewOf } from './import-view.ts';
import { type ImportRow, addImport, setImport } from './imports-repo.ts';
import { recognise } from './profiles.ts';
import { readText, refuseForeign, runDry } from './reading.ts';

export interface By {
  actor: Actor;
  origin: Origin;
}

/** Takes note of an uploaded file; one that holds no table of samples is not kept, and a sentence says why. */
export async function addUpload(
  context: Context,
  by: By,
  site: SiteRow,
  upload: StoredUpload,
): Promise<SampleImportView> {
  const about = { siteId: site.id, fileId: upload.id, fileName: upload.name, sha256: upload.sha256 };
  try {
    return await context.db.transaction(async (tx) => {
      const made = await addImport(tx, { ...about, createdBy: by.actor.id, createdAt: context.clock() });
      await note(context, tx, by, 'add', made, null);
      const file = await readText(tx, made);
      const known = await recognise(tx, made, file, context.clock());
      const mapping = known?.mapping ?? settled(await propose(tx, made, file));
      const profileId = known?.profile.id ?? null;
      if (!mapping) return await viewOf(tx, await setImport(tx, made, { profileId }), file, null);
      const dry = known?.dry ?? (await runDry(tx, made, file, mapping, context.clock()));
      const row = await setImport(tx, made, { mapping, profileId, counts: countOutcomes(dry.rows) });
      return await viewOf(tx, row, file, dry);
    });
  } catch (error) {
    await dropFile(context.db, upload);
    throw error;
  }
}

/** The proposal as a mapping, where the file left nothing open. */
function settled(proposed: ProposedMapping): SampleMapping | null {
  const { decimal, dateOrder, zone, unit, columns, samplePointId } = proposed;
  const { takenAt, value, samplePoint } = columns;
  if (decimal === null || dateOrder === null || zone === null || unit === null) return null;
  if (takenAt === null || value === null) return null;
  if (samplePoint === null && samplePointId === null) return null;
  return { ...proposed, decimal, dateOrder, zone, unit, columns: { ...columns, takenAt, value } };
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
    const dry = await runDry(tx, before, file, body.mapping, now);
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

/** Keeps what a person wrote in place of cells, and shows what would become of each row. Nothing is added. */
export async function mendRows(
  context: Context,
  by: By,
  row: Permitted<ImportRow>,
  body: { mends: SampleMends; version: number },
): Promise<SampleImportView> {
  return context.db.transaction(async (tx) => {
    const before = await lockRow(tx, 'sampleImport', row);
    const now = context.clock();
    if (before.state === 'undone') refuseUndone();
    await refuseStale(tx, before, body.version, now);
    const mends = mergeMends(before.mends, body.mends);
    const after = await setImport(tx, row, { mends, version: before.version + 1 });
    await note(context, tx, by, 'change', after, { mends: body.mends });
    return viewImport(tx, after, now);
  });
}

function refuseUndone(): never {
  const message =
    'The samples of this file were added and taken out again. Upload the file again to add it once more.';
  throw new AppError('conflict', message);
}

/** Once samples of a file stand, what its columns hold is settled. */
export async function refuseMoved(tx: Tx, row: ImportRow, version: number, now: Date): Promise<void> {
  if (row.state === 'undone') refuseUndone();
  if (row.state === 'committed') {
    const message = 'The samples of this file were added already. Undo that first, or mend single rows.';
    throw new AppError('conflict', message);
  }
  await refuseStale(tx, row, version, now);
}

/** A file that somebody else worked on meanwhile is shown as it stands instead. */
export async function refuseStale(tx: Tx, row: ImportRow, version: number, now: Date): Promise<void> {
  if (row.version === version) return;
  const current = { ...(await viewImport(tx, row, now)) };
  const message = 'Somebody else worked on this file meanwhile. What would become of its rows now is shown.';
  throw new AppError('stale', message, { current });
}

/** The refused rows as they were written, with their reasons. */
export async function refusedRows(context: Context, row: Permitted<ImportRow>): Promise<Download> {
  const file = await readText(context.db, row);
  const dry = row.mapping && (await dryRunThatFits(context.db, row, file, row.mapping, context.clock()));
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
  after: { mapping?: SampleMapping; counts?: SampleCounts | null; mends?: SampleMends } | null,
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
