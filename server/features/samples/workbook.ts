import type { Sheet, SheetRow } from '../../../shared/rules/sample-file.ts';
import type { FileProblem } from '../../../shared/rules/sample-text.ts';
import { checkArchive } from './archive.ts';
import { type Cell, type RawSheet, unpackWorkbook } from './workbook-thread.ts';

export type WorkbookRead = { ok: true; sheets: Sheet[] } | { ok: false; problem: FileProblem };

/** First bytes of a ZIP archive, and of the container of old and of locked workbooks. */
const archive = [0x50, 0x4b, 0x03, 0x04];
const container = [0xd0, 0xcf, 0x11, 0xe0];
const startsWith = (bytes: Uint8Array, start: readonly number[]) =>
  start.every((byte, index) => bytes[index] === byte);

/** Do these bytes begin like a workbook, of whatever kind? */
export const isWorkbook = (bytes: Uint8Array): boolean =>
  startsWith(bytes, archive) || startsWith(bytes, container);

const dayMs = 86_400_000;
const firstDays = Date.UTC(1900, 0, 2);
/** As many digits as a spreadsheet shows of a number; the rest is noise of its arithmetic. */
const shownDigits = 15;

const isDay = (cell: Cell): boolean => !(cell instanceof Date) || cell.getTime() % dayMs === 0;

/** A date cell stands for what a clock on the wall shows, wherever that is; one of the first days for a time of day. */
function dateText(date: Date, daysAlone: boolean): string {
  const rounded = new Date(Math.round(date.getTime() / 1000) * 1000);
  const iso = rounded.toISOString();
  if (rounded.getTime() < firstDays) return iso.slice(11, 19);
  return daysAlone ? iso.slice(0, 10) : `${iso.slice(0, 10)} ${iso.slice(11, 19)}`;
}

function cellOf(cell: Cell, daysAlone: boolean): string | number {
  if (cell === null) return '';
  if (cell instanceof Date) return Number.isNaN(cell.getTime()) ? '' : dateText(cell, daysAlone);
  if (typeof cell === 'number') return Number(cell.toPrecision(shownDigits));
  return typeof cell === 'boolean' ? String(cell).toUpperCase() : String(cell);
}

function sheetOf({ sheet, data: rows }: RawSheet): Sheet {
  const width = rows[0]?.length ?? 0;
  const daysAlone = Array.from({ length: width }, (_, column) =>
    rows.every((cells) => isDay(cells[column] ?? null)),
  );
  const kept: SheetRow[] = [];
  for (const [index, cells] of rows.entries()) {
    const filled = cells.map((cell, column) => cellOf(cell, daysAlone[column] ?? false));
    if (filled.some((cell) => cell !== '')) kept.push({ line: index + 1, cells: filled });
  }
  return { name: sheet, rows: kept };
}

/**
 * Reads a workbook into sheets of text cells and numbers: dates as ISO local text (days alone where no cell of the column
 * has a time of day), booleans as TRUE and FALSE; formulas by the value that was saved with them, errors as blanks.
 * @returns the sheets that hold anything, or why there are none: `old-workbook`, `locked-workbook`, `damaged-workbook`,
 * `large-workbook`, `other-archive`, `too-many-columns`, `empty`
 */
export async function readWorkbook(bytes: Uint8Array): Promise<WorkbookRead> {
  const file = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length);
  if (startsWith(bytes, container)) {
    const locked = file.includes(Buffer.from('EncryptedPackage', 'utf16le'));
    return { ok: false, problem: { code: locked ? 'locked-workbook' : 'old-workbook' } };
  }
  const checked = checkArchive(file);
  if (!checked.ok) return checked;
  const unpacked = await unpackWorkbook(file);
  if (!unpacked.ok) return { ok: false, problem: { code: unpacked.code } };
  const sheets = unpacked.sheets.map(sheetOf).filter(({ rows }) => rows.length > 0);
  return sheets.length > 0 ? { ok: true, sheets } : { ok: false, problem: { code: 'empty' } };
}
