import { formatZoneInWords } from '../../../shared/rules/format.ts';

/** The zone of whoever looks: for what belongs to no site. */
export const ownZone = Intl.DateTimeFormat().resolvedOptions().timeZone;

/** How far a zone is from UTC, "(UTC+1)"; the looker's own unless named. */
export const offsetWords = (now: Date, zone = ownZone): string =>
  /\(.*\)$/.exec(formatZoneInWords(now, zone, ''))![0];
