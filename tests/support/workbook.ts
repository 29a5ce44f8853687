import { crc32, deflateRawSync } from 'node:zlib';

/** A cell of a workbook: a date is shown as a day and time, `{ day }` as a day, `{ clock }` as a time of day. */
export type Cell =
  | string
  | number
  | boolean
  | null
  | Date
  | { error: string }
  | { day: Date }
  | { clock: number }
  | { formula: string; value: string };

interface ZipEntry {
  name: string;
  content: string | Uint8Array;
  /** Length said in the archive instead of the true one. */
  saidLength?: number;
}

function header(
  entry: { name: Buffer; crc: number; packed: Buffer; length: number },
  offset: number | null,
): Buffer {
  const fixed = Buffer.alloc(offset === null ? 30 : 46);
  const at = offset === null ? 4 : 6;
  fixed.writeUInt32LE(offset === null ? 0x04034b50 : 0x02014b50, 0);
  if (offset !== null) fixed.writeUInt16LE(20, 4);
  fixed.writeUInt16LE(20, at);
  fixed.writeUInt16LE(0x0800, at + 2);
  fixed.writeUInt16LE(8, at + 4);
  fixed.writeUInt32LE(entry.crc, at + 10);
  fixed.writeUInt32LE(entry.packed.length, at + 14);
  fixed.writeUInt32LE(entry.length, at + 18);
  fixed.writeUInt16LE(entry.name.length, at + 22);
  if (offset !== null) fixed.writeUInt32LE(offset, 42);
  return Buffer.concat([fixed, entry.name]);
}

/** A ZIP archive of the given files, deflated. */
export function zipOf(files: readonly ZipEntry[]): Buffer {
  const parts: Buffer[] = [];
  const central: Buffer[] = [];
  let offset = 0;
  for (const { name, content, saidLength } of files) {
    const bytes = Buffer.from(content);
    const entry = {
      name: Buffer.from(name),
      crc: crc32(bytes),
      packed: deflateRawSync(bytes),
      length: saidLength ?? bytes.length,
    };
    const local = Buffer.concat([header(entry, null), entry.packed]);
    central.push(header(entry, offset));
    parts.push(local);
    offset += local.length;
  }
  const directory = Buffer.concat(central);
  const end = Buffer.alloc(22);
  end.writeUInt32LE(0x06054b50, 0);
  end.writeUInt16LE(files.length, 8);
  end.writeUInt16LE(files.length, 10);
  end.writeUInt32LE(directory.length, 12);
  end.writeUInt32LE(offset, 16);
  return Buffer.concat([...parts, directory, end]);
}

