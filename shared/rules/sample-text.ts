import type { z } from 'zod';
import type { delimiter } from '../contracts/history.ts';
import type { encodings } from '../contracts/sample-import.ts';

export type Encoding = (typeof encodings)[number];
export type Delimiter = z.infer<typeof delimiter>;

/** Why a file holds no table of samples at all. `line` counts from 1. */
export type FileProblem =
  | { code: 'empty' | 'spreadsheet' | 'document' | 'web-page' | 'binary' | 'no-rows' | 'too-many-columns' }
  | { code: 'old-workbook' | 'locked-workbook' | 'damaged-workbook' | 'large-workbook' | 'other-archive' }
  | { code: 'no-sheet'; sheet: string }
  | { code: 'one-column' | 'no-header'; found: string }
  | { code: 'open-quote' | 'stray-quote'; line: number };

export type Decoded = { ok: true; text: string; encoding: Encoding } | { ok: false; problem: FileProblem };

const refuse = (code: 'empty' | 'spreadsheet' | 'document' | 'web-page' | 'binary'): Decoded => ({
  ok: false,
  problem: { code },
});

/** First bytes by which formats that are no plain text are known. */
const signatures: [bytes: number[], code: 'spreadsheet' | 'document' | 'binary'][] = [
  [[0x50, 0x4b, 0x03, 0x04], 'spreadsheet'],
  [[0xd0, 0xcf, 0x11, 0xe0], 'spreadsheet'],
  [[0x25, 0x50, 0x44, 0x46], 'document'],
  [[0x1f, 0x8b], 'binary'],
];

/** Bytes 80 to 9F of windows-1252 (WHATWG Encoding Standard), which some decoders of Node.js take for control characters. */
const windowsSigns = '€\u0081‚ƒ„…†‡ˆ‰Š‹Œ\u008dŽ\u008f\u0090‘’“”•–—˜™š›œ\u009džŸ';
const ofWindows = (sign: string): string => windowsSigns[sign.charCodeAt(0) - 0x80]!;

/**
 * Turns the bytes of an uploaded file into text: UTF-16 where a byte order mark or the pattern of zero bytes says so,
 * else UTF-8 where every byte fits it, else windows-1252. Nothing is replaced silently.
 * @param bytes the whole file; characters are never split
 * @returns the text without byte order mark, or why it is no text: `empty`, `spreadsheet` (a workbook), `document`
 * (PDF), `web-page`, `binary`
 */
export function decodeFile(bytes: Uint8Array): Decoded {
  if (bytes.length === 0) return refuse('empty');
  for (const [start, code] of signatures) {
    if (start.every((byte, index) => bytes[index] === byte)) return refuse(code);
  }
  const encoding = encodingOf(bytes);
  const decoded = new TextDecoder(encoding).decode(bytes);
  const text = encoding === 'windows-1252' ? decoded.replace(/[\u0080-\u009f]/g, ofWindows) : decoded;
  if (/^\s*<(!doctype|html|head|body|table|\?xml)\b/i.test(text.slice(0, 500))) return refuse('web-page');
  if (text.trim() === '') return refuse('empty');
  if (hasControlCharacters(text)) return refuse('binary');
  return { ok: true, text, encoding };
}

function encodingOf(bytes: Uint8Array): Encoding {
  if (bytes[0] === 0xff && bytes[1] === 0xfe) return 'utf-16le';
  if (bytes[0] === 0xfe && bytes[1] === 0xff) return 'utf-16be';
  const zeros = [0, 0];
  const sampled = Math.min(bytes.length, 4096);
  for (let index = 0; index < sampled; index++) if (bytes[index] === 0) zeros[index % 2]!++;
  // Text of western letters in UTF-16 has a zero in nearly every second byte, and none in the others.
  if (zeros[1]! > sampled / 5 && zeros[0] === 0) return 'utf-16le';
  if (zeros[0]! > sampled / 5 && zeros[1] === 0) return 'utf-16be';
  try {
    new TextDecoder('utf-8', { fatal: true }).decode(bytes);
    return 'utf-8';
  } catch {
    return 'windows-1252';
  }
}

function hasControlCharacters(text: string): boolean {
  for (let index = 0; index < text.length; index++) {
    const code = text.charCodeAt(index);
    const harmless = code >= 32 || code === 9 || code === 10 || code === 13 || code === 12;
    if (!harmless || code === 0xfffd) return true;
  }
  return false;
}
