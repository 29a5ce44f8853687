import {
  formatClock,
  formatDate,
  formatDay,
  wallClock,
  zoneOffsetMinutes,
} from '../../../shared/rules/format.ts';

const MINUTE = 60_000;
const DAY = 1440 * MINUTE;
const MINUTE_STEPS = [1, 2, 5, 10, 15, 30, 60, 120, 180, 360, 720];
const DAY_STEPS = [1, 2, 5, 10];
const MONTH_STEPS = [1, 2, 3, 6, 12, 24, 60, 120, 240];

/** The instant at which a wall clock in `zone` shows a day's given minute; inside a skipped hour, the hour after it. */
function instantOf(year: number, month: number, day: number, minute: number, zone: string): number {
  const wall = Date.UTC(year, month - 1, day, 0, minute);
  const guess = wall - zoneOffsetMinutes(wall, zone) * MINUTE;
  return wall - zoneOffsetMinutes(guess, zone) * MINUTE;
}

function within(ticks: number[], from: number, to: number): number[] {
  return [...new Set(ticks)].filter((tick) => tick >= from && tick <= to).sort((a, b) => a - b);
}

function minuteTicks(from: number, to: number, step: number, zone: string): number[] {
  const ticks: number[] = [];
  const [before, after] = [from, to].map((at) => zoneOffsetMinutes(at, zone) * MINUTE);
  const first = Math.ceil((from + before!) / (step * MINUTE)) * step * MINUTE;
  // The clock reads `wall` as if it were UTC; only where the clocks change within the range must each be looked up.
  for (let wall = first; wall <= to + Math.max(before!, after!); wall += step * MINUTE) {
    const day = new Date(wall);
    const minute = day.getUTCHours() * 60 + day.getUTCMinutes();
    if (before === after) ticks.push(wall - before!);
    else ticks.push(instantOf(day.getUTCFullYear(), day.getUTCMonth() + 1, day.getUTCDate(), minute, zone));
  }
  return within(ticks, from, to);
}

/** Days counted from the 1st of each month; one too near the next 1st is left out. */
function dayTicks(from: number, to: number, step: number, zone: string): number[] {
  const ticks: number[] = [];
  const first = wallClock(from, zone);
  const months = Math.ceil((to - from) / (28 * DAY)) + 1;
  for (let ahead = 0; ahead <= months; ahead += 1) {
    const length = new Date(Date.UTC(first.year, first.month + ahead, 0)).getUTCDate();
    for (let day = 1; day <= length; day += step) {
      if (day === 1 || length + 1 - day > step / 2)
        ticks.push(instantOf(first.year, first.month + ahead, day, 0, zone));
    }
  }
  return within(ticks, from, to);
}

function monthTicks(from: number, to: number, step: number, zone: string): number[] {
  const ticks: number[] = [];
  const first = wallClock(from, zone).year * 12;
  const last = (wallClock(to, zone).year + 1) * 12;
  for (let month = Math.floor(first / step) * step; month <= last; month += step) {
    ticks.push(instantOf(Math.floor(month / 12), (month % 12) + 1, 1, 0, zone));
  }
  return within(ticks, from, to);
}

/**
 * Where the time axis is marked: at most `most` instants between `from` and `to` (milliseconds), at whole minutes,
 * hours, days or months on the clock of `zone`, so that a change of the clocks shifts no midnight.
 */
export function timeTicks(from: number, to: number, zone: string, most: number): number[] {
  const span = to - from;
  if (!(span > 0) || most < 1) return [];
  const minutes = MINUTE_STEPS.find((step) => span / (step * MINUTE) <= most);
  if (minutes !== undefined) return minuteTicks(from, to, minutes, zone);
  const days = DAY_STEPS.find((step) => span / (step * DAY) <= most);
  if (days !== undefined) return dayTicks(from, to, days, zone);
  const months = MONTH_STEPS.find((step) => span / (step * 30.4 * DAY) <= most) ?? 480;
  return monthTicks(from, to, months, zone);
}

/** "06:00" within a day, "10 Nov" at midnight, "1 Jan 2027" where a year begins. */
export function tickLabel(at: number, zone: string): string {
  const { month, day, hour, minute } = wallClock(at, zone);
  if (hour !== 0 || minute !== 0) return formatClock(at, zone);
  return month === 1 && day === 1 ? formatDate(at, zone) : formatDay(at, zone);
}

/** A range in words: "1 to 30 Nov 2026", also when it ends at midnight; with times when it is shorter than two days. */
export function rangeWords(from: number, end: number, zone: string): string {
  const to = end - from < 2 * DAY ? end : end - 1;
  if (to - from < 2 * DAY) {
    const sameDay = formatDate(from, zone) === formatDate(to, zone);
    const ending = sameDay ? formatClock(to, zone) : `${formatDate(to, zone)} ${formatClock(to, zone)}`;
    return `${formatDate(from, zone)} ${formatClock(from, zone)} to ${ending}`;
  }
  const [first, last] = [wallClock(from, zone), wallClock(to, zone)];
  if (first.year !== last.year) return `${formatDate(from, zone)} to ${formatDate(to, zone)}`;
  const start = first.month === last.month ? String(first.day) : formatDay(from, zone);
  return `${start} to ${formatDate(to, zone)}`;
}