const escaped = (text: string) =>
  text.replace(/&/g, '&amp;').replace(/</g, '&lt;').replace(/>/g, '&gt;').replace(/"/g, '&quot;');
const serialOf = (date: Date) => (date.getTime() - Date.UTC(1899, 11, 30)) / 86_400_000;

function columnName(index: number): string {
  const letter = String.fromCharCode(65 + (index % 26));
  return index < 26 ? letter : `${columnName(Math.floor(index / 26) - 1)}${letter}`;
}

function cellXml(cell: Cell, ref: string): string {
  if (cell === null) return '';
  if (typeof cell === 'string')
    return `<c r="${ref}" t="inlineStr"><is><t xml:space="preserve">${escaped(cell)}</t></is></c>`;
  if (typeof cell === 'number') return `<c r="${ref}"><v>${cell}</v></c>`;
  if (typeof cell === 'boolean') return `<c r="${ref}" t="b"><v>${Number(cell)}</v></c>`;
  if (cell instanceof Date) return `<c r="${ref}" s="1"><v>${serialOf(cell)}</v></c>`;
  if ('day' in cell) return `<c r="${ref}" s="2"><v>${serialOf(cell.day)}</v></c>`;
  if ('clock' in cell) return `<c r="${ref}" s="3"><v>${cell.clock}</v></c>`;
  if ('error' in cell) return `<c r="${ref}" t="e"><v>${escaped(cell.error)}</v></c>`;
  return `<c r="${ref}" t="str"><f>${escaped(cell.formula)}</f><v>${escaped(cell.value)}</v></c>`;
}

function sheetXml(rows: readonly (readonly Cell[])[]): string {
  const lines = rows.map((cells, row) => {
    const inside = cells.map((cell, column) => cellXml(cell, `${columnName(column)}${row + 1}`)).join('');
    return inside === '' ? '' : `<row r="${row + 1}">${inside}</row>`;
  });
  return `<?xml version="1.0" encoding="UTF-8"?><worksheet xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main"><sheetData>${lines.join('')}</sheetData></worksheet>`;
}

const main = 'http://schemas.openxmlformats.org/spreadsheetml/2006/main';
const relations = 'http://schemas.openxmlformats.org/officeDocument/2006/relationships';
const packages = 'http://schemas.openxmlformats.org/package/2006';
const styles = `<?xml version="1.0"?><styleSheet xmlns="${main}"><numFmts count="3"><numFmt numFmtId="164" formatCode="dd/mm/yyyy\\ hh:mm"/><numFmt numFmtId="165" formatCode="dd/mm/yyyy"/><numFmt numFmtId="166" formatCode="hh:mm:ss"/></numFmts><fonts count="1"><font/></fonts><fills count="1"><fill/></fills><borders count="1"><border/></borders><cellStyleXfs count="1"><xf/></cellStyleXfs><cellXfs count="4"><xf numFmtId="0"/><xf numFmtId="164" applyNumberFormat="1"/><xf numFmtId="165" applyNumberFormat="1"/><xf numFmtId="166" applyNumberFormat="1"/></cellXfs></styleSheet>`;

/** The files inside a workbook. */
export function workbookParts(sheets: Record<string, readonly (readonly Cell[])[]>): ZipEntry[] {
  const names = Object.keys(sheets);
  const list = names.map(
    (name, i) => `<sheet name="${escaped(name)}" sheetId="${i + 1}" r:id="rId${i + 1}"/>`,
  );
  const links = names.map(
    (_, i) =>
      `<Relationship Id="rId${i + 1}" Type="${relations}/worksheet" Target="worksheets/sheet${i + 1}.xml"/>`,
  );
  return [
    {
      name: '[Content_Types].xml',
      content: `<?xml version="1.0"?><Types xmlns="${packages}/content-types"><Default Extension="rels" ContentType="application/vnd.openxmlformats-package.relationships+xml"/><Default Extension="xml" ContentType="application/xml"/></Types>`,
    },
    {
      name: '_rels/.rels',
      content: `<?xml version="1.0"?><Relationships xmlns="${packages}/relationships"><Relationship Id="rId1" Type="${relations}/officeDocument" Target="xl/workbook.xml"/></Relationships>`,
    },
    {
      name: 'xl/workbook.xml',
      content: `<?xml version="1.0"?><workbook xmlns="${main}" xmlns:r="${relations}"><sheets>${list.join('')}</sheets></workbook>`,
    },
    {
      name: 'xl/_rels/workbook.xml.rels',
      content: `<?xml version="1.0"?><Relationships xmlns="${packages}/relationships">${links.join('')}<Relationship Id="rId${names.length + 1}" Type="${relations}/styles" Target="styles.xml"/></Relationships>`,
    },
    { name: 'xl/styles.xml', content: styles },
    ...Object.values(sheets).map((rows, i) => ({
      name: `xl/worksheets/sheet${i + 1}.xml`,
      content: sheetXml(rows),
    })),
  ];
}

/** A workbook as a spreadsheet saves it, with one sheet per name. */
export const workbookOf = (sheets: Record<string, readonly (readonly Cell[])[]>): Buffer =>
  zipOf(workbookParts(sheets));
