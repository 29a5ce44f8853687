import { historyDateOrder, type DecimalSign, type HistoryDateOrder } from '../contracts/history.ts';
import { historyTimeReader } from './history-times.ts';
import { isAbsent, readNumber } from './history-values.ts';
import { detectDecimal } from './sample-number.ts';

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
  /** How often the next time lies before the one above it. */
  backward: number;
  /** From the earliest to the latest, in milliseconds. */
  span: number;
  times: number[];
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
  const asGood =
    second?.share === first.share && second.backward === first.backward && second.span === first.span;
  const doubtful = asGood && second.times.some((at, index) => at !== first.times[index]);
  return { dateOrder: first.dateOrder, share: first.share, doubtful };
}

function evidenceFor(
  dateOrder: HistoryDateOrder,
  cells: readonly string[],
  zone: string,
  latestMs: number,
): OrderEvidence {
  const read = historyTimeReader({ dateOrder, zone, latestMs });
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
  const share = cells.length === 0 ? 0 : times.length / cells.length;
  return { dateOrder, share, backward, span: high - low, times };
}

/** One cell in so many that is written the other way is a slip; more make the sign doubtful. */
const slips = 20;

/**
 * The decimal sign of a file, from cells that can only be read one way; {@link detectDecimal} says which those are.
 * @returns null where it is in doubt: every sign may part thousands as well, or cells of both kinds are many
 */
export function findDecimal(cells: readonly string[]): DecimalSign | null {
  const counts = { '.': 0, ',': 0 };
  let open = false;
  for (const cell of cells) {
    if (!cell.includes('.') && !cell.includes(',')) continue;
    if (Number.isNaN(readNumber(cell, '.')) && Number.isNaN(readNumber(cell, ','))) continue;
    const sign = detectDecimal([cell]);
    if (sign === null) open = true;
    else counts[sign]++;
  }
  const [more, less] = counts['.'] >= counts[','] ? (['.', ','] as const) : ([',', '.'] as const);
  if (counts[more] === 0) return open ? null : '.';
  return counts[more] > slips * counts[less] ? more : null;
}

/** Share of the filled cells of a column that are numbers, 0 to 1; 1 where every cell is empty or says "no reading". */
export function shareOfNumbers(cells: readonly string[], decimal: DecimalSign): number {
  const filled = cells.filter((cell) => !isAbsent(cell));
  if (filled.length === 0) return 1;
  return filled.filter((cell) => Number.isFinite(readNumber(cell, decimal))).length / filled.length;
}
