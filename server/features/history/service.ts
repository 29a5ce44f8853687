import { AppError } from '../../../shared/contracts/errors.ts';
import type {
  HistoryImport,
  HistoryLayout,
  HistoryPreview,
  HistoryRefusal,
} from '../../../shared/contracts/history.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import type { Actor, Origin } from '../../http/request.ts';
import { type Permitted, type SiteRow, lockRow } from '../../http/rows.ts';
import type { StoredUpload } from '../../http/upload.ts';
import { toWire } from '../../http/wire.ts';
import { addJob } from '../../jobs/queue.ts';
import { recordAudit } from '../audit/service.ts';
import { dropFile, readHead } from '../files/service.ts';
import { addRun } from '../runs/repo.ts';
import { getSite } from '../sites/repo.ts';
import { type HeadWishes, readHistoryHead } from './head.ts';
import { aheadMs } from './import.ts';
import { refuseLayout } from './layout.ts';
import {
  type ImportRow,
  addImport,
  findSameFile,
  getImportView,
  listImportTags,
  listRefusals,
  setImport,
} from './repo.ts';

interface By {
  actor: Actor;
  origin: Origin;
}

/** Takes note of an uploaded file and says how it reads; one that is no CSV of tag history is not kept. */
export async function addUpload(
  context: Context,
  by: By,
  site: SiteRow,
  file: StoredUpload,
): Promise<{ import: HistoryImport; preview: HistoryPreview }> {
  const about = { siteId: site.id, fileId: file.id, fileSize: file.size };
  const head = await headOf(context, about, {}).catch(async (error: unknown) => {
    await dropFile(context.db, file);
    throw error;
  });
  const row = await context.db.transaction(async (tx) => {
    const made = await addImport(tx, {
      ...about,
      fileName: file.name,
      sha256: file.sha256,
      createdBy: by.actor.id,
      createdAt: context.clock(),
    });
    await note(context, tx, by, 'add', made, null);
    return made;
  });
  return { import: await viewOf(context, row), preview: await withSameFile(context, row, head) };
}

/** An import with its refusals, and how its file reads; not while it is being read or when the file is no longer kept. */
export async function viewImport(
  context: Context,
  row: Permitted<ImportRow>,
  wishes: HeadWishes,
): Promise<{ import: HistoryImport; preview: HistoryPreview | null; refusals: HistoryRefusal[] }> {
  const { fileId, layout, state } = row;
  const settled = layout ? { delimiter: layout.delimiter, headerLine: layout.headerLine } : {};
  const busy = state === 'waiting' || state === 'running';
  const head =
    fileId === null || busy ? null : await headOf(context, { ...row, fileId }, { ...settled, ...wishes });
  return {
    import: await viewOf(context, row),
    preview: head && (await withSameFile(context, row, head)),
    refusals: await listRefusals(context.db, row.siteId, row.id),
  };
}

/** Queues the reading of a file as laid out. Once something of it is stored, only the same layout can go on. */
export async function startImport(
  context: Context,
  by: By,
  row: Permitted<ImportRow>,
  body: { layout: HistoryLayout; replaceExisting: boolean },
): Promise<HistoryImport> {
  if (row.fileId !== null) {
    const { delimiter, headerLine } = body.layout;
    const head = await headOf(context, { ...row, fileId: row.fileId }, { delimiter, headerLine });
    refuseLayout(body.layout, head.header, await listImportTags(context.db, row.siteId));
  }
  return queueReading(context, by, row, body);
}

export const resumeImport = (context: Context, by: By, row: Permitted<ImportRow>): Promise<HistoryImport> =>
  queueReading(context, by, row, null);

async function queueReading(
  context: Context,
  by: By,
  row: Permitted<ImportRow>,
  how: { layout: HistoryLayout; replaceExisting: boolean } | null,
): Promise<HistoryImport> {
  await context.db.transaction(async (tx) => {
    const now = await lockRow(tx, 'historyImport', row);
    refuseState(now, how !== null);
    const { siteId, id } = row;
    const run = await addRun(tx, {
      siteId,
      kind: 'history-import',
      subjectId: id,
      createdBy: by.actor.id,
      createdAt: context.clock(),
    });
    await setImport(tx, row, { ...how, state: 'waiting', runId: run.id, finishedAt: null });
    await addJob(
      tx,
      'import-history',
      { siteId, historyImportId: id, runId: run.id },
      { key: `import-history:${id}`, queue: `history:${siteId}` },
    );
    await note(context, tx, by, 'start', row, how);
  });
  return viewOf(context, row);
}

function refuseState(now: ImportRow, anew: boolean): void {
  const stopped = now.state === 'failed' || now.state === 'cancelled';
  const conflict = (message: string) => new AppError('conflict', message);
  if (now.fileId === null) {
    throw conflict(
      'The file itself is dropped 7 days after its import. Upload it again to add it once more.',
    );
  }
  if (now.state === 'waiting' || now.state === 'running') throw conflict('This file is being read already.');
  if (now.state === 'done')
    throw conflict('This file was added already. Upload it again to add it once more.');
  if (anew && stopped && now.lineDone > 0) {
    throw conflict(
      'A part of this file is stored as it was laid out. Go on with that, or upload the file again.',
    );
  }
  if (!anew && !stopped)
    throw conflict('This file has not been read yet. Say what each column holds and start.');
}

async function headOf(
  context: Context,
  file: { siteId: number; fileId: number; fileSize: number },
  wishes: HeadWishes,
): Promise<Omit<HistoryPreview, 'sameAs'>> {
  const bytes = await readHead(context.db, file);
  return readHistoryHead(bytes, bytes.length >= file.fileSize, wishes, {
    tags: await listImportTags(context.db, file.siteId),
    zone: (await getSite(context.db, file.siteId)).zone,
    latestMs: context.clock().getTime() + aheadMs,
  });
}

async function withSameFile(
  context: Context,
  row: ImportRow,
  head: Omit<HistoryPreview, 'sameAs'>,
): Promise<HistoryPreview> {
  return { ...head, sameAs: toWire(await findSameFile(context.db, row)) };
}

const viewOf = async (context: Context, row: ImportRow): Promise<HistoryImport> =>
  toWire(await getImportView(context.db, row.siteId, row.id));

async function note(
  context: Context,
  tx: Tx,
  by: By,
  action: 'add' | 'start',
  row: Pick<ImportRow, 'id' | 'siteId' | 'fileName'>,
  after: Record<string, unknown> | null,
): Promise<void> {
  await recordAudit(tx, {
    at: context.clock(),
    siteId: row.siteId,
    ...by,
    action,
    entity: 'history-import',
    entityId: row.id,
    entityName: row.fileName,
    after,
  });
}
