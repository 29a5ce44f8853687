import { nextTick, ref, type Ref } from 'vue';
import { snap, stops } from './chart-readout.ts';
import type { TimeRange } from './chart-types.ts';
import type { PanelData } from './panel-data.ts';

const POINT_REACH = 6;
const LINE_REACH = 16;
const LEAST_RANGE_MS = 60_000;

export interface ChartPlace {
  panels: Readonly<Ref<PanelData[]>>;
  /** The time zoomed into; null for all of it. */
  range: Ref<TimeRange | null>;
  shown: Readonly<Ref<TimeRange>>;
  whole: Readonly<Ref<TimeRange>>;
  /** Width of the plotted time, CSS px. */
  plotWidth: () => number;
  /** Draws the cursor's line at an instant in every panel; returns its place in px. */
  mark: (at: number) => number;
}

export interface ChartCursor {
  at: number;
  left: number;
  panel: string;
}

/** Where the reader of a TimeChart points, by mouse or keys, and how far they have zoomed in. */
export function useChartCursor(place: ChartPlace) {
  const cursor = ref<ChartCursor | null>(null);
  /** Set while the keys move the cursor: only then are its values read out. */
  const spoken = ref(false);

  const msOf = (pixels: number) =>
    ((place.shown.value.to - place.shown.value.from) / Math.max(1, place.plotWidth())) * pixels;
  const pointReach = () => msOf(POINT_REACH);
  const lineReach = () => msOf(LINE_REACH);

  function point(panel: string, at: number | null, left: number) {
    spoken.value = false;
    cursor.value = at === null ? null : { at: snap(place.panels.value, at, pointReach()), left, panel };
  }

  function zoom(next: TimeRange | null) {
    const tooClose = next !== null && next.to - next.from < LEAST_RANGE_MS;
    place.range.value = tooClose ? { from: next.from, to: next.from + LEAST_RANGE_MS } : next;
    cursor.value = null;
  }

  /** The part of the picture around the cursor, `factor` times as long. */
  function zoomBy(factor: number) {
    const { from, to } = place.shown.value;
    const middle = cursor.value?.at ?? (from + to) / 2;
    const next = { from: middle - (middle - from) * factor, to: middle + (to - middle) * factor };
    const all = next.from <= place.whole.value.from && next.to >= place.whole.value.to;
    zoom(all ? null : next);
  }

  async function step(by: number) {
    const list = stops(place.panels.value, place.shown.value);
    const here = cursor.value?.at ?? (by > 0 ? -Infinity : Infinity);
    const next = by > 0 ? list.filter((at) => at > here)[by - 1] : list.filter((at) => at < here).at(by);
    const at = next ?? (by > 0 ? list.at(-1) : list[0]);
    if (at === undefined) return;
    await nextTick();
    cursor.value = { at, left: place.mark(at), panel: place.panels.value[0]?.panel.id ?? '' };
    spoken.value = true;
  }

  const keys: Record<string, () => unknown> = {
    ArrowRight: () => step(1),
    ArrowLeft: () => step(-1),
    PageDown: () => step(10),
    PageUp: () => step(-10),
    '+': () => zoomBy(0.5),
    '-': () => zoomBy(2),
    '0': () => zoom(null),
    Escape: () => (cursor.value = null),
  };

  function pressed(event: KeyboardEvent) {
    const act = keys[event.key];
    if (act === undefined || event.ctrlKey || event.metaKey || event.altKey) return;
    event.preventDefault();
    act();
  }

  return { cursor, spoken, point, zoom, pressed, pointReach, lineReach };
}
