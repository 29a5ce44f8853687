import { createTimeReader, type TimeProblem } from '../../../shared/rules/local-time.ts';
import { formatInstant, zoneOffsetMinutes } from '../../../shared/rules/format.ts';

export interface TypedPeriod {
  from: string;
  to: string;
}

/** Two instants typed on the clock of a zone, or a sentence for each that can't be used. */
export function readPeriod(
  typed: TypedPeriod,
  zone: string,
): { ok: true; from: string; to: string } | { ok: false; errors: Partial<TypedPeriod> } {
  const read = createTimeReader({ order: 'day-month-year', zone });
  const [from, to] = [read(typed.from), read(typed.to)];
  const errors: Partial<TypedPeriod> = {};
  if (!from.ok) errors.from = sayProblem(from, zone);
  if (!to.ok) errors.to = sayProblem(to, zone);
  if (!from.ok || !to.ok) return { ok: false, errors };
  if (from.at > to.at) return { ok: false, errors: { to: 'The end must not be before the beginning.' } };
  return { ok: true, from: new Date(from.at).toISOString(), to: new Date(to.at).toISOString() };
}

function sayProblem({ code, figures }: TimeProblem, zone: string): string {
  switch (code) {
    case 'no-time-of-day':
      return 'Write the time of day too, such as 29 Nov 2026 14:00.';
    case 'missing-hour':
      return `The clocks skip this time. Write ${formatInstant(String(figures.later), zone)} instead.`;
    case 'double-hour':
      return `The clocks show this time twice. Write ${withOffset(figures.earlier, zone)} or ${withOffset(figures.later, zone)}.`;
    case 'impossible-date':
      return 'There is no such day.';
    case 'impossible-time':
      return 'There is no such time of day.';
    default:
      return 'Write it as day, month, year and time: 29 Nov 2026 14:00.';
  }
}

/** "25 Oct 2026 02:30+02:00": stands for itself, whatever the clocks do. */
function withOffset(instant: unknown, zone: string): string {
  const at = String(instant);
  const minutes = zoneOffsetMinutes(at, zone);
  const two = (part: number) => String(part).padStart(2, '0');
  const size = Math.abs(minutes);
  const offset = `${minutes < 0 ? '-' : '+'}${two(Math.floor(size / 60))}:${two(size % 60)}`;
  return `${formatInstant(at, zone)}${offset}`;
}
