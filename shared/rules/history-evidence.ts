import {
  historyDateOrder,
  type DecimalSign,
  type Delimiter,
  type HistoryDateOrder,
} from '../contracts/history.ts';
import { timeReader } from './history-times.ts';
import { isAbsent, readNumber } from './history-values.ts';

const since2000 = Date.UTC(2000, 0, 1);

/** What the cells of one column say about when they are. */
export interface TimeEvidence {
  column: number;
  dateOrder: HistoryDateOrder;
  /** Share of the filled cells that are times, 0 to 1. */
  share: number;
  /** Day and month may stand either way round: nothing in these cells tells. */
  doubtful: boolean;
}

/**
 * The column of times and the order of its dates: the one most of whose cells are times, the leftmost of equals.
 * @param rows data rows, cells as in the file
 * @param zone IANA zone of times without offset
 * @param latestMs instants after it are yet to come, so that order of day and month is wrong
 * @returns null where no column holds times in at least half of its filled cells
 */
export function findTimes(rows: readonly string[][], zone: string, latestMs: number): TimeEvidence | null {
  const width = Math.max(0, ...rows.map((row) => row.length));
  let best: TimeEvidence | null = null;
  for (let column = 0; column < width; column++) {
    const cells = rows.map((row) => row[column] ?? '').filter((cell) => cell.trim() !== '');
    const found = timesIn(cells, zone, latestMs);
    if (found && found.share > (best?.share ?? 0.5)) best = { column, ...found };
  }
  return best;
}

interface OrderEvidence {
  dateOrder: HistoryDateOrder;
  share: number;
  backward: number;
  span: number;
}

function timesIn(
  cells: readonly string[],
  zone: string,
  latestMs: number,
): Omit<TimeEvidence, 'column'> | null {
  const orders = historyDateOrder.options
    .map((dateOrder) => evidenceFor(dateOrder, cells, zone, latestMs))
    .filter(({ share }) => share > 0)
    .sort((a, b) => b.share - a.share || a.backward - b.backward || a.span - b.span);
  const [first, second] = orders;
  if (!first) return null;
  const doubtful =
    second !== undefined &&
    second.share === first.share &&
    second.backward === first.backward &&
    second.span === first.span;
  return { dateOrder: first.dateOrder, share: first.share, doubtful };
}

function evidenceFor(
  dateOrder: HistoryDateOrder,
  cells: readonly string[],
  zone: string,
  latestMs: number,
): OrderEvidence {
  const read = timeReader({ dateOrder, zone, latestMs });
  // Any small number would pass as a moment early in 1970.
  const earliest = dateOrder.startsWith('epoch') ? since2000 : 0;
  const times = cells.map(read).filter((at): at is number => typeof at === 'number' && at >= earliest);
  let backward = 0;
  let low = Infinity;
  let high = -Infinity;
  times.forEach((at, index) => {
    if (at < (times[index - 1] ?? at)) backward++;
    low = Math.min(low, at);
    high = Math.max(high, at);
  });
  return {
    dateOrder,
    share: cells.length === 0 ? 0 : times.length / cells.length,
    backward,
    span: high - low,
  };
}

const commaOnly = /^[+-]?\d*,(?:\d{1,2}|\d{4,})$|^[+-]?(?:0|\d{4,}),\d+$|\.\d{3},\d+$/;
const pointOnly = /^[+-]?\d*\.(?:\d{1,2}|\d{4,})$|^[+-]?(?:0|\d{4,})\.\d+$|,\d{3}\.\d+$|\de[+-]?\d/i;
const eitherComma = /^[+-]?[1-9]\d{0,2},\d{3}$/;

/**
 * The decimal sign of a file, from cells that can only be read one way.
 * @returns `doubtful` where every comma might part thousands as well
 */
export function findDecimal(
  cells: readonly string[],
  delimiter: Delimiter,
): { decimal: DecimalSign; doubtful: boolean } {
  const trimmed = cells.map((cell) => cell.trim());
  const commas = trimmed.filter((cell) => commaOnly.test(cell)).length;
  const points = trimmed.filter((cell) => pointOnly.test(cell)).length;
  if (commas !== points) return { decimal: commas > points ? ',' : '.', doubtful: false };
  const doubtful = trimmed.some((cell) => eitherComma.test(cell));
  return { decimal: delimiter === ';' ? ',' : '.', doubtful };
}

/** Share of the filled cells of a column that are numbers, 0 to 1; 1 where every cell is empty or says "no reading". */
export function shareOfNumbers(cells: readonly string[], decimal: DecimalSign): number {
  const filled = cells.filter((cell) => !isAbsent(cell));
  if (filled.length === 0) return 1;
  return filled.filter((cell) => Number.isFinite(readNumber(cell, decimal))).length / filled.length;
}
