import { dateAt, hourAt, instantOf } from './due-dates.ts';

/** Local hour from which a day's digest goes out, and the end of the morning in which what is new still joins it. */
const digestHour = 7;
const endOfMorning = 12;

/** What decides whether a person's digest is written now. */
export interface DigestFacts {
  now: Date;
  /** Zone of the person's home site. */
  zone: string;
  /** When the oldest of what waits was decided to be told. */
  oldestAt: Date;
  /** Day of the last digest at the home site, and when the mail server took it; null: it has not yet. */
  last: { day: string; sentAt: Date | null } | null;
}

/**
 * The day for which a digest is written now, as a date at the home site; null while none is. One a local day, from 07:00
 * on. What is decided after noon waits for the next morning, what a morning missed does not. While the last digest is
 * not sent, or was sent late on this very day, the next one waits, so that nobody gets two on one day.
 */
export function digestDay({ now, zone, oldestAt, last }: DigestFacts): string | null {
  const day = dateAt(now, zone);
  const hour = hourAt(now, zone);
  if (hour < digestHour) return null;
  if (hour >= endOfMorning && oldestAt >= instantOf(day, digestHour, zone)) return null;
  if (last === null) return day;
  if (last.sentAt === null || last.day >= day || dateAt(last.sentAt, zone) >= day) return null;
  return day;
}
