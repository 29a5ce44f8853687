import { formatNumber, formatQuantity, formatSignedQuantity, plural } from '../../../shared/rules/format.ts';
import type { TimeRange } from './chart-types.ts';
import { extremes, type PanelData, type SeriesMark } from './panel-data.ts';
import { rangeWords } from './time-ticks.ts';

export interface ReadoutRow {
  label: string;
  text: string;
}

export interface Readout {
  at: number;
  rows: ReadoutRow[];
}

const isPoint = ({ kind }: SeriesMark) => kind === 'references' || kind === 'rings' || kind === 'signals';

/** Index of the instant nearest to `at`; -1 for an empty list. The list is in rising order. */
export function nearestIndex(list: readonly number[], at: number): number {
  let [low, high] = [0, list.length - 1];
  while (low < high) {
    const middle = (low + high) >> 1;
    if (list[middle]! < at) low = middle + 1;
    else high = middle;
  }
  const before = low > 0 && at - list[low - 1]! <= Math.abs(list[low]! - at);
  return list.length === 0 ? -1 : before ? low - 1 : low;
}

function indexAt(mark: SeriesMark, at: number, reach: number): number {
  if (mark.kind !== 'step') {
    const index = nearestIndex(mark.at, at);
    return index >= 0 && Math.abs(mark.at[index]! - at) <= reach ? index : -1;
  }
  const index = nearestIndex(mark.at, at);
  return index >= 0 && mark.at[index]! > at ? index - 1 : index;
}

function textAt(data: PanelData, mark: SeriesMark, index: number): string | null {
  const { unit, decimals, signed } = data.panel;
  const value = mark.values[0]![index];
  if (value == null) return null;
  if (mark.kind === 'band')
    return `${formatNumber(value, decimals)} to ${formatQuantity(mark.values[1]![index], unit, decimals)}`;
  const words = signed ? formatSignedQuantity(value, unit, decimals) : formatQuantity(value, unit, decimals);
  const half = mark.halfWidth[index];
  return half == null || half === 0 ? words : `${words} ± ${formatNumber(half, decimals)}`;
}

/** The single point nearest to `at` within `reach` ms, else `at` itself: what a cursor should stand on. */
export function snap(panels: readonly PanelData[], at: number, reach: number): number {
  let best = at;
  let distance = reach;
  for (const mark of panels.flatMap(({ series }) => series).filter(isPoint)) {
    const near = mark.at[nearestIndex(mark.at, at)];
    if (near !== undefined && Math.abs(near - at) <= distance) [best, distance] = [near, Math.abs(near - at)];
  }
  return best;
}

/**
 * What every panel shows at an instant. Lines answer within `lineReach` ms of a reading, single points within `pointReach`.
 */
export function readoutAt(
  panels: readonly PanelData[],
  at: number,
  lineReach: number,
  pointReach: number,
): Readout {
  const rows = panels.flatMap((data) =>
    data.series.flatMap((mark): ReadoutRow[] => {
      const index = indexAt(mark, at, isPoint(mark) ? pointReach : lineReach);
      const text = index < 0 ? null : textAt(data, mark, index);
      return text === null ? [] : [{ label: mark.label, text }];
    }),
  );
  const happened = panels.flatMap(({ events }) =>
    events.flatMap((event) =>
      event.at.flatMap((time, index) =>
        Math.abs(time - at) <= pointReach ? [{ label: event.label, text: event.words[index] ?? '' }] : [],
      ),
    ),
  );
  return { at, rows: [...rows, ...happened] };
}

/** Instants the arrow keys step through: the single points where there are any, else those of the longest line. */
export function stops(panels: readonly PanelData[], range: TimeRange): number[] {
  const marks = panels.flatMap(({ series }) => series);
  const points = marks.filter(isPoint).flatMap(({ at }) => at);
  const line = marks.reduce<number[]>((longest, { at }) => (at.length > longest.length ? at : longest), []);
  const all = points.length > 0 ? points : line;
  return [...new Set(all)].filter((at) => at >= range.from && at <= range.to).sort((a, b) => a - b);
}

function seriesWords(data: PanelData, mark: SeriesMark): string {
  const { unit, decimals } = data.panel;
  const values = mark.values.flat().filter((value) => value !== null);
  const ends = extremes(values);
  if (ends === null) return `${mark.label}: nothing.`;
  const { min, max } = ends;
  const last = mark.kind === 'band' ? '' : `, last ${formatNumber(values.at(-1), decimals)}`;
  const count = mark.kind === 'band' ? '' : `${plural(values.length, 'value')}, `;
  return `${mark.label}: ${count}${formatNumber(min, decimals)} to ${formatQuantity(max, unit, decimals)}${last}.`;
}

/** The picture in words, for those who do not see it. */
export function summaryOf(panels: readonly PanelData[], range: TimeRange, zone: string): string {
  const parts = panels.map((data) => {
    const levels = data.levels.map(({ label, low, high, kind }) => {
      const { decimals } = data.panel;
      const size =
        kind === 'limit'
          ? formatNumber(low[0], decimals)
          : `${formatNumber(low[0], decimals)} to ${formatNumber(high[0], decimals)}`;
      return `${label}: ${size}.`;
    });
    return [`${data.panel.title}.`, ...data.series.map((mark) => seriesWords(data, mark)), ...levels].join(
      ' ',
    );
  });
  return `${rangeWords(range.from, range.to, zone)}. ${parts.join(' ')}`;
}
