import { describe, expect, test } from 'vitest';
import {
  nearestIndex,
  readoutAt,
  snap,
  stops,
  summaryOf,
} from '../../src/components/charts/chart-readout.ts';
import { chartCsv, chartTable } from '../../src/components/charts/chart-table.ts';
import type { ChartPanel } from '../../src/components/charts/chart-types.ts';
import {
  alignPanel,
  hasValues,
  lastBefore,
  readPanel,
  timeExtent,
} from '../../src/components/charts/panel-data.ts';
import { decimalsOf } from '../../src/components/charts/panel-options.ts';

const HOUR = 3_600_000;
const start = Date.parse('2026-11-01T00:00:00Z');
const hours = (...list: number[]) => list.map((hour) => start + hour * HOUR);

const estimate: ChartPanel = {
  id: 'estimate',
  title: 'Estimate and reference samples',
  unit: '°C',
  decimals: 1,
  marks: [
    { kind: 'line', label: 'Estimate', at: hours(0, 1, 2, 3), values: [1500, null, 1502, 1503] },
    {
      kind: 'band',
      label: '95 % band',
      at: hours(0, 1, 2, 3),
      low: [1495, null, 1497, 1498],
      high: [1505, null, 1507, 1508],
    },
    {
      kind: 'references',
      label: 'Reference',
      at: ['2026-11-01T02:30:00Z', '2026-11-01T00:30:00Z', '2026-11-01T00:30:00Z'],
      values: [1490, 1499, 1498],
      halfWidth: 4,
    },
  ],
};
const errors: ChartPanel = {
  id: 'error',
  title: 'Error = estimate − reference',
  unit: '°C',
  decimals: 1,
  signed: true,
  marks: [
    { kind: 'allowed', label: 'Allowed error', low: -10, high: 10 },
    { kind: 'limit', label: 'Upper limit', value: 2.2 },
    { kind: 'rings', label: 'Error', at: hours(0.5, 2.5), values: [1, 12.5] },
    { kind: 'event', label: 'Event', at: hours(2), words: ['Thermocouple replaced'] },
  ],
};
const panels = [estimate, errors].map(readPanel);

describe('the data of a panel', () => {
  test('are put in order of time, with their whiskers', () => {
    const [, , references] = panels[0]!.series;
    expect(references!.at).toEqual(hours(0.5, 0.5, 2.5));
    expect(references!.values[0]).toEqual([1499, 1498, 1490]);
    expect(references!.halfWidth).toEqual([4, 4, 4]);
  });

  test('share one list of times, where a gap stays null and what is absent is undefined', () => {
    const [at, line, low, , whiskerLow, whiskerHigh] = alignPanel(panels[0]!);
    expect([...at!]).toEqual(hours(0, 0.5, 1, 2, 2.5, 3));
    expect([...line!]).toEqual([1500, undefined, null, 1502, undefined, 1503]);
    expect([...low!]).toEqual([1495, undefined, null, 1497, undefined, 1498]);
    expect([whiskerLow![4], whiskerHigh![4]]).toEqual([1486, 1494]);
  });

  test('know their extent, and where they hold nothing', () => {
    expect(timeExtent(panels)).toEqual({ from: start, to: start + 3 * HOUR });
    expect(timeExtent([readPanel({ ...errors, marks: [] })])).toBeNull();
    const line = panels[0]!.series[0]!;
    expect(hasValues(line, ...(hours(0.5, 1.5) as [number, number]))).toBe(false);
    expect(hasValues(line, ...(hours(0.5, 2) as [number, number]))).toBe(true);
    expect(lastBefore(line, start + 1.5 * HOUR)).toBe(start);
  });

  test('with no mark give uPlot an empty time axis', () => {
    expect(alignPanel(readPanel({ ...errors, marks: [] }))).toEqual([[]]);
  });
});

describe('the values at the cursor', () => {
  test('come with unit, sign and the range of the reference', () => {
    const { rows } = readoutAt(panels, start + 2.5 * HOUR, 0.6 * HOUR, 1000);
    expect(rows).toEqual([
      { label: 'Estimate', text: '1,502.0\u00a0°C' },
      { label: '95 % band', text: '1,497.0 to 1,507.0\u00a0°C' },
      { label: 'Reference', text: '1,490.0\u00a0°C ± 4.0' },
      { label: 'Error', text: '+12.5\u00a0°C' },
    ]);
  });

  test('say nothing for a gap and for points out of reach', () => {
    expect(readoutAt(panels, start + HOUR, 0.1 * HOUR, 1000).rows).toEqual([]);
    expect(readoutAt(panels, start + 2 * HOUR, 0, 1000).rows.map(({ text }) => text)).toContain(
      'Thermocouple replaced',
    );
  });

  test('are taken at the nearest single point within reach', () => {
    expect(snap(panels, start + 2.4 * HOUR, 0.2 * HOUR)).toBe(start + 2.5 * HOUR);
    expect(snap(panels, start + 2.2 * HOUR, 0.2 * HOUR)).toBe(start + 2.2 * HOUR);
  });

  test('are stepped through by single points, in order, inside the range shown', () => {
    expect(stops(panels, { from: start, to: start + 3 * HOUR })).toEqual(hours(0.5, 2.5));
    expect(stops(panels, { from: start + HOUR, to: start + 3 * HOUR })).toEqual(hours(2.5));
  });

  test('find the nearest of a list at its ends and between', () => {
    expect([-5, 4, 6, 99].map((at) => nearestIndex([0, 10, 20], at))).toEqual([0, 0, 1, 2]);
    expect(nearestIndex([], 3)).toBe(-1);
  });
});

describe('what stands behind a chart', () => {
  test('is a table with a row for each instant and a second row for a second value', () => {
    const { columns, rows } = chartTable(panels, 'UTC');
    expect(rows.map(({ at }) => (at - start) / HOUR)).toEqual([0, 0.5, 0.5, 1, 2, 2.5, 3]);
    const reference = columns.find(({ label }) => label === 'Reference, °C')!.name;
    expect(rows.map(({ cells }) => cells[reference] ?? null)).toEqual([
      null,
      1499,
      1498,
      null,
      null,
      1490,
      null,
    ]);
    expect(new Set(columns.map(({ name }) => name)).size).toBe(columns.length);
  });

  test('goes to CSV with times in UTC and at the site, raw numbers, and the constant limits', () => {
    const { header, rows } = chartCsv(panels, 'Europe/Copenhagen', 'Tarnby time');
    expect(header.slice(0, 3)).toEqual(['Time, UTC', 'Time, Tarnby time', 'Estimate, °C']);
    expect(header.slice(-3)).toEqual(['Allowed error from, °C', 'Allowed error to, °C', 'Upper limit, °C']);
    expect(rows[0]!.slice(0, 3)).toEqual(['2026-11-01T00:00:00.000Z', '1 Nov 2026 01:00', 1500]);
    expect(rows[0]!.slice(-3)).toEqual([-10, 10, 2.2]);
    expect(rows.every((row) => row.length === header.length)).toBe(true);
  });

  test('is said in words', () => {
    const words = summaryOf(panels, { from: start, to: start + 3 * HOUR }, 'UTC');
    expect(words).toContain('Reference: 3 values, 1,490.0 to 1,499.0\u00a0°C, last 1,490.0.');
    expect(words).toContain('Allowed error: −10.0 to 10.0.');
  });
});

test.each([
  [20, 0],
  [2.5, 1],
  [0.25, 2],
  [0.1, 1],
  [0.005, 3],
])('ticks %d apart are told apart by %d decimals', (increment, decimals) => {
  expect(decimalsOf(increment)).toBe(decimals);
});
