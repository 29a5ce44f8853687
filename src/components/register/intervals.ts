import { interval, isoDate, type Interval } from '../../../shared/contracts/interval.ts';
import { formatDate } from '../../../shared/rules/format.ts';
import { numberText, readNumber } from './number-text.ts';

/** An interval as it is typed. */
export interface IntervalText extends Omit<Interval, 'every' | 'anchorOn'> {
  every: string;
  anchorOn: string;
  /** The browser's date field holds a day that does not exist; it then tells no text. */
  noSuchDay: boolean;
}

export function splitInterval({ every, unit, counted, anchorOn }: Interval): IntervalText {
  return { every: numberText(every), unit, counted, anchorOn: anchorOn ?? '', noSuchDay: false };
}

export type IntervalWrong = Partial<Record<'every' | 'anchorOn', string>>;

/** The interval, or a sentence for each part that can't be used. */
export function readInterval(text: IntervalText): { interval: Interval } | { wrong: IntervalWrong } {
  const { unit, counted } = text;
  const wrong: IntervalWrong = {};
  const read = readNumber(text.every);
  const often = interval.safeParse({
    every: 'value' in read && read.value,
    unit,
    counted: 'last-done',
    anchorOn: null,
  });
  if ('wrong' in read) wrong.every = read.wrong;
  else if (read.value === null) wrong.every = `Write after how many ${unit}.`;
  else if (!often.success) wrong.every = often.error.issues[0]!.message;
  const day = counted === 'anchored' ? isoDate.safeParse(text.anchorOn) : null;
  if (day && !day.success) {
    const blank = text.anchorOn === '' && !text.noSuchDay;
    wrong.anchorOn = blank ? 'Write the day that it counts from.' : day.error.issues[0]!.message;
  }
  if (wrong.every !== undefined || wrong.anchorOn !== undefined || !often.success) return { wrong };
  return { interval: { ...often.data, counted, anchorOn: day?.data ?? null } };
}

/** "3 months", "1 day". */
export function lengthWords({ every, unit }: { every: number | string; unit: Interval['unit'] }): string {
  return `${every} ${Number(every) === 1 ? unit.slice(0, -1) : unit}`;
}

/** "3 months after it was last done", "3 months from 31 Jan 2026 on, whenever it is done". */
export function intervalWords(value: Interval): string {
  const length = lengthWords(value);
  return value.anchorOn === null || value.counted === 'last-done'
    ? `${length} after it was last done`
    : `${length} from ${formatDate(value.anchorOn, 'UTC')} on, whenever it is done`;
}
