import { wallClock } from './format.ts';

const two = (part: number) => String(part).padStart(2, '0');

/**
 * What the numbers of a point's samples of one day of the site begin with: "KX-09-1201-". A long name is cut, so that
 * the number stays under 80 characters.
 * @param at when the sample is or was taken, UTC milliseconds
 * @param zone IANA zone of the site
 */
export function numberStem(point: string, at: number, zone: string): string {
  const { month, day } = wallClock(at, zone);
  return `${point.slice(0, 60)}-${two(month)}${two(day)}-`;
}

/**
 * The next free number with a stem: "KX-09-1201-2".
 * @param known numbers that are taken, those of other years too; the new one is added to them
 */
export function nextNumber(stem: string, known: Set<string>): string {
  let running = 1;
  while (known.has(`${stem}${running}`)) running++;
  known.add(`${stem}${running}`);
  return `${stem}${running}`;
}
