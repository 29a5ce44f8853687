import { and, eq } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';
import { fileChunks, files } from '../../db/schema/index.ts';

export async function addFile(
  db: Queryable,
  row: typeof files.$inferInsert,
): Promise<typeof files.$inferSelect> {
  const [file] = await db.insert(files).values(row).returning();
  return file!;
}

export async function addChunk(db: Queryable, row: typeof fileChunks.$inferInsert): Promise<void> {
  await db.insert(fileChunks).values(row);
}

export async function chunkAt(
  db: Queryable,
  key: { siteId: number; fileId: number },
  chunk: number,
): Promise<Buffer | null> {
  const [row] = await db
    .select({ bytes: fileChunks.bytes })
    .from(fileChunks)
    .where(
      and(eq(fileChunks.siteId, key.siteId), eq(fileChunks.fileId, key.fileId), eq(fileChunks.chunk, chunk)),
    );
  return row?.bytes ?? null;
}

export const firstChunk = (db: Queryable, key: { siteId: number; fileId: number }) => chunkAt(db, key, 0);
