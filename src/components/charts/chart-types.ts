/** An instant: ISO 8601, or milliseconds since 1970. */
export type Instant = number | string;
export type Instants = readonly Instant[];
/** One value for each instant; null is a gap. */
export type Values = readonly (number | null)[];

interface Timed {
  /** Words of the mark in tooltips, tables and CSV: "Estimate". */
  label: string;
  at: Instants;
}

/** A line through the values, broken at null. A step holds each value until the next. */
export interface LineMark extends Timed {
  kind: 'line' | 'step';
  values: Values;
  tone?: 'estimate' | 'ink' | 'soft';
  dashed?: boolean;
}

/** A band: where 95 % of true values should lie. */
export interface BandMark extends Timed {
  kind: 'band';
  low: Values;
  high: Values;
}

/** Laboratory results: hollow diamonds with the whisker of one result, ± R/√2. */
export interface ReferenceMark extends Timed {
  kind: 'references';
  values: Values;
  halfWidth: number | Values;
}

/** Single errors (rings) or chart signals (filled dots with a vertical tick). */
export interface PointMark extends Timed {
  kind: 'rings' | 'signals';
  values: Values;
}

/** The allowed error, shaded between its edges. Two numbers hold for all time; lists go with `at`, as steps. */
export interface AllowedMark {
  kind: 'allowed';
  label: string;
  at?: Instants;
  low: number | Values;
  high: number | Values;
}

/** A control limit, dashed. One number holds for all time; a list goes with `at`, as steps. */
export interface LimitMark {
  kind: 'limit';
  label: string;
  at?: Instants;
  value: number | Values;
}

/** What happened: a vertical line with its words, or a shaded span where `until` is given (null: not over yet). */
export interface EventMark extends Timed {
  kind: 'event';
  words: readonly string[];
  until?: readonly (Instant | null)[];
}

export type ChartMark = LineMark | BandMark | ReferenceMark | PointMark | AllowedMark | LimitMark | EventMark;

/** One of the pictures that stand above each other on the same time axis. */
export interface ChartPanel {
  id: string;
  /** Without the unit, which follows it: "Estimate and reference samples". */
  title: string;
  unit: string;
  decimals: number;
  marks: readonly ChartMark[];
  /** Values are differences: "+10" on the axis. */
  signed?: boolean;
  /** Values always in view. */
  include?: readonly number[];
  /** CSS px; 260 when left out. */
  height?: number;
  /** Names the marks, under the picture. */
  caption?: string;
}

export interface TimeRange {
  from: number;
  to: number;
}
