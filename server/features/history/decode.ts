import { AppError } from '../../../shared/contracts/errors.ts';
import type { TextEncoding } from '../../../shared/contracts/history.ts';

const magics: { bytes: number[]; is: string; mend: string }[] = [
  { bytes: [0x50, 0x4b], is: 'an Excel workbook or another zip file', mend: 'Save the sheet as CSV' },
  { bytes: [0xd0, 0xcf, 0x11, 0xe0], is: 'an old Excel workbook', mend: 'Save the sheet as CSV' },
  { bytes: [0x1f, 0x8b], is: 'compressed (gzip)', mend: 'Unpack it' },
  { bytes: [0x25, 0x50, 0x44, 0x46], is: 'a PDF', mend: 'Export the table as CSV' },
  { bytes: [0x50, 0x41, 0x52, 0x31], is: 'a Parquet file', mend: 'Export it as CSV' },
];

/**
 * Which encoding a file's first bytes are in. UTF-8 unless a byte order mark or zero bytes say UTF-16; text that is no
 * UTF-8 is taken for windows-1252, on purpose.
 */
export function recogniseText(head: Buffer): TextEncoding {
  const magic = magics.find(({ bytes }) => bytes.every((byte, index) => head[index] === byte));
  if (magic) throw noCsv(`This file is ${magic.is}, not CSV. ${magic.mend} and send that.`);
  const encoding = encodingOf(head);
  const start = decodeHead(head.subarray(0, 1024), encoding).trimStart();
  if (/^<(!doctype|html|\?xml|[a-z]+[\s>])/i.test(start)) {
    throw noCsv(
      'This file is a web page or XML, not CSV. Perhaps a sign-in page was saved instead of the export. Export again and send the CSV.',
    );
  }
  if (/^[{[]\s*["{[]/.test(start))
    throw noCsv('This file is JSON, not CSV. Export the readings as CSV and send that.');
  return encoding;
}

export const noCsv = (message: string): AppError =>
  new AppError('unreadable', message, { fields: [{ path: 'file', message }] });

function encodingOf(head: Buffer): TextEncoding {
  if (head[0] === 0xff && head[1] === 0xfe) return 'utf-16le';
  if (head[0] === 0xfe && head[1] === 0xff) return 'utf-16be';
  if (head.includes(0)) return utf16WithoutMark(head);
  try {
    new TextDecoder('utf-8', { fatal: true }).decode(head, { stream: true });
    return 'utf-8';
  } catch {
    // Control characters other than tab and line ends stand in no text.
    const controls = head.subarray(0, 4096).filter((byte) => byte < 9 || (byte > 13 && byte < 32)).length;
    if (controls > 0) throw binary();
    return 'windows-1252';
  }
}

/** CSV is nearly all ASCII, so that in UTF-16 every other byte of it is zero. */
function utf16WithoutMark(head: Buffer): TextEncoding {
  const bytes = head.subarray(0, 4096);
  const zeros = [0, 0];
  bytes.forEach((byte, index) => {
    if (byte === 0) zeros[index % 2]!++;
  });
  const [even, odd] = [zeros[0]! / (bytes.length / 2), zeros[1]! / (bytes.length / 2)];
  if (odd > 0.8 && even < 0.1) return 'utf-16le';
  if (even > 0.8 && odd < 0.1) return 'utf-16be';
  throw binary();
}

const binary = () =>
  noCsv(
    'This file holds no text but binary data, so it is no CSV. Export the readings as CSV and send that.',
  );

/** The text of the first piece of a file; a character cut off at its end is left out. */
export function decodeHead(head: Buffer, encoding: TextEncoding): string {
  return new TextDecoder(encoding, { fatal: encoding === 'utf-8' }).decode(head, { stream: true });
}

/**
 * A file's text, piece by piece, the byte order mark left out. A file that has been ASCII so far and then is no UTF-8
 * goes on as windows-1252; one that mixes both is refused.
 */
export async function* decodeText(
  pieces: AsyncIterable<Buffer>,
  encoding: TextEncoding,
): AsyncGenerator<string> {
  let decoder = new TextDecoder(encoding, { fatal: true });
  let ascii = encoding === 'utf-8';
  for await (const piece of pieces) {
    try {
      const text = decoder.decode(piece, { stream: true });
      yield text;
      ascii &&= text.length === piece.length;
    } catch {
      if (!ascii)
        throw noCsv(
          `This file is not ${encoding.toUpperCase()} throughout. Save it anew as UTF-8 and send it again.`,
        );
      decoder = new TextDecoder('windows-1252');
      ascii = false;
      yield decoder.decode(piece, { stream: true });
    }
  }
  try {
    yield decoder.decode();
  } catch {
    throw noCsv('This file ends in the middle of a character: it seems to be cut off. Export it again.');
  }
}
