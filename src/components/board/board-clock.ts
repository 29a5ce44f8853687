import type { Board } from '../../../shared/contracts/board.ts';
import { formatInstant, formatZoneInWords } from '../../../shared/rules/format.ts';

/** The board's instant on the site's clock; over several sites, on that of whoever reads it. */
export function boardClock({ at, sites }: Board, chosen: { name: string; zone: string } | null): string {
  const only = chosen ?? (sites.length === 1 ? sites[0]! : null);
  const zone = only?.zone ?? Intl.DateTimeFormat().resolvedOptions().timeZone;
  const day = new Intl.DateTimeFormat('en', { weekday: 'short', timeZone: zone }).format(new Date(at));
  const time = formatInstant(at, zone).replace(/ (\d\d:\d\d)$/, ', $1');
  return `${day} ${time} ${formatZoneInWords(at, zone, only?.name ?? 'your')}`;
}
