import { formatInstant, formatNumber, formatSigned } from '../../../shared/rules/format.ts';
import type { CsvCell } from '../../composables/use-csv-download.ts';
import type { DataColumn } from '../base/table-columns.ts';
import type { PanelData, SeriesMark } from './panel-data.ts';

export interface ChartRow {
  key: number;
  at: number;
  cells: Record<string, number | string | null>;
}

interface Source {
  name: string;
  label: string;
  decimals: number;
  signed: boolean;
  at: number[];
  values: (number | string | null)[];
}

function withUnit(label: string, unit: string): string {
  return unit === '' ? label : `${label}, ${unit}`;
}

function listsOf(mark: SeriesMark): { suffix: string; values: (number | null)[] }[] {
  if (mark.kind === 'band')
    return mark.values.map((values, index) => ({ suffix: index === 0 ? ' from' : ' to', values }));
  const own = { suffix: '', values: mark.values[0]! };
  return mark.kind === 'references' ? [own, { suffix: ' ±', values: mark.halfWidth }] : [own];
}

function sourcesOf(panels: readonly PanelData[]): Source[] {
  return panels.flatMap(({ panel, series, events }, panelIndex) => [
    ...series.flatMap((mark, markIndex) =>
      listsOf(mark).map(({ suffix, values }) => ({
        name: `p${panelIndex}m${markIndex}${suffix}`,
        label: withUnit(mark.label + suffix, panel.unit),
        decimals: panel.decimals,
        signed: panel.signed === true && suffix === '',
        at: mark.at,
        values,
      })),
    ),
    ...events.map((event, index) => ({
      name: `p${panelIndex}e${index}`,
      label: event.label,
      decimals: 0,
      signed: false,
      at: event.at,
      values: event.words,
    })),
  ]);
}

/** One row for each instant of any mark; a mark with two values at an instant takes two rows. */
function rowsOf(sources: readonly Source[]): ChartRow[] {
  const byTime = new Map<number, ChartRow[]>();
  for (const { name, at, values } of sources) {
    const used = new Map<number, number>();
    at.forEach((time, index) => {
      const rows = byTime.get(time) ?? [];
      byTime.set(time, rows);
      const nth = used.get(time) ?? 0;
      used.set(time, nth + 1);
      rows[nth] ??= { key: 0, at: time, cells: {} };
      rows[nth].cells[name] = values[index] ?? null;
    });
  }
  const rows = [...byTime.values()].flat().sort((a, b) => a.at - b.at);
  return rows.map((row, key) => ({ ...row, key }));
}

/** The table behind a chart: every value drawn, by time. */
export function chartTable(panels: readonly PanelData[], zone: string) {
  const sources = sourcesOf(panels);
  const columns: DataColumn<ChartRow>[] = [
    {
      name: 'at',
      label: 'Time',
      always: true,
      format: (_value, row) => formatInstant(row.at, zone),
      nowrap: true,
    },
    ...sources.map(({ name, label, decimals, signed }): DataColumn<ChartRow> => ({
      name,
      label,
      numeric: !/e\d+$/.test(name),
      field: (row) => row.cells[name] ?? null,
      format: (value) =>
        typeof value === 'number'
          ? (signed ? formatSigned : formatNumber)(value, decimals)
          : String(value ?? ''),
    })),
  ];
  return { columns, rows: rowsOf(sources) };
}

/** The same for CSV: times both in UTC and on the site's clock, numbers as they are, constant levels in every row. */
export function chartCsv(panels: readonly PanelData[], zone: string, zoneWords: string) {
  const sources = sourcesOf(panels);
  const constant = panels.flatMap(({ panel, levels }) =>
    levels
      .filter(({ at }) => at.length === 0)
      .flatMap(({ kind, label, low, high }) =>
        kind === 'limit'
          ? [{ label: withUnit(label, panel.unit), value: low[0] }]
          : [
              { label: withUnit(`${label} from`, panel.unit), value: low[0] },
              { label: withUnit(`${label} to`, panel.unit), value: high[0] },
            ],
      ),
  );
  const header = [
    'Time, UTC',
    `Time, ${zoneWords}`,
    ...sources.map(({ label }) => label),
    ...constant.map(({ label }) => label),
  ];
  const rows = rowsOf(sources).map((row): CsvCell[] => [
    new Date(row.at).toISOString(),
    formatInstant(row.at, zone),
    ...sources.map(({ name }) => row.cells[name]),
    ...constant.map(({ value }) => value),
  ]);
  return { header, rows };
}
