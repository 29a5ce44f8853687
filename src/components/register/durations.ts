import { formatNumber } from '../../../shared/rules/format.ts';
import { readNumber } from './number-text.ts';

export type TimeUnit = 's' | 'min' | 'h' | 'd';

/** A duration as it is typed: an amount and what it counts. */
export interface DurationText {
  amount: string;
  per: TimeUnit;
}

const unitMs: Record<TimeUnit, number> = { s: 1000, min: 60_000, h: 3_600_000, d: 86_400_000 };
export const timeUnits = Object.keys(unitMs) as TimeUnit[];

/** The largest unit that leaves a whole number; so 7,200,000 ms reads "2 h". */
export function splitDuration(ms: number, otherwise: TimeUnit = 'min'): DurationText {
  if (ms === 0) return { amount: '0', per: otherwise };
  const per = timeUnits.findLast((unit) => ms % unitMs[unit] === 0) ?? 's';
  return { amount: String(ms / unitMs[per]), per };
}

/** Milliseconds, or a sentence that says what is wrong. */
export function readDuration({ amount, per }: DurationText): { ms: number } | { wrong: string } {
  const read = readNumber(amount);
  if ('wrong' in read) return read;
  if (read.value === null) return { wrong: 'Write how long, such as 10 min.' };
  return { ms: Math.round(read.value * unitMs[per]) };
}

/** "10 min", "7 d". */
export function sayDuration(ms: number): string {
  const { amount, per } = splitDuration(ms);
  const value = Number(amount);
  return `${formatNumber(value, Number.isInteger(value) ? 0 : 1)} ${per}`;
}
