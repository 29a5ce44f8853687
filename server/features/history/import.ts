import { AppError } from '../../../shared/contracts/errors.ts';
import type { Context } from '../../context.ts';
import type { Jobs } from '../../jobs/queue.ts';
import { recordAudit } from '../audit/service.ts';
import { readFile, readHead } from '../files/service.ts';
import { finishRun } from '../runs/repo.ts';
import { type Progress, carryOut } from '../runs/work.ts';
import { ChunkStore } from './chunk-store.ts';
import { decodeText, recogniseText } from './decode.ts';
import { RecordReader, type TakeRow } from './records.ts';
import {
  type ImportRow,
  countRefusals,
  findImport,
  findRunEnd,
  listImportTags,
  lockImport,
  setImport,
} from './repo.ts';
import { rowTaker } from './rows.ts';

/** How much text is read before a look is taken at whether a chunk is full. */
const sliceLength = 64 * 1024;
/** Times further ahead than clocks go wrong are mistakes. */
export const aheadMs = 10 * 60_000;

/**
 * The job that reads a laid-out file into `readings`, chunk by chunk. However it ends, its run says so; begun again, it
 * goes on behind the last stored line.
 */
export async function importHistory(context: Context, payload: Jobs['import-history']): Promise<void> {
  const { siteId, historyImportId, runId } = payload;
  const row = await findImport(context.db, siteId, historyImportId);
  // Another run has taken over since this job was queued.
  if (!row || row.runId !== runId) return;
  if (row.state === 'done')
    return finishRun(context.db, runId, context.clock(), { state: 'done', result: {} });
  try {
    await carryOut(context, runId, (progress) => readIn(context, row, progress));
  } finally {
    await followRun(context, row, runId);
  }
}

/** An import that did not come to its end stands as its run does. */
async function followRun(context: Context, row: ImportRow, runId: number): Promise<void> {
  const run = await findRunEnd(context.db, row.siteId, runId);
  if (run?.state !== 'failed' && run?.state !== 'cancelled') return;
  await setImport(context.db, row, { state: run.state, finishedAt: run.finishedAt });
}

async function readIn(
  context: Context,
  row: ImportRow,
  progress: Progress,
): Promise<Record<string, unknown>> {
  const { db } = context;
  const { siteId, id, layout } = row;
  if (row.fileId === null || !layout)
    throw new AppError('conflict', 'The file is no longer kept. Upload it again.');
  const key = { siteId, fileId: row.fileId };
  await setImport(db, row, { state: 'running', finishedAt: null });
  const encoding = recogniseText(await readHead(db, key));
  await progress.report(row.lineDone, await countLines(readFile(db, key)));

  const store = new ChunkStore(context, row, await countRefusals(db, siteId, id));
  const tags = await listImportTags(db, siteId);
  const latestMs = context.clock().getTime() + aheadMs;
  let take: TakeRow | null = null;
  let line = 0;
  const records = new RecordReader(layout.delimiter, (cells, at) => {
    line = at;
    if (at === layout.headerLine) take = rowTaker(layout, { header: cells, tags, latestMs, ...store.into });
    else if (at > row.lineDone) take?.(cells, at);
  });
  for await (const text of decodeText(readFile(db, key), encoding)) {
    for (let at = 0; at < text.length; at += sliceLength) {
      await records.push(text.slice(at, at + sliceLength));
      if (!store.full(line)) continue;
      await store.flush(line);
      await progress.report(line);
    }
  }
  await records.end();
  await store.flush(line);
  await progress.report(line, line);
  return finish(context, row);
}

/** Line ends of the whole file; reading it once more is quick beside storing it, and people are told how far it is. */
async function countLines(pieces: AsyncIterable<Buffer>): Promise<number> {
  let lines = 1;
  for await (const piece of pieces) {
    for (let at = piece.indexOf(10); at >= 0; at = piece.indexOf(10, at + 1)) lines++;
  }
  return lines;
}

async function finish(context: Context, row: ImportRow): Promise<Record<string, unknown>> {
  return context.db.transaction(async (tx) => {
    const { added, unchanged, replaced, keptDifferent, refused } = await lockImport(tx, row.siteId, row.id);
    const counts = { added, unchanged, replaced, keptDifferent, refused };
    await setImport(tx, row, { state: 'done', finishedAt: context.clock() });
    await recordAudit(tx, {
      at: context.clock(),
      siteId: row.siteId,
      actor: null,
      origin: { requestId: `run ${row.runId}`, fromAddress: '' },
      action: 'commit',
      entity: 'history-import',
      entityId: row.id,
      entityName: row.fileName,
      after: counts,
    });
    return counts;
  });
}
