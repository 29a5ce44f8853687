const NUMBER = /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i;

/**
 * A number as a person types it; blank is null. A comma is never guessed at: it is a decimal sign in one country and
 * parts thousands in another.
 */
export function readNumber(text: string): { value: number | null } | { wrong: string } {
  const plain = text
    .trim()
    .replace(/[\s\u00a0\u202f]/g, '')
    .replace('−', '-');
  if (plain === '') return { value: null };
  if (NUMBER.test(plain)) return { value: Number(plain) };
  if (plain.includes(',')) {
    const point = plain.replace(',', '.');
    const without = plain.replaceAll(',', '');
    const either = NUMBER.test(point) && NUMBER.test(without);
    return {
      wrong: either ? `Write ${point} or ${without}: a comma can mean either.` : 'Write it without commas.',
    };
  }
  return { wrong: `“${text.trim()}” is no number. One looks like 12.5.` };
}

/** A number as it stands in a field: full digits, plain minus. */
export function numberText(value: number | null): string {
  return value === null ? '' : String(value);
}
