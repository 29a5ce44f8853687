import type { Tag } from '../../../shared/contracts/tags.ts';
import { formatNumber, NO_VALUE } from '../../../shared/rules/format.ts';

/** A figure whose decimals nobody stated: four significant digits, whole numbers in full, without trailing zeros. */
export function figureWords(value: number | null): string {
  if (value === null) return NO_VALUE;
  const rounded = Math.abs(value) >= 1000 ? Math.round(value) : Number(value.toPrecision(4));
  const [, fraction = ''] = rounded.toFixed(12).replace(/0+$/, '').split('.');
  return formatNumber(rounded, fraction.length);
}

/** "0 to 600", "above 0", "below 600"; an en dash where no range is stated. */
export function rangeWords({ rangeLow, rangeHigh }: Pick<Tag, 'rangeLow' | 'rangeHigh'>): string {
  if (rangeLow === null && rangeHigh === null) return NO_VALUE;
  if (rangeHigh === null) return `above ${figureWords(rangeLow)}`;
  if (rangeLow === null) return `below ${figureWords(rangeHigh)}`;
  return `${figureWords(rangeLow)} to ${figureWords(rangeHigh)}`;
}

/** "301.4 °C", outside its range said so. */
export function lastWords(tag: Tag): string {
  if (tag.lastValue === null) return NO_VALUE;
  return tag.unit === '' ? figureWords(tag.lastValue) : `${figureWords(tag.lastValue)}\u00a0${tag.unit}`;
}

export const kindWords: Record<Tag['kind'], string> = {
  measured: 'measured',
  estimate: 'estimate',
  shadow: 'shadow estimate',
};
