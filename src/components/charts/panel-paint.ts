import uPlot from 'uplot';
import type { Palette } from './chart-palette.ts';
import type { HappeningMark, LevelMark, PanelData, SeriesMark } from './panel-data.ts';

const DIAMOND = 4.5;
const RING = 2.75;
const DOT = 3.25;
const TICK = 7;

interface Canvas {
  u: uPlot;
  ctx: CanvasRenderingContext2D;
  px: number;
  x: (at: number) => number;
  y: (value: number) => number;
}

function open(u: uPlot): Canvas {
  const { ctx, bbox } = u;
  ctx.save();
  ctx.beginPath();
  ctx.rect(bbox.left, bbox.top, bbox.width, bbox.height);
  ctx.clip();
  return {
    u,
    ctx,
    px: uPlot.pxRatio,
    x: (at) => u.valToPos(at, 'x', true),
    y: (value) => u.valToPos(value, 'y', true),
  };
}

/** Stretches of a level: from and to in canvas px, with its values. */
function stretches({ u, x }: Canvas, level: LevelMark) {
  const right = u.bbox.left + u.bbox.width;
  if (level.at.length === 0)
    return [{ from: u.bbox.left, to: right, low: level.low[0], high: level.high[0] }];
  return level.at.map((at, index) => {
    const next = level.at[index + 1];
    return {
      from: x(at),
      to: next === undefined ? right : x(next),
      low: level.low[index],
      high: level.high[index],
    };
  });
}

function paintAllowed(canvas: Canvas, level: LevelMark, palette: Palette) {
  const { ctx, y } = canvas;
  ctx.fillStyle = palette.allowed;
  for (const { from, to, low, high } of stretches(canvas, level)) {
    if (low != null && high != null) ctx.fillRect(from, y(high), to - from, y(low) - y(high));
  }
}

function paintEdges(canvas: Canvas, level: LevelMark, palette: Palette) {
  const { ctx, px, y } = canvas;
  const dashed = level.kind === 'limit';
  ctx.strokeStyle = dashed ? palette.soft : palette.edge;
  ctx.lineWidth = px;
  ctx.setLineDash(dashed ? [5 * px, 4 * px] : []);
  ctx.beginPath();
  for (const { from, to, low, high } of stretches(canvas, level)) {
    for (const value of dashed ? [low] : [low, high]) {
      if (value == null) continue;
      const at = Math.round(y(value)) + px / 2;
      ctx.moveTo(from, at);
      ctx.lineTo(to, at);
    }
  }
  ctx.stroke();
  ctx.setLineDash([]);
}

function paintSpans({ u, ctx, x }: Canvas, event: HappeningMark, palette: Palette) {
  const { bbox } = u;
  ctx.fillStyle = palette.line;
  ctx.globalAlpha = 0.45;
  event.at.forEach((at, index) => {
    const end = event.until[index];
    if (end === undefined) return;
    const right = end === null ? bbox.left + bbox.width : x(end);
    ctx.fillRect(x(at), bbox.top, right - x(at), bbox.height);
  });
  ctx.globalAlpha = 1;
}

interface Words {
  from: number;
  to: number;
}

/** The line, counted from the top, on which words overlap none of those already written there. */
function freeLine(lines: Words[][], words: Words): number {
  const line = lines.findIndex((written) =>
    written.every(({ from, to }) => words.to < from || words.from > to),
  );
  const index = line < 0 ? lines.length : line;
  (lines[index] ??= []).push(words);
  return index;
}

function paintEvents({ u, ctx, px, x }: Canvas, event: HappeningMark, palette: Palette, lines: Words[][]) {
  const { bbox } = u;
  ctx.font = `${12 * px}px ${palette.font}`;
  ctx.textBaseline = 'top';
  ctx.textAlign = 'left';
  ctx.lineWidth = px;
  ctx.strokeStyle = palette.edge;
  ctx.fillStyle = palette.soft;
  event.at.forEach((at, index) => {
    const left = Math.round(x(at)) + px / 2;
    if (left < bbox.left || left > bbox.left + bbox.width) return;
    ctx.beginPath();
    ctx.moveTo(left, bbox.top);
    ctx.lineTo(left, bbox.top + bbox.height);
    ctx.stroke();
    const text = event.words[index] ?? '';
    const width = ctx.measureText(text).width;
    const room = bbox.left + bbox.width - left > width + 8 * px;
    const from = room ? left + 5 * px : left - 5 * px - width;
    const line = freeLine(lines, { from, to: from + width + 6 * px });
    ctx.fillText(text, from, bbox.top + (2 + 15 * line) * px);
  });
}

function paintReferences({ ctx, px, x, y }: Canvas, mark: SeriesMark, palette: Palette) {
  const half = DIAMOND * px;
  ctx.strokeStyle = palette.ink;
  ctx.fillStyle = palette.paper;
  ctx.lineWidth = 1.25 * px;
  mark.at.forEach((at, index) => {
    const value = mark.values[0]![index];
    if (value == null) return;
    const [left, top, reach] = [x(at), y(value), mark.halfWidth[index] ?? 0];
    ctx.beginPath();
    ctx.moveTo(left, y(value - reach));
    ctx.lineTo(left, y(value + reach));
    ctx.stroke();
    ctx.beginPath();
    ctx.moveTo(left, top - half);
    ctx.lineTo(left + half, top);
    ctx.lineTo(left, top + half);
    ctx.lineTo(left - half, top);
    ctx.closePath();
    ctx.fill();
    ctx.stroke();
  });
}

function paintPoints({ ctx, px, x, y }: Canvas, mark: SeriesMark, palette: Palette) {
  const signals = mark.kind === 'signals';
  ctx.strokeStyle = palette.ink;
  ctx.fillStyle = signals ? palette.ink : palette.paper;
  ctx.lineWidth = (signals ? 1.5 : 1.1) * px;
  mark.at.forEach((at, index) => {
    const value = mark.values[0]![index];
    if (value == null) return;
    ctx.beginPath();
    if (signals) {
      ctx.moveTo(x(at), y(value) - TICK * px);
      ctx.lineTo(x(at), y(value) + TICK * px);
      ctx.stroke();
      ctx.beginPath();
    }
    ctx.arc(x(at), y(value), (signals ? DOT : RING) * px, 0, 2 * Math.PI);
    ctx.fill();
    ctx.stroke();
  });
}

/** What lies under the axes and lines: the shaded allowed error, spans of time. */
export function paintGround(u: uPlot, data: PanelData, palette: Palette) {
  const canvas = open(u);
  for (const level of data.levels) if (level.kind === 'allowed') paintAllowed(canvas, level, palette);
  for (const event of data.events) paintSpans(canvas, event, palette);
  canvas.ctx.restore();
}

/** What lies over the lines: limits and edges, events, references, single errors, signals. */
export function paintMarks(u: uPlot, data: PanelData, palette: Palette) {
  const canvas = open(u);
  for (const level of data.levels) paintEdges(canvas, level, palette);
  const lines: Words[][] = [];
  for (const event of data.events) paintEvents(canvas, event, palette, lines);
  for (const mark of data.series) {
    if (mark.kind === 'references') paintReferences(canvas, mark, palette);
    if (mark.kind === 'rings' || mark.kind === 'signals') paintPoints(canvas, mark, palette);
  }
  canvas.ctx.restore();
}
