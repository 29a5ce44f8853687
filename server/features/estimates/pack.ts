import { gzipSync } from 'node:zlib';
import type { EstimateSeries } from '../../../shared/numerics/pairing.ts';

/**
 * A replayed estimate as one compressed block, from which its pairs can be made again: 4 bytes n (little endian), then
 * n instants (float64 ms), n values (float64), n qualities (uint8).
 */
export function packSeries(series: EstimateSeries): Buffer {
  const n = series.at.length;
  const head = Buffer.alloc(4);
  head.writeUInt32LE(n);
  const part = (array: Float64Array | Uint8Array) =>
    Buffer.from(array.buffer, array.byteOffset, array.byteLength);
  return gzipSync(Buffer.concat([head, part(series.at), part(series.value), part(series.quality)]), {
    level: 1,
  });
}
