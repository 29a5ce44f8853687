import { Temporal } from 'temporal-polyfill';

/** Two calendar days at the site, both shown whole. */
export interface DayPeriod {
  from: string;
  to: string;
}

export const presets = [
  { name: '7', label: '7 days' },
  { name: '30', label: '30 days' },
  { name: '90', label: '90 days' },
  { name: '365', label: 'A year' },
] as const;
export type PresetName = (typeof presets)[number]['name'];

const plainDay = (text: string): Temporal.PlainDate | null => {
  try {
    return /^\d{4}-\d{2}-\d{2}$/.test(text) ? Temporal.PlainDate.from(text, { overflow: 'reject' }) : null;
  } catch {
    return null;
  }
};

/** The day that an instant falls on at the site. */
export function dayAt(instant: string | number | Date, zone: string): string {
  return Temporal.Instant.fromEpochMilliseconds(new Date(instant).getTime())
    .toZonedDateTimeISO(zone)
    .toPlainDate()
    .toString();
}

/** The last `days` days up to and with the day of `end`. */
export function lastDays(days: number, end: string | number | Date, zone: string): DayPeriod {
  const to = Temporal.PlainDate.from(dayAt(end, zone));
  return { from: to.subtract({ days: days - 1 }).toString(), to: to.toString() };
}

/** Instants of a period of days: from the first midnight to the one after the last day, at the site. */
export function instantsOf({ from, to }: DayPeriod, zone: string): { from: string; to: string } {
  const midnight = (day: Temporal.PlainDate) =>
    new Date(day.toZonedDateTime(zone).epochMilliseconds).toISOString();
  return {
    from: midnight(Temporal.PlainDate.from(from)),
    to: midnight(Temporal.PlainDate.from(to).add({ days: 1 })),
  };
}

/** The last day of a period that ends, as stored, at the midnight after it. */
export function lastDayOf(end: string): number {
  return Date.parse(end) - 1;
}

/** What is wrong with two typed days, as a sentence for the second; null where nothing is. */
export function periodProblem(from: string, to: string): string | null {
  const [first, last] = [plainDay(from), plainDay(to)];
  if (!first || !last) return 'Choose both days.';
  if (Temporal.PlainDate.compare(first, last) > 0) return 'The last day must not be before the first.';
  return first.until(last, { largestUnit: 'days' }).days > 3660 ? 'Choose at most ten years.' : null;
}

/** The period an address asks for: two days, else a number of days up to `end`, else 30. */
export function periodFromQuery(
  query: Record<string, unknown>,
  end: string | number | Date,
  zone: string,
): { days: DayPeriod; preset: PresetName | null } {
  const [from, to] = [String(query.from ?? ''), String(query.to ?? '')];
  if (periodProblem(from, to) === null) return { days: { from, to }, preset: null };
  const preset = presets.find(({ name }) => name === query.days)?.name ?? '30';
  return { days: lastDays(Number(preset), end, zone), preset };
}
