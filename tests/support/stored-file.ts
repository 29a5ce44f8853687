import type { Db } from '../../server/db/client.ts';
import { fileChunks, files } from '../../server/db/schema/index.ts';

/** Stores a text as an uploaded file of a site and returns its id. */
export async function addFile(
  db: Db,
  siteId: number,
  name: string,
  text: string,
  personId: number,
): Promise<number> {
  const bytes = Buffer.from(text);
  const [file] = await db
    .insert(files)
    .values({
      siteId,
      name,
      size: bytes.length,
      sha256: name,
      createdAt: new Date('2026-11-01T06:00:00Z'),
      createdBy: personId,
    })
    .returning({ id: files.id });
  await db.insert(fileChunks).values({ siteId, fileId: file!.id, chunk: 0, bytes });
  return file!.id;
}
