import type { Shift } from '../../../shared/contracts/sampling.ts';

/** Shifts as text, one to a line: "06:00 Early". */
export const shiftText = (shifts: readonly Shift[]): string =>
  shifts.map(({ name, from }) => `${from} ${name}`).join('\n');

/** The shifts that a text names, in order of time; or what is wrong with the first line that names none. */
export function readShifts(text: string): { shifts: Shift[] } | { error: string } {
  const lines = text
    .split('\n')
    .map((line) => line.trim())
    .filter((line) => line !== '');
  const shifts: Shift[] = [];
  for (const line of lines) {
    const found = /^([01]?\d|2[0-3]):([0-5]\d)\s+(.{1,30})$/.exec(line);
    if (!found) return { error: `“${line.slice(0, 40)}” is no shift. One looks like 06:00 Early.` };
    shifts.push({ from: `${found[1]!.padStart(2, '0')}:${found[2]}`, name: found[3]! });
  }
  return { shifts: shifts.sort((a, b) => (a.from < b.from ? -1 : 1)) };
}
