import { inflateRawSync } from 'node:zlib';
import type { FileProblem } from '../../../shared/rules/sample-text.ts';

const endSignature = 0x06054b50;
const entrySignature = 0x02014b50;
const localSignature = 0x04034b50;
const endLength = 22;
const longestComment = 65_535;
const mostUnpacked = 100 * 1024 ** 2;
const mostEntries = 2000;
const mostRows = 300_000;
const mostColumns = 1000;
const mostCells = 10_000_000;

type Checked = { ok: true } | { ok: false; problem: FileProblem };
type Code =
  | 'large-workbook'
  | 'damaged-workbook'
  | 'locked-workbook'
  | 'other-archive'
  | 'old-workbook'
  | 'too-many-columns';
class Unfit extends Error {
  readonly code: Code;
  constructor(code: Code) {
    super(code);
    this.code = code;
  }
}

interface Entry {
  name: string;
  method: number;
  encrypted: boolean;
  start: number;
  packed: number;
}

function findEnd(file: Buffer): number {
  const least = Math.max(0, file.length - endLength - longestComment);
  for (let at = file.length - endLength; at >= least; at--) {
    if (file.readUInt32LE(at) === endSignature) return at;
  }
  throw new Unfit('damaged-workbook');
}

/** The files of an archive by its directory; any field that points outside it throws a RangeError. */
function entriesOf(file: Buffer): Entry[] {
  const end = findEnd(file);
  const count = file.readUInt16LE(end + 10);
  if (count > mostEntries) throw new Unfit('large-workbook');
  const entries: Entry[] = [];
  let at = file.readUInt32LE(end + 16);
  for (let index = 0; index < count; index++) {
    if (file.readUInt32LE(at) !== entrySignature) throw new Unfit('damaged-workbook');
    const nameLength = file.readUInt16LE(at + 28);
    const local = file.readUInt32LE(at + 42);
    if (file.readUInt32LE(local) !== localSignature) throw new Unfit('damaged-workbook');
    entries.push({
      name: file.toString('utf8', at + 46, at + 46 + nameLength),
      encrypted: (file.readUInt16LE(at + 8) & 1) === 1,
      method: file.readUInt16LE(at + 10),
      packed: file.readUInt32LE(at + 20),
      start: local + 30 + file.readUInt16LE(local + 26) + file.readUInt16LE(local + 28),
    });
    at += 46 + nameLength + file.readUInt16LE(at + 30) + file.readUInt16LE(at + 32);
  }
  return entries;
}

/** The bytes of one file, whatever length the archive claims for it. */
function unpack(file: Buffer, { method, start, packed }: Entry, most: number): Buffer {
  const bytes = file.subarray(start, start + packed);
  if (method === 0) return bytes;
  if (method !== 8) throw new Unfit('damaged-workbook');
  try {
    return inflateRawSync(bytes, { maxOutputLength: Math.max(1, most) });
  } catch (error) {
    const large = (error as NodeJS.ErrnoException).code === 'ERR_BUFFER_TOO_LARGE';
    throw new Unfit(large ? 'large-workbook' : 'damaged-workbook');
  }
}

const columnNumber = (letters: string): number =>
  [...letters].reduce((sum, letter) => sum * 26 + letter.charCodeAt(0) - 64, 0);

/** A sheet is padded to a rectangle when it is read, so one cell far out stands for millions. */
function checkExtent(sheet: string): void {
  let rows = 0;
  let columns = 0;
  for (const [, letters, row] of sheet.matchAll(/\sr\s*=\s*["']([A-Z]{0,3})(\d{1,8})["']/g)) {
    rows = Math.max(rows, Number(row));
    if (letters!.length > 1 || columns < 26) columns = Math.max(columns, columnNumber(letters!));
  }
  if (columns > mostColumns) throw new Unfit('too-many-columns');
  if (rows > mostRows || rows * columns > mostCells) throw new Unfit('large-workbook');
}

function check(file: Buffer): void {
  const entries = entriesOf(file);
  const names = new Set(entries.map(({ name }) => name.toLowerCase()));
  if (names.has('xl/workbook.bin')) throw new Unfit('old-workbook');
  if (!names.has('xl/workbook.xml')) throw new Unfit('other-archive');
  if (entries.some(({ encrypted }) => encrypted)) throw new Unfit('locked-workbook');
  let left = mostUnpacked;
  for (const entry of entries) {
    if (!/\.(?:xml|rels)$/i.test(entry.name)) continue;
    const bytes = unpack(file, entry, left);
    left -= bytes.length;
    if (left < 0) throw new Unfit('large-workbook');
    if (/^xl\/worksheets\/[^/]+\.xml$/i.test(entry.name)) checkExtent(bytes.toString('latin1'));
  }
}

/**
 * Looks into an archive before a workbook is read from it: it must be one, and unpack to no more than can be held,
 * whatever it claims.
 */
export function checkArchive(file: Buffer): Checked {
  try {
    check(file);
    return { ok: true };
  } catch (error) {
    if (error instanceof Unfit) return { ok: false, problem: { code: error.code } };
    if (error instanceof RangeError) return { ok: false, problem: { code: 'damaged-workbook' } };
    throw error;
  }
}
