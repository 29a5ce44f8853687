import type { DecimalSign, Delimiter } from '../../../shared/contracts/history.ts';
import type { SampleDateOrder } from '../../../shared/contracts/sample-import.ts';
import { delimiterWords } from '../history/history-words.ts';
import type { FileColumn } from './mapping-form.ts';
import { sampleOrderWords } from './evidence-words.ts';

const choicesOf = <V extends string>(words: Record<V, string>, values: readonly V[]) =>
  values.map((value) => ({ value, label: words[value] }));

const decimalWords: Record<DecimalSign, string> = { '.': 'Point (1482.5)', ',': 'Comma (1482,5)' };

/** How a file may be written, to choose from. */
export const delimiters = choicesOf(delimiterWords, Object.keys(delimiterWords) as Delimiter[]);
export const decimals = choicesOf(decimalWords, ['.', ',']);
export const orders = choicesOf(sampleOrderWords, Object.keys(sampleOrderWords) as SampleDateOrder[]);

/** Points or methods to choose from, those that are not archived. */
export const inUse = <Row extends { id: number; name: string; archivedAt: string | null }>(
  rows: readonly Row[],
) => rows.filter(({ archivedAt }) => archivedAt === null).map(({ id, name }) => ({ value: id, label: name }));

/** A column to choose, with what stands in it. */
export const asChoice = ({ name, example }: FileColumn, value: number) => ({
  value,
  label: name,
  note: example,
});
