import type { LaboratoryBias, PrecisionFigure, StandardPrecision } from '../contracts/precision.ts';
import { formatInstant, formatNumber, plural } from './format.ts';

/** Why r above R is refused. */
export const sayNarrow = (r: number, R: number): string =>
  `R (${R}) can’t be below r (${r}): two laboratories differ at least as much as one differs from itself.`;

/**
 * Decimals that show a figure to two significant digits: 5.12 → 1, 0.0314 → 3, 120 → 0.
 * @param figure any number; 0 gives 0 decimals
 */
export function decimalsFor(figure: number): number {
  const size = Math.abs(figure);
  if (!(size > 0) || !Number.isFinite(size)) return 0;
  return Math.min(12, Math.max(0, 1 - Math.floor(Math.log10(size))));
}

/** A figure rounded to two significant digits, as it is offered for r or R. */
export const twoDigits = (figure: number): number => Number(figure.toPrecision(2));

const withUnit = (text: string, unit: string) => (unit ? `${text}\u00a0${unit}` : text);

type Spread = Extract<PrecisionFigure, { ok: true }>;

/** A limit with its interval: "5.1 °C (95 % interval 4.2 to 6.6), 38 degrees of freedom". */
export function sayLimitFound(
  { limit, limitLow, limitHigh, degreesOfFreedom }: Spread,
  unit: string,
): string {
  const decimals = decimalsFor(limit);
  const say = (figure: number) => formatNumber(figure, decimals);
  const freedom = plural(Math.round(degreesOfFreedom), 'degree of freedom', 'degrees of freedom');
  return `${withUnit(say(limit), unit)} (95 % interval ${say(limitLow)} to ${say(limitHigh)}), ${freedom}`;
}

/**
 * Why no figure is given, and what it takes.
 * @param from what is counted: repeats of samples, or series on a check standard
 */
export function sayTooLittle({ reason, got, needed }: Extract<PrecisionFigure, { ok: false }>): string {
  if (reason === 'no-spread') {
    return 'Not known: all repeats are equal, so the results are rounded too coarsely to show their scatter.';
  }
  const what = reason === 'too-few-series' ? ['series', 'series'] : ['repeat', 'repeats'];
  return `Not known yet: ${plural(got, what[0]!, what[1])} of at least ${needed}.`;
}

/** A precision figure, or why there is none. */
export const sayPrecision = (figure: PrecisionFigure, unit: string): string =>
  figure.ok ? sayLimitFound(figure, unit) : sayTooLittle(figure);

/**
 * What the laboratory finds on a material of known value: "Finds 0.8 °C more than the accepted 1,064.2 °C (95 %
 * interval 0.1 to 1.5)"; whether that may be nothing is said too.
 */
export function sayLaboratoryBias(bias: LaboratoryBias, acceptedValue: number, unit: string): string {
  if (!bias.ok) return sayTooLittle(bias);
  const half = (bias.high - bias.low) / 2;
  const decimals = Math.max(decimalsFor(half), decimalsFor(bias.bias) - 1);
  const say = (figure: number) => formatNumber(figure, decimals);
  const accepted = withUnit(String(acceptedValue).replace('-', '−'), unit);
  const interval = `(95 % interval ${say(bias.low)} to ${say(bias.high)}, ${bias.series} series)`;
  if (bias.low <= 0 && bias.high >= 0) {
    return `No bias shown against the accepted ${accepted}: ${withUnit(say(bias.bias), unit)} ${interval}.`;
  }
  const size = withUnit(formatNumber(Math.abs(bias.bias), decimals), unit);
  return `Finds ${size} ${bias.bias > 0 ? 'more' : 'less'} than the accepted ${accepted} ${interval}.`;
}

/** A signal of the individuals chart: the newest mean outside the limits of the series before it. */
export function sayOutOfControl(
  { outOfControl }: Pick<StandardPrecision, 'outOfControl'>,
  unit: string,
  zone: string,
): string {
  if (!outOfControl) return '';
  const { measuredAt, mean, low, high } = outOfControl;
  const decimals = decimalsFor((high - low) / 2);
  const say = (figure: number) => formatNumber(figure, decimals);
  return (
    `The newest mean, ${withUnit(say(mean), unit)} on ${formatInstant(measuredAt, zone)}, lies outside the limits of the ` +
    `series before it, ${say(low)} to ${withUnit(say(high), unit)}. Look at the method before trusting new results.`
  );
}
