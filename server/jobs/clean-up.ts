import { and, isNotNull, lt, sql } from 'drizzle-orm';
import type { Context } from '../context.ts';
import { files, historyImports, oneTimeLinks, sessions } from '../db/schema/index.ts';

const historyFileDays = 7;

/** Ended sessions, dead links, and the originals of tag history that have been imported for a week. */
export async function cleanUp(context: Context): Promise<void> {
  const now = context.clock();
  await context.db.delete(sessions).where(lt(sessions.expiresAt, now));
  await context.db.delete(oneTimeLinks).where(lt(oneTimeLinks.expiresAt, now));
  await dropHistoryFiles(context, new Date(now.getTime() - historyFileDays * 86_400_000));
}

async function dropHistoryFiles(context: Context, before: Date): Promise<void> {
  await context.db.transaction(async (tx) => {
    const old = and(lt(historyImports.finishedAt, before), isNotNull(historyImports.fileId));
    const rows = await tx
      .select({ fileId: historyImports.fileId })
      .from(historyImports)
      .where(old)
      .for('update');
    if (rows.length === 0) return;
    await tx.update(historyImports).set({ fileId: null }).where(old);
    await tx.delete(files).where(sql`${files.id} = any(${sql.param(rows.map((row) => row.fileId))}::int[])`);
  });
}
