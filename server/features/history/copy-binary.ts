import { once } from 'node:events';
import type pg from 'pg';
import { from as copyFrom } from 'pg-copy-streams';
import type { Batch } from './batch.ts';

const epoch2000Ms = Date.UTC(2000, 0, 1);
const pieceBytes = 256 * 1024;

/** Columns of a row in the order of the COPY below, with the bytes each takes behind its length. */
const rowBytes = 2 + 5 * 4 + 4 + 4 + 8 + 8 + 2;

/**
 * COPY in PostgreSQL's binary form (documentation of COPY, "Binary Format"): the server parses no text, which for
 * instants costs more than all else. Rows are (first integer, tag_id, at, value, quality).
 */
export async function copyBatch(
  client: pg.PoolClient,
  batch: Batch,
  target: 'readings' | 'stage',
  siteId: number,
): Promise<void> {
  const columns =
    target === 'readings' ? 'site_id, tag_id, at, value, quality' : 'n, tag_id, at, value, quality';
  const stream = client.query(copyFrom(`copy ${target} (${columns}) from stdin with (format binary)`));
  const finished = once(stream, 'finish');
  finished.catch(() => undefined);
  const bytes = encode(batch, target === 'readings' ? siteId : null);
  for (let at = 0; at < bytes.length; at += pieceBytes) stream.write(bytes.subarray(at, at + pieceBytes));
  stream.end();
  await finished;
}

/** `site` null: the order in which the rows came stands first instead. */
function encode(batch: Batch, site: number | null): Buffer {
  const bytes = Buffer.allocUnsafe(19 + batch.size * rowBytes + 2);
  bytes.write('PGCOPY\n\xff\r\n\0', 0, 'latin1');
  bytes.writeInt32BE(0, 11);
  bytes.writeInt32BE(0, 15);
  let at = 19;
  batch.forEachByTag((tagId, atMs, value, quality, order) => {
    const micros = (atMs - epoch2000Ms) * 1000;
    const high = Math.floor(micros / 2 ** 32);
    bytes.writeInt16BE(5, at);
    bytes.writeInt32BE(4, at + 2);
    bytes.writeInt32BE(site ?? order, at + 6);
    bytes.writeInt32BE(4, at + 10);
    bytes.writeInt32BE(tagId, at + 14);
    bytes.writeInt32BE(8, at + 18);
    bytes.writeInt32BE(high, at + 22);
    bytes.writeUInt32BE(micros - high * 2 ** 32, at + 26);
    bytes.writeInt32BE(8, at + 30);
    bytes.writeDoubleBE(value, at + 34);
    bytes.writeInt32BE(2, at + 42);
    bytes.writeInt16BE(quality, at + 46);
    at += rowBytes;
  });
  bytes.writeInt16BE(-1, at);
  return bytes;
}
