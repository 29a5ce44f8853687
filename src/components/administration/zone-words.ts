import { formatClock } from '../../../shared/rules/format.ts';
import { offsetWords } from './own-time.ts';

/** Every zone this browser knows, as choices; UTC first. */
export function zoneChoices(): { value: string; label: string }[] {
  const names = ['UTC', ...Intl.supportedValuesOf('timeZone').filter((name) => name !== 'UTC')];
  return names.map((name) => ({ value: name, label: name.replaceAll('_', ' ') }));
}

/** "Europe/Copenhagen, now 14:05 (UTC+1)". */
export function zoneNow(zone: string, now: Date): string {
  return `${zone.replaceAll('_', ' ')}, now ${formatClock(now, zone)} ${offsetWords(now, zone)}`;
}
