import uPlot from 'uplot';
import type {
  AllowedMark,
  ChartMark,
  ChartPanel,
  EventMark,
  Instants,
  LimitMark,
  Values,
} from './chart-types.ts';

/** A mark whose instants are milliseconds in rising order. */
export interface SeriesMark {
  kind: 'line' | 'step' | 'band' | 'references' | 'rings' | 'signals';
  label: string;
  at: number[];
  /** line, step, references, rings, signals: one list. band: low, high. */
  values: (number | null)[][];
  halfWidth: (number | null)[];
  tone: 'estimate' | 'ink' | 'soft';
  dashed: boolean;
}

/** A level for all time (`at` empty) or in steps. */
export interface LevelMark {
  kind: 'allowed' | 'limit';
  label: string;
  at: number[];
  low: (number | null)[];
  high: (number | null)[];
}

export interface HappeningMark {
  kind: 'event';
  label: string;
  at: number[];
  until: (number | null | undefined)[];
  words: string[];
}

export interface PanelData {
  panel: ChartPanel;
  series: SeriesMark[];
  levels: LevelMark[];
  events: HappeningMark[];
}

export function toMs(at: Instants[number]): number {
  return typeof at === 'number' ? at : Date.parse(at);
}

function pick<T>(values: readonly T[], order: readonly number[]): T[] {
  return order.map((index) => values[index]!);
}

function rising(at: readonly number[]): number[] {
  const order = at.map((_, index) => index).filter((index) => !Number.isNaN(at[index]));
  const sorted = order.every((index, k) => k === 0 || at[order[k - 1]!]! <= at[index]!);
  return sorted ? order : order.sort((a, b) => at[a]! - at[b]!);
}

function spread(value: number | Values, count: number): Values {
  return typeof value === 'number' ? Array.from({ length: count }, () => value) : value;
}

function level(mark: AllowedMark | LimitMark): LevelMark {
  const at = (mark.at ?? []).map(toMs);
  const count = Math.max(1, at.length);
  const [low, high] = mark.kind === 'allowed' ? [mark.low, mark.high] : [mark.value, mark.value];
  const order = at.length === 0 ? [0] : rising(at);
  return {
    kind: mark.kind,
    label: mark.label,
    at: at.length === 0 ? [] : pick(at, order),
    low: pick(spread(low, count), order),
    high: pick(spread(high, count), order),
  };
}

function happening(mark: EventMark): HappeningMark {
  const at = mark.at.map(toMs);
  const order = rising(at);
  const until = mark.until?.map((end) => (end === null ? null : toMs(end)));
  return {
    kind: 'event',
    label: mark.label,
    at: pick(at, order),
    until: order.map((index) => until?.[index]),
    words: pick(mark.words, order),
  };
}

function series(mark: Exclude<ChartMark, AllowedMark | LimitMark | EventMark>): SeriesMark {
  const at = mark.at.map(toMs);
  const order = rising(at);
  const lists = mark.kind === 'band' ? [mark.low, mark.high] : [mark.values];
  const halfWidth = mark.kind === 'references' ? spread(mark.halfWidth, at.length) : [];
  const lined = mark.kind === 'line' || mark.kind === 'step';
  return {
    kind: mark.kind,
    label: mark.label,
    at: pick(at, order),
    values: lists.map((list) => pick(list, order)),
    halfWidth: halfWidth.length === 0 ? [] : pick(halfWidth, order),
    tone: (lined ? mark.tone : undefined) ?? 'estimate',
    dashed: (lined ? mark.dashed : undefined) ?? false,
  };
}

/** A panel with its marks sorted by how they are drawn, instants in milliseconds and in order. */
export function readPanel(panel: ChartPanel): PanelData {
  const data: PanelData = { panel, series: [], levels: [], events: [] };
  for (const mark of panel.marks) {
    if (mark.kind === 'allowed' || mark.kind === 'limit') data.levels.push(level(mark));
    else if (mark.kind === 'event') data.events.push(happening(mark));
    else data.series.push(series(mark));
  }
  return data;
}

/** Lists of a series mark that count for the height of the axis: the whiskers' ends too. */
export function extentLists(mark: SeriesMark): (number | null)[][] {
  if (mark.kind !== 'references') return mark.values;
  const end = (sign: number) =>
    mark.values[0]!.map((value, index) =>
      value === null ? null : value + sign * (mark.halfWidth[index] ?? 0),
    );
  return [end(-1), end(1)];
}

/** All lists of a panel on one list of instants, as uPlot wants them; absent is undefined, a gap stays null. */
export function alignPanel(data: PanelData): uPlot.AlignedData {
  const tables = data.series.map((mark): uPlot.AlignedData => [mark.at, ...extentLists(mark)]);
  return tables.length === 0 ? [[]] : uPlot.join(tables);
}

/** First and last instant of all series of all panels; null when there is none. */
export function timeExtent(panels: readonly PanelData[]): { from: number; to: number } | null {
  const ends = extremes(panels.flatMap(({ series: marks }) => marks.flatMap(({ at }) => [at[0], at.at(-1)])));
  return ends === null ? null : { from: ends.min, to: ends.max };
}

/** Smallest and largest of the values there are; null when there is none. */
export function extremes(values: Iterable<number | null | undefined>): { min: number; max: number } | null {
  let [min, max] = [Infinity, -Infinity];
  for (const value of values) {
    if (value == null || !Number.isFinite(value)) continue;
    min = Math.min(min, value);
    max = Math.max(max, value);
  }
  return min > max ? null : { min, max };
}

export function hasValues(mark: SeriesMark, from = -Infinity, to = Infinity): boolean {
  return mark.at.some((at, index) => at >= from && at <= to && mark.values[0]![index] != null);
}

/** The last instant before `from` at which a mark has a value. */
export function lastBefore(mark: SeriesMark, from: number): number | null {
  const index = mark.at.findLastIndex((at, k) => at < from && mark.values[0]![k] != null);
  return mark.at[index] ?? null;
}
