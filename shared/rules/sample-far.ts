import type { SampleReason } from '../contracts/sample-import.ts';
import {
  createFarTest,
  type FarTest,
  isPlaceholder,
  thousandThatFits,
  unitThatFits,
} from './sample-plausible.ts';
import type { ReadRow } from './sample-row.ts';

const sideways = 15;
const nearest = 4;
const agreeing = 3;

/** Values taken just before and after a row, itself left out; the order is found only once somebody asks. */
type ValuesAround = (row: ReadRow, each: number) => number[];

const timeOf = ({ sample }: ReadRow): number => sample!.takenAt ?? Date.parse(sample!.takenOn!);

function reasonFor(
  { sample }: ReadRow,
  test: FarTest,
  among: 'last' | 'file',
  isFar: FarTest['isFar'],
): SampleReason {
  const { value, unit } = sample!;
  const figures = { value, unit, median: test.median, among };
  const fits = unitThatFits(value, unit, isFar);
  if (fits) return { code: 'far-from-last', figures: { ...figures, fits } };
  const thousand = thousandThatFits(value, isFar);
  return { code: 'far-from-last', figures: thousand ? { ...figures, thousand } : figures };
}

function valuesAroundIn(rows: readonly ReadRow[]): ValuesAround {
  let places: Map<ReadRow, number> | null = null;
  let values: number[] = [];
  return (row, each) => {
    if (!places) {
      const inTime = [...rows].sort((a, b) => timeOf(a) - timeOf(b));
      places = new Map(inTime.map((one, place) => [one, place]));
      values = inTime.map(({ sample }) => sample!.value);
    }
    const place = places.get(row)!;
    return [...values.slice(Math.max(0, place - each), place), ...values.slice(place + 1, place + 1 + each)];
  };
}

function judge(
  row: ReadRow,
  around: ValuesAround,
  last: FarTest | null,
  reproducibility: number | null,
): SampleReason | null {
  const { value } = row.sample!;
  if (!last) {
    const others = isPlaceholder(value) ? createFarTest(around(row, sideways), reproducibility) : null;
    return others?.isFarFromMedian(value) ? reasonFor(row, others, 'file', others.isFarFromMedian) : null;
  }
  if (!last.isFar(value)) return null;
  const reason = reasonFor(row, last, 'last', last.isFar);
  if ('fits' in reason.figures || 'thousand' in reason.figures || isPlaceholder(value)) return reason;
  // Where its neighbours in the file agree, the process has moved; a wrong unit or a number for nothing has not.
  const agree = around(row, nearest).filter((other) => last.isNear(value, other));
  return agree.length >= agreeing ? null : reason;
}

/**
 * Finds results that lie far from the last accepted ones of their point, and from those around them in the file. Results
 * that all lie far together are let in, as after a real step of the process, unless another unit explains them.
 * @param rows with samples that would go in
 * @returns why a row is held, by row
 */
export function findFar(
  rows: readonly ReadRow[],
  known: { lastValues: ReadonlyMap<number, readonly number[]>; reproducibility: number | null },
): Map<ReadRow, SampleReason> {
  const byPoint = new Map<number, ReadRow[]>();
  for (const row of rows) {
    if (row.sample!.qualifier !== null) continue;
    const list = byPoint.get(row.sample!.samplePointId);
    if (list) list.push(row);
    else byPoint.set(row.sample!.samplePointId, [row]);
  }
  const found = new Map<ReadRow, SampleReason>();
  for (const [pointId, list] of byPoint) {
    const around = valuesAroundIn(list);
    const last = createFarTest(known.lastValues.get(pointId) ?? [], known.reproducibility);
    for (const row of list) {
      const reason = judge(row, around, last, known.reproducibility);
      if (reason) found.set(row, reason);
    }
  }
  return found;
}
