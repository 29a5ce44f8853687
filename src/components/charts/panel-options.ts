import uPlot from 'uplot';
import { formatNumber, formatSigned } from '../../../shared/rules/format.ts';
import type { Palette } from './chart-palette.ts';
import type { TimeRange } from './chart-types.ts';
import { extentLists, extremes, type PanelData, type SeriesMark } from './panel-data.ts';
import { paintGround, paintMarks } from './panel-paint.ts';
import { tickLabel, timeTicks } from './time-ticks.ts';

const LABEL_SIZE = 12;
const TICK_SPACE = 70;
const RIGHT_PADDING = 8;
const CHARACTER = 6.6;

export interface PanelSetting {
  data: PanelData;
  width: number;
  height: number;
  range: TimeRange;
  axisWidth: number;
  zone: string;
  syncKey: string;
  palette: () => Palette;
  zoom: (range: TimeRange | null) => void;
}

const unseen = { paths: () => null, points: { show: false } } as const;

function seriesOf(mark: SeriesMark, palette: () => Palette): uPlot.Series[] {
  const stroke = () => palette()[mark.tone];
  const common = { label: mark.label, points: { show: false } };
  if (mark.kind === 'line')
    return [{ ...common, stroke, width: 1.5, dash: mark.dashed ? [5, 4] : undefined }];
  if (mark.kind === 'step') {
    const paths = uPlot.paths.stepped?.({ align: 1 });
    return [{ ...common, stroke, width: 1.5, paths, dash: mark.dashed ? [5, 4] : undefined }];
  }
  if (mark.kind === 'band')
    return [
      { ...common, width: 0 },
      { ...common, width: 0 },
    ];
  return extentLists(mark).map(() => ({ label: mark.label, ...unseen }));
}

/** The y axis from the values in view, what must always be in view, and a little air. */
function heightRange(data: PanelData): uPlot.Range.Function {
  const fixed = [
    ...(data.panel.include ?? []),
    ...data.levels.filter(({ at }) => at.length === 0).flatMap(({ low, high }) => [...low, ...high]),
  ];
  return (_u, dataMin, dataMax) => {
    const ends = extremes([...fixed, dataMin, dataMax]);
    if (ends === null) return [0, 1];
    const { min, max } = ends;
    const air = (max - min || Math.abs(max) * 0.1 || 1) * 0.08;
    return [min - air, max + air];
  };
}

/** Digits after the point that tell ticks `increment` apart: 0 for 20, 1 for 2.5, 2 for 0.25. */
export function decimalsOf(increment: number): number {
  for (let decimals = 0; decimals < 10; decimals += 1) {
    const scaled = increment * 10 ** decimals;
    if (Math.abs(scaled - Math.round(scaled)) < 1e-6 * scaled) return decimals;
  }
  return 10;
}

function heightLabels(data: PanelData): uPlot.Axis.DynamicValues {
  const words = data.panel.signed ? formatSigned : formatNumber;
  return (_u, splits, _axis, _space, increment) => splits.map((value) => words(value, decimalsOf(increment)));
}

/** The label, unless it would be cut off at the right edge. */
function fitting(u: uPlot, at: number, label: string): string {
  const end = u.valToPos(at, 'x') + (label.length * CHARACTER) / 2;
  return end > u.bbox.width / uPlot.pxRatio + RIGHT_PADDING ? '' : label;
}

function axesOf({ data, axisWidth, zone, palette }: PanelSetting): uPlot.Axis[] {
  const common = {
    stroke: () => palette().soft,
    font: `${LABEL_SIZE}px ${palette().font}`,
    ticks: { show: false },
    border: { show: false },
  };
  return [
    {
      ...common,
      size: 26,
      gap: 6,
      grid: { show: false },
      splits: (u, _axis, min, max) =>
        timeTicks(min, max, zone, Math.max(2, Math.floor(u.bbox.width / uPlot.pxRatio / TICK_SPACE))),
      values: (u, splits) => splits.map((at) => fitting(u, at, tickLabel(at, zone))),
    },
    {
      ...common,
      size: axisWidth,
      gap: 6,
      space: 44,
      grid: { stroke: () => palette().line, width: 1 },
      values: heightLabels(data),
    },
  ];
}

function bandsOf({ data, palette }: PanelSetting): uPlot.Band[] {
  const bands: uPlot.Band[] = [];
  let next = 1;
  for (const mark of data.series) {
    if (mark.kind === 'band') bands.push({ series: [next + 1, next], fill: () => palette().band });
    next += extentLists(mark).length;
  }
  return bands;
}

function cursorOf({ syncKey, zoom }: PanelSetting): uPlot.Cursor {
  return {
    y: false,
    points: { show: false },
    drag: { x: true, y: false, setScale: false },
    bind: {
      dblclick: () => () => {
        zoom(null);
        return null;
      },
    },
    sync: {
      key: syncKey,
      setSeries: false,
      scales: ['x', null],
      filters: { pub: (type) => type === 'mousemove' || type === 'mouseleave' },
    },
  };
}

/** How wide the labels of a panel's y axis are at most, in CSS px. */
export function axisWidthOf(data: PanelData): number {
  const levels = data.levels.flatMap(({ low, high }) => [...low, ...high]);
  const values = [
    ...data.series.flatMap((mark) => extentLists(mark).flat()),
    ...levels,
    ...(data.panel.include ?? []),
  ];
  const ends = extremes(values);
  if (ends === null) return 44;
  const { min, max } = ends;
  // uPlot steps by 1, 2, 2.5 or 5 times a power of ten: one digit more than the power of ten needs.
  const step = Math.max(0, Math.min(10, 1 - Math.floor(Math.log10((max - min || Math.abs(max) || 1) / 4))));
  const words = data.panel.signed ? formatSigned : formatNumber;
  const longest = Math.max(words(min, step).length, words(max, step).length);
  return Math.max(40, Math.ceil(longest * CHARACTER) + 14);
}

/** uPlot's options of one panel. */
export function panelOptions(setting: PanelSetting): uPlot.Options {
  const { data, width, height, range, palette, zoom } = setting;
  return {
    width,
    height,
    ms: 1,
    padding: [8, RIGHT_PADDING, 0, 0],
    legend: { show: false },
    cursor: cursorOf(setting),
    scales: {
      x: { time: true, auto: false, range: (_u, min, max) => [min, max], min: range.from, max: range.to },
      y: { range: heightRange(data) },
    },
    axes: axesOf(setting),
    series: [{}, ...data.series.flatMap((mark) => seriesOf(mark, palette))],
    bands: bandsOf(setting),
    hooks: {
      drawClear: [(u) => paintGround(u, data, palette())],
      draw: [(u) => paintMarks(u, data, palette())],
      setSelect: [
        (u) => {
          if (u.select.width < 4) return;
          zoom({ from: u.posToVal(u.select.left, 'x'), to: u.posToVal(u.select.left + u.select.width, 'x') });
          u.setSelect({ left: 0, top: 0, width: 0, height: 0 }, false);
        },
      ],
    },
  };
}
