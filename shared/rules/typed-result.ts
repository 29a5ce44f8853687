import { createValueReader } from './sample-number.ts';

/** A result as a person typed it: a value, or a limit with its sign; else a sentence that says how to mend it. */
export type TypedResult =
  { ok: true; value: number; qualifier: '<' | '>' | null } | { ok: false; message: string };

const byPoint = createValueReader('.');
const byComma = createValueReader(',');

/**
 * Reads one result as typed by hand. A decimal comma or a decimal point is taken; thousands may be parted by spaces,
 * or by the sign that is not the decimal one. A lone comma before three digits ("1,482") may be either and is asked
 * back, while a lone point is the decimal sign, as on the screens. `<` and `>` make it a limit.
 * @param text what stands in the field
 */
export function readTypedResult(text: string): TypedResult {
  const plain = text.trim().replace(/(?<=\d) (?=\d{3}(?:\D|$))/g, '\u00a0');
  const point = byPoint(plain);
  const comma = byComma(plain);
  if (point.kind === 'missing') return { ok: false, message: 'Write a number, such as 12.5 or 12,5.' };
  if (point.kind === 'text' && comma.kind === 'text') {
    return { ok: false, message: `“${text.trim().slice(0, 40)}” is no number. One looks like 12.5 or 12,5.` };
  }
  const differ = 'value' in point && 'value' in comma && point.value !== comma.value;
  const loneComma = differ && plain.includes(',') && !plain.includes('.');
  // No thousand begins with 0: "0,125" has a decimal comma.
  const fraction = loneComma && /^\D*0/.test(plain);
  if (loneComma && !fraction) {
    const message = `Write ${plain.replace(',', '.')} or ${plain.replace(',', '')}: a comma before three digits can mean either.`;
    return { ok: false, message };
  }
  const read = 'value' in point && !fraction ? point : comma;
  if (!('value' in read)) return { ok: false, message: 'Write a number, such as 12.5 or 12,5.' };
  return { ok: true, value: read.value, qualifier: read.kind === 'censored' ? read.qualifier : null };
}

/** A number as typed, no limit; see {@link readTypedResult}. */
export function readTypedNumber(text: string): { ok: true; value: number } | { ok: false; message: string } {
  const read = readTypedResult(text);
  if (!read.ok || read.qualifier === null) return read;
  return { ok: false, message: 'Write a number without < or >.' };
}

const mostResults = 50;

/**
 * Reads results typed one to a line or between semicolons ("5,41; 5,38").
 * @param text what stands in the field; empty lines are passed over
 * @returns the numbers in their order, or what is wrong with the first that is none
 */
export function readTypedList(text: string): { ok: true; values: number[] } | { ok: false; message: string } {
  const parts = text.split(/[;\r\n\t]+/).filter((part) => part.trim() !== '');
  if (parts.length === 0) return { ok: false, message: 'Write at least one result.' };
  if (parts.length > mostResults) {
    return {
      ok: false,
      message: `One series holds ${mostResults} results at most; these are ${parts.length}.`,
    };
  }
  const values: number[] = [];
  for (const part of parts) {
    // "148 490" may be two results or one with its thousands parted.
    if (/\d\s+[+−-]?[\d.,]/.test(part)) {
      return { ok: false, message: 'Write each result on a line of its own, or part them with semicolons.' };
    }
    const read = readTypedNumber(part);
    if (!read.ok) return read;
    values.push(read.value);
  }
  return { ok: true, values };
}
