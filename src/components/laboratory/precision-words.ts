import type { MethodPrecision, PrecisionFigure } from '../../../shared/contracts/precision.ts';
import { formatNumber } from '../../../shared/rules/format.ts';
import { decimalsFor, sayPrecision } from '../../../shared/rules/precision-sentences.ts';

type Spread = Extract<PrecisionFigure, { ok: true }>;

/** The figure that rests on most degrees of freedom; null where none is known. */
export function surest(figures: readonly PrecisionFigure[]): Spread | null {
  const known = figures.filter((figure) => figure.ok);
  return known.reduce<Spread | null>(
    (best, next) => (best && best.degreesOfFreedom >= next.degreesOfFreedom ? best : next),
    null,
  );
}

/** The site's own r: of replicates and of series on check standards, whichever rests on more. */
export const ownR = ({ replicates, standards }: MethodPrecision): Spread | null =>
  surest([replicates.figure, ...standards.map(({ repeatability }) => repeatability)]);

/** The site's own R′, from check standards. */
export const ownSiteR = ({ standards }: MethodPrecision): Spread | null =>
  surest(standards.map(({ sitePrecision }) => sitePrecision));

/** A limit for a table: "5.1 °C"; "not known" without one. */
export function sayOwn(figure: Spread | null, unit: string): string {
  if (!figure) return 'not known';
  const number = formatNumber(figure.limit, decimalsFor(figure.limit));
  return unit ? `${number}\u00a0${unit}` : number;
}

/** The interval beneath it: "4.2 to 6.6, 38 degrees of freedom"; empty without one. */
export function sayOwnInterval(figure: Spread | null): string {
  if (!figure) return '';
  return sayPrecision(figure, '').replace(/^.*interval ([^)]*)\)/, '$1');
}

/**
 * What an offered limit would mean for a method, or why it isn't offered: no figure, or the method has it already.
 * @param which 'r' or 'R'
 */
export function offerOf(
  { offers, repeatability, reproducibility }: MethodPrecision,
  which: 'r' | 'R',
): { value: number; says: string } | null {
  const value = offers[which];
  const stands = which === 'r' ? repeatability : reproducibility;
  if (value === null || value === stands) return null;
  const other = which === 'r' ? reproducibility : repeatability;
  // r above R can't stand; the other of the two is taken over first.
  const narrow = other !== null && (which === 'r' ? value > other : value < other);
  return narrow ? null : { value, says: `Use ${formatNumber(value, decimalsFor(value))} as ${which}` };
}

/** The mean of a series, to one digit more than its results have. */
export function sayMean(values: readonly number[]): string {
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
  const digits = values.map((value) => /\.(\d+)$/.exec(String(value))?.[1]?.length ?? 0);
  return formatNumber(
    mean,
    values.length === 1 ? Math.max(...digits) : Math.min(12, Math.max(...digits) + 1),
  );
}
