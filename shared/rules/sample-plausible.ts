import { convertValue, likelyUnits } from './unit-convert.ts';

const fewest = 8;
const most = 30;
const latest = 5;
const agreeing = 2;
const spreads = 6;
/** Of a normal distribution: standard deviation over median absolute deviation, and over mean absolute deviation. */
const perMedianDeviation = 1.4826;
const perMeanDeviation = Math.sqrt(Math.PI / 2);

const median = (values: readonly number[]): number => {
  const sorted = [...values].sort((a, b) => a - b);
  const half = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[half]! : (sorted[half - 1]! + sorted[half]!) / 2;
};

export interface FarTest {
  median: number;
  isFar: (value: number) => boolean;
  /** Far from the median, whatever the newest ones are. */
  isFarFromMedian: (value: number) => boolean;
  /** Do two results lie no farther from each other than one may from the median? */
  isNear: (value: number, other: number) => boolean;
}

/**
 * Makes the test of {@link farFromLast} for many values.
 * @returns null where the last results are too few, or say nothing of their spread
 */
export function createFarTest(last: readonly number[], reproducibility: number | null): FarTest | null {
  const window = last.slice(-most);
  if (window.length < fewest) return null;
  const middle = median(window);
  const deviations = window.map((value) => Math.abs(value - middle));
  const sd =
    median(deviations) * perMedianDeviation ||
    (deviations.reduce((sum, one) => sum + one, 0) / deviations.length) * perMeanDeviation;
  const limit = Math.max(spreads * sd, reproducibility ?? 0);
  if (limit === 0) return null;
  const newest = window.slice(-latest);
  const isNear = (value: number, other: number) => Math.abs(value - other) <= limit;
  const isFarFromMedian = (value: number) => !isNear(value, middle);
  const isFar = (value: number) =>
    isFarFromMedian(value) && newest.filter((other) => isNear(value, other)).length < agreeing;
  return { median: middle, isFar, isFarFromMedian, isNear };
}

/**
 * Does a result lie far from the last accepted ones of its point and method? Beyond six robust standard deviations from
 * their median (1.4826 median absolute deviations each), and never within R of it. Where the process has moved, two of
 * the last five results at the new level are enough to accept the next.
 * @param value in the unit of the last ones
 * @param last accepted results in the order they were taken, the newest last; the last 30 count, fewer than 8 say nothing
 * @param reproducibility R of the method, in the same unit; null where it is not known
 * Source: robust location and scale by median and MAD (common practice); the limits are this project's.
 */
export const farFromLast = (
  value: number,
  last: readonly number[],
  reproducibility: number | null,
): boolean => createFarTest(last, reproducibility)?.isFar(value) ?? false;

/**
 * The unit in which a result that lies far from the last ones would fit them: a result of 2,678 among 1,470 °C is one in
 * °F.
 * @param isFar the test against the last ones, in `unit`
 * @returns null where no unit of the family explains it
 */
export function unitThatFits(value: number, unit: string, isFar: (value: number) => boolean): string | null {
  const fits = (other: string) => {
    const converted = convertValue(value, other, unit);
    return converted.ok && !isFar(converted.value);
  };
  return likelyUnits(unit).find(fits) ?? null;
}

/**
 * Would a result that lies far from the last ones fit them with its decimal sign read the other way: a thousand times
 * as large, or a thousandth?
 */
export function thousandThatFits(value: number, isFar: (value: number) => boolean): 'times' | 'part' | null {
  if (value === 0) return null;
  if (!isFar(value * 1000)) return 'times';
  return isFar(value / 1000) ? null : 'part';
}

const placeholders = new Set([0, -1, -99, -999, -9999, 999, 9999, 99999, 999.9, 9999.9]);

/** Is the number one that programs write where there is none? Suspicious only where it lies far from other results. */
export const isPlaceholder = (value: number): boolean => placeholders.has(value);
