import { createHash } from 'node:crypto';
import type { Readable } from 'node:stream';
import { and, eq } from 'drizzle-orm';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { Context } from '../../context.ts';
import type { Db, Queryable } from '../../db/client.ts';
import { files } from '../../db/schema/index.ts';
import { addChunk, addFile, chunkAt, firstChunk } from './repo.ts';

export type StoredFile = typeof files.$inferSelect;

const chunkBytes = 1024 * 1024;

/** Stores a stream as one file of 1 MB chunks in one transaction: wholly there or not at all. */
export async function storeFile(
  context: Context,
  stream: Readable,
  about: { siteId: number; personId: number; name: string; maxBytes: number },
): Promise<StoredFile> {
  const name = about.name.split(/[\\/]/).pop()!.slice(0, 200) || 'unnamed';
  return context.db.transaction(async (tx) => {
    const file = await addFile(tx, {
      siteId: about.siteId,
      name,
      size: 0,
      sha256: '',
      createdAt: context.clock(),
      createdBy: about.personId,
    });
    const hash = createHash('sha256');
    let size = 0;
    let chunk = 0;
    let held: Buffer[] = [];
    let heldBytes = 0;
    const flush = async (): Promise<void> => {
      if (heldBytes === 0) return;
      await addChunk(tx, {
        siteId: about.siteId,
        fileId: file.id,
        chunk: chunk++,
        bytes: Buffer.concat(held),
      });
      held = [];
      heldBytes = 0;
    };
    // Left open on refusal: the rest of the upload is read away, so that the answer still reaches the browser.
    for await (const piece of stream.iterator({ destroyOnReturn: false }) as AsyncIterable<Buffer>) {
      size += piece.length;
      if (size > about.maxBytes) throw tooLarge(about.maxBytes);
      hash.update(piece);
      held.push(piece);
      heldBytes += piece.length;
      if (heldBytes >= chunkBytes) await flush();
    }
    await flush();
    if (size === 0) {
      throw new AppError('unreadable', `${name} is empty (0 bytes). Export it again and send it once more.`, {
        fields: [{ path: 'file', message: 'This file is empty (0 bytes).' }],
      });
    }
    const [done] = await tx
      .update(files)
      .set({ size, sha256: hash.digest('hex') })
      .where(eq(files.id, file.id))
      .returning();
    return done!;
  });
}

function tooLarge(maxBytes: number): AppError {
  const message = `The file is larger than ${Math.round(maxBytes / 1024 ** 2)} MB. Split it and send the parts one by one.`;
  return new AppError('too-large', message, { fields: [{ path: 'file', message }] });
}

type FileKey = { siteId: number; fileId: number };

/** The bytes of a stored file, piece by piece. */
export async function* readFile(db: Db, key: FileKey): AsyncGenerator<Buffer> {
  for (let chunk = 0; ; chunk++) {
    const bytes = await chunkAt(db, key, chunk);
    if (!bytes) return;
    yield bytes;
  }
}

export async function readWholeFile(db: Db, key: FileKey): Promise<Buffer> {
  const pieces: Buffer[] = [];
  for await (const piece of readFile(db, key)) pieces.push(piece);
  return Buffer.concat(pieces);
}

/** The first megabyte at most: enough to see what a file is. */
export async function readHead(db: Db, key: FileKey): Promise<Buffer> {
  return (await firstChunk(db, key)) ?? Buffer.alloc(0);
}

/** Removes a file with its bytes: one that held nothing to keep, or whose content lives on elsewhere. */
export async function dropFile(
  db: Queryable,
  { siteId, id }: Pick<StoredFile, 'siteId' | 'id'>,
): Promise<void> {
  await db.delete(files).where(and(eq(files.siteId, siteId), eq(files.id, id)));
}
