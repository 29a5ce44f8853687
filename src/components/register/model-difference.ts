import type { FitSummary, Model } from '../../../shared/contracts/models.ts';
import { formatSigned } from '../../../shared/rules/format.ts';
import { coefficientDecimals, coefficientWords } from './coefficient.ts';
import { sayDuration } from './durations.ts';

export interface DifferenceRow {
  what: string;
  inForce: string;
  proposed: string;
  change: string;
}
interface Side {
  model: Model;
  fit: FitSummary | null;
}
const NONE = '–';

/**
 * Two models line by line; `before` is null for a first model. A tag in one of them only stands as in or out.
 * `says`: words for a coefficient by its tag, null for the intercept; `unit`: of the estimate.
 */
export function modelDifference(
  before: Side | null,
  after: Side,
  says: (tagId: number | null) => string,
  unit: string,
): DifferenceRow[] {
  const formWords = { regression: 'Regression', external: 'External' };
  const row = (what: string, said: (side: Side) => string): DifferenceRow => {
    const [inForce, proposed] = [before ? said(before) : NONE, said(after)];
    return { what, inForce, proposed, change: before && inForce !== proposed ? 'changed' : '' };
  };
  return [
    row('Form', ({ model }) => formWords[model.form]),
    ...(after.model.form === 'regression' || before?.model.form === 'regression'
      ? numberRows(before, after, says)
      : []),
    row('Computed every', ({ model }) => (model.form === 'regression' ? sayDuration(model.stepMs) : NONE)),
    row('A reading holds for', ({ model }) => sayDuration(model.holdLimitMs)),
    numberRow(
      unit ? `SD of a single error, ${unit}` : 'SD of a single error',
      sdOf(before),
      sdOf(after),
      before !== null,
    ),
    row('Fitted on', ({ fit }) => (fit ? `${fit.samples} samples` : 'typed in')),
  ];
}

interface Term {
  value: number;
  error: number | null;
}

function termsOf(side: Side | null): Map<number | null, Term> {
  if (side?.model.form !== 'regression') return new Map();
  const errors = new Map(side.fit?.terms.map((term) => [term.tagId, term.standardError]));
  return new Map<number | null, Term>([
    [null, { value: side.model.intercept, error: side.fit?.intercept.standardError ?? null }],
    ...side.model.terms.map(
      ({ tagId, coefficient }) => [tagId, { value: coefficient, error: errors.get(tagId) ?? null }] as const,
    ),
  ]);
}

const sdOf = (side: Side | null): Term | undefined =>
  side?.model.residualSd == null ? undefined : { value: side.model.residualSd, error: null };

function numberRows(
  before: Side | null,
  after: Side,
  says: (tagId: number | null) => string,
): DifferenceRow[] {
  const [old, next] = [termsOf(before), termsOf(after)];
  return [...new Set([...next.keys(), ...old.keys()])].map((key) => ({
    ...numberRow(says(key), old.get(key), next.get(key), before !== null),
    ...(before && key !== null && !old.has(key) ? { change: 'new input' } : {}),
    ...(before && key !== null && !next.has(key) ? { change: 'left out' } : {}),
  }));
}

function numberRow(
  what: string,
  was: Term | undefined,
  is: Term | undefined,
  compared: boolean,
): DifferenceRow {
  const words = (term: Term | undefined) => (term ? coefficientWords(term.value, term.error) : NONE);
  return { what, inForce: words(was), proposed: words(is), change: compared ? changeOf(was, is) : '' };
}

function changeOf(was: Term | undefined, is: Term | undefined): string {
  if (!was && !is) return '';
  if (!was || !is) return 'changed';
  if (was.value === is.value) return '';
  const by = is.value - was.value;
  return formatSigned(by, coefficientDecimals(by, is.error ?? was.error));
}
