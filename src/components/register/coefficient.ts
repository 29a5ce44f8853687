import type { FitSummary, Model, RegressionModel } from '../../../shared/contracts/models.ts';
import { formatNumber, formatSigned } from '../../../shared/rules/format.ts';

/** Decimals that a coefficient deserves: two figures of its standard error, or four of its own where none is known. */
export function coefficientDecimals(value: number, standardError: number | null): number {
  const [size, figures] = standardError && standardError > 0 ? [standardError, 2] : [Math.abs(value), 4];
  if (size === 0 || !Number.isFinite(size)) return 0;
  return Math.min(12, Math.max(0, figures - 1 - Math.floor(Math.log10(size))));
}

export function coefficientWords(value: number, standardError: number | null, signed = false): string {
  const decimals = coefficientDecimals(value, standardError);
  const number = (signed ? formatSigned : formatNumber)(value, decimals);
  return standardError === null ? number : `${number} ± ${formatNumber(standardError, decimals)}`;
}

/** One addend of a model's equation: "+ 0.842 °C per °C × TI-1401". */
export interface EquationPart {
  sign: '' | '+' | '−';
  coefficient: string;
  tag: string | null;
}

/** The addends of a regression, in the order of its terms, each with its sign before it. */
export function equationParts(
  model: RegressionModel,
  fit: FitSummary | null,
  nameOf: (tagId: number) => string,
): EquationPart[] {
  const errors = new Map(fit?.terms.map((term) => [term.tagId, term.standardError]));
  const part = (value: number, error: number | null, tag: string | null, first: boolean): EquationPart => ({
    sign: first ? (value < 0 ? '−' : '') : value < 0 ? '−' : '+',
    coefficient: formatNumber(Math.abs(value), coefficientDecimals(value, error)),
    tag,
  });
  return [
    part(model.intercept, fit?.intercept.standardError ?? null, null, true),
    ...model.terms.map(({ tagId, coefficient }) =>
      part(coefficient, errors.get(tagId) ?? null, nameOf(tagId), false),
    ),
  ];
}

/** A model on one line, for lists and comparisons. */
export function modelWords(model: Model, fit: FitSummary | null, nameOf: (tagId: number) => string): string {
  if (model.form === 'external') return 'Computed elsewhere; arrives as readings';
  return equationParts(model, fit, nameOf)
    .map(({ sign, coefficient, tag }) => `${sign} ${coefficient}${tag === null ? '' : ` × ${tag}`}`)
    .join(' ')
    .trim();
}

/** Unit of a coefficient: what the estimate gains for one of the input. */
export function perUnit(estimateUnit: string, inputUnit: string): string {
  return `${estimateUnit || '1'} per ${inputUnit || '1'}`;
}
