import { createRequire } from 'node:module';
import { Worker } from 'node:worker_threads';
import type { CellValue } from 'read-excel-file/universal';

export type Cell = CellValue | Date | null;
export interface RawSheet {
  sheet: string;
  data: readonly (readonly Cell[])[];
}
export type Unpacked =
  { ok: true; sheets: RawSheet[] } | { ok: false; code: 'damaged-workbook' | 'large-workbook' };

const longestMs = 60_000;
const mostMemoryMb = 1024;
const reader = createRequire(import.meta.url).resolve('read-excel-file/universal');
const code = `
  const { parentPort, workerData } = require('node:worker_threads');
  require(workerData.reader).default(workerData.bytes).then((sheets) => parentPort.postMessage(sheets));
`;

/**
 * Reads a workbook in a thread of its own. The package leaves some promises of a damaged workbook without a handler, which
 * would end the process; here it ends the thread, as do too much memory and too much time.
 */
export function unpackWorkbook(file: Uint8Array): Promise<Unpacked> {
  const bytes = new Uint8Array(file).buffer;
  return new Promise((resolve) => {
    const thread = new Worker(code, {
      eval: true,
      workerData: { reader, bytes },
      transferList: [bytes],
      resourceLimits: { maxOldGenerationSizeMb: mostMemoryMb },
      execArgv: [],
    });
    const end = (unpacked: Unpacked) => {
      clearTimeout(timer);
      resolve(unpacked);
      void thread.terminate();
    };
    const timer = setTimeout(() => end({ ok: false, code: 'large-workbook' }), longestMs);
    thread.once('message', (sheets: RawSheet[]) => end({ ok: true, sheets }));
    thread.once('error', (error: NodeJS.ErrnoException) => {
      const large = error.code === 'ERR_WORKER_OUT_OF_MEMORY';
      end({ ok: false, code: large ? 'large-workbook' : 'damaged-workbook' });
    });
    thread.once('exit', () => end({ ok: false, code: 'damaged-workbook' }));
  });
}
