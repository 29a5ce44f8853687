import type { FileNotice } from '../contracts/sample-evidence.ts';
import type { SampleMapping } from '../contracts/sample-import.ts';
import type { DecidedRow } from './sample-outcomes.ts';
import { createFarTest } from './sample-plausible.ts';
import type { SampleRegistry } from './sample-registry.ts';
import { cellAt } from './sample-row.ts';

const halfHourMs = 30 * 60_000;
const nearlyAll = 0.95;
const fewestTimes = 20;
const fewestAlike = 3;

/** What bears on the notices of a file. */
export interface NoticeRules {
  mapping: SampleMapping;
  registry: SampleRegistry;
  /** Rows above the header. */
  titleLines: number;
  lastValues: ReadonlyMap<number, readonly number[]>;
  reproducibility: number | null;
}

function likeReport(rows: readonly DecidedRow[]): FileNotice[] {
  const timed = rows.filter(({ taken }) => taken?.at != null);
  const alike = timed.filter(({ reasons }) => reasons.some(({ code }) => code === 'like-report-time'));
  if (alike.length < fewestAlike || 2 * alike.length < timed.length) return [];
  return [{ code: 'times-like-report', figures: { count: alike.length, all: timed.length } }];
}

function roundedTimes(rows: readonly DecidedRow[]): FileNotice[] {
  let all = 0;
  let round = 0;
  for (const { taken } of rows) {
    if (taken?.at == null) continue;
    all += 1;
    if (taken.at % halfHourMs === 0) round += 1;
  }
  if (all < fewestTimes || round < nearlyAll * all) return [];
  return [{ code: 'rounded-times', figures: { count: round, all } }];
}

/** Numbers that are shorter than those with a zero in front. */
function lostZeros(rows: readonly DecidedRow[], column: number | null): FileNotice[] {
  if (column === null) return [];
  const digits = rows.map(({ row }) => cellAt(row.cells, column)).filter((text) => /^\d+$/.test(text));
  const padded = digits.find((text) => text.startsWith('0') && text.length > 1);
  if (padded === undefined) return [];
  const short = digits.filter((text) => text.length < padded.length && !text.startsWith('0'));
  if (short.length === 0) return [];
  const figures = { count: short.length, example: short[0]!, length: padded.length };
  return [{ code: 'lost-zeros', figures }];
}

/** Points all of whose results lie far from the last ones, and were let in since they agree. */
function moved(rows: readonly DecidedRow[], rules: NoticeRules): FileNotice[] {
  const byPoint = new Map<number, DecidedRow[]>();
  for (const row of rows) {
    const ofLast = row.sample && rules.lastValues.has(row.sample.samplePointId);
    if (!ofLast || row.sample!.qualifier !== null || row.outcome === 'skipped' || row.outcome === 'refused')
      continue;
    const pointId = row.sample!.samplePointId;
    const list = byPoint.get(pointId);
    if (list) list.push(row);
    else byPoint.set(pointId, [row]);
  }
  return [...byPoint].flatMap(([pointId, list]): FileNotice[] => {
    const last = createFarTest(rules.lastValues.get(pointId)!, rules.reproducibility);
    const values = list.map(({ sample }) => sample!.value);
    const own = createFarTest(values, null);
    if (!last || !own || list.some(({ outcome }) => outcome === 'held') || !values.every(last.isFar))
      return [];
    const point = [...rules.registry.pointsByName.values()].find(({ id }) => id === pointId)?.name ?? '';
    const { unit } = list[0]!.sample!;
    const figures = { point, count: values.length, median: own.median, before: last.median, unit };
    return [{ code: 'moved-from-last', figures }];
  });
}

/** What strikes in a file as a whole, where its rows may yet be right one by one. */
export function findNotices(rows: readonly DecidedRow[], rules: NoticeRules): FileNotice[] {
  const { titleLines, mapping } = rules;
  const titles: FileNotice[] =
    titleLines > 0 ? [{ code: 'title-lines', figures: { count: titleLines } }] : [];
  return [
    ...titles,
    ...likeReport(rows),
    ...roundedTimes(rows),
    ...lostZeros(rows, mapping.columns.sampleNumber),
    ...moved(rows, rules),
  ];
}
