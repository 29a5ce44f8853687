import type { Judgement, PairedError } from '../../../shared/contracts/judging.ts';
import { formatSigned } from '../../../shared/rules/format.ts';
import type { ChartMark, ChartPanel, Values } from '../charts/chart-types.ts';

/** What both pictures of a soft sensor over time are drawn from. */
export interface ErrorPictures {
  series: { at: number[]; value: Values; low: Values; high: Values };
  errors: readonly PairedError[];
  judgement: Judgement;
  reproducibility: number | null;
  unit: string;
  decimals: number;
}

type Counted = PairedError & { error: number };

/** The error of what was shown: with the correction in force when the sample was taken. */
const shownError = ({ corrected, error }: Counted): number => corrected ?? error;

/** Pairs that count, oldest first: the EWMA has one point for each of these. */
export function countedPairs(errors: readonly PairedError[]): Counted[] {
  return errors.filter((pair): pair is Counted => pair.notCounted === null && pair.error !== null);
}

/** Half the whisker of one result: R limits the difference of two, so one stands for R/√2 (ISO 5725-6). */
function whiskerOf(reproducibility: number | null): number | null {
  return reproducibility === null ? null : reproducibility / Math.SQRT2;
}

/** The estimate with its band, and the references: the upper picture. */
export function estimatePanel(pictures: ErrorPictures): ChartPanel {
  const { series, errors, unit, decimals, reproducibility, judgement } = pictures;
  const hasBand = series.low.some((value) => value !== null);
  const marks: ChartMark[] = [
    ...(hasBand
      ? [{ kind: 'band', label: '95 % band', at: series.at, low: series.low, high: series.high } as const]
      : []),
    { kind: 'line', label: 'Estimate', at: series.at, values: series.value, tone: 'estimate' },
    {
      kind: 'references',
      label: 'Reference',
      at: errors.map(({ takenAt }) => takenAt),
      values: errors.map(({ reference }) => reference),
      halfWidth: whiskerOf(reproducibility) ?? 0,
    },
  ];
  return {
    id: 'estimate',
    title: 'Estimate and reference samples',
    unit,
    decimals,
    marks,
    caption: estimateCaption(hasBand, judgement.coverage, reproducibility !== null),
  };
}

function estimateCaption(hasBand: boolean, coverage: Judgement['coverage'], hasWhisker: boolean): string {
  const held =
    coverage && coverage.of > 0 ? `; it held ${coverage.held} of the last ${coverage.of} references` : '';
  const line = hasBand
    ? `Line: estimate, with the band that should hold 95 % of true values${held}.`
    : 'Line: estimate; the SD of its errors is not known, so there is no band.';
  const diamonds = hasWhisker
    ? 'Diamonds: laboratory reference ± R/√2 of its method.'
    : 'Diamonds: laboratory reference; its method states no reproducibility R, so there is no whisker.';
  return `${line} ${diamonds}`;
}

/** Single errors against the allowed error, with their weighted mean: the lower picture. */
export function errorPanel({ errors, judgement, unit, decimals }: ErrorPictures): ChartPanel {
  const counted = countedPairs(errors);
  const at = counted.map(({ takenAt }) => takenAt);
  const marks: ChartMark[] = [
    ...allowedMarks(counted, at),
    ...ewmaMarks(judgement, at),
    { kind: 'rings', label: 'Error', at, values: counted.map(shownError) },
  ];
  const { ewma } = judgement;
  const mean = ewma
    ? ` Line: exponentially weighted mean (λ ${ewma.lambda}), dashed its control limits. Dot with tick: chart signal.`
    : ' Too few errors for a weighted mean.';
  return {
    id: 'errors',
    title: 'Error = estimate − reference',
    unit,
    decimals: Math.min(6, decimals + 1),
    signed: true,
    include: [0],
    height: 220,
    marks,
    caption: `Rings: single errors. Shaded: allowed error.${mean}`,
  };
}

function allowedMarks(counted: readonly Counted[], at: string[]): ChartMark[] {
  const sizes = counted.map(({ allowed }) => allowed);
  if (sizes.length === 0) return [];
  const same = sizes.every((size) => size === sizes[0]);
  const level = same
    ? { low: -sizes[0]!, high: sizes[0]! }
    : { at, low: sizes.map((size) => -size), high: sizes };
  return [{ kind: 'allowed', label: 'Allowed error', ...level }];
}

function ewmaMarks({ ewma }: Judgement, at: string[]): ChartMark[] {
  if (!ewma || ewma.points.length !== at.length) return [];
  const { points } = ewma;
  // Exact limits settle after a few samples; only their steps are drawn.
  const steps = points.flatMap(({ upper, lower }, index) => {
    const before = points[index - 1];
    const moved =
      !before || Math.abs(upper - lower - (before.upper - before.lower)) > 0.002 * (upper - lower);
    return moved || index === points.length - 1 ? [index] : [];
  });
  const stepAt = steps.map((index) => at[index]!);
  const signals = points.flatMap(({ signal }, index) => (signal ? [index] : []));
  return [
    {
      kind: 'limit',
      label: 'Upper control limit',
      at: stepAt,
      value: steps.map((index) => points[index]!.upper),
    },
    {
      kind: 'limit',
      label: 'Lower control limit',
      at: stepAt,
      value: steps.map((index) => points[index]!.lower),
    },
    { kind: 'line', label: 'Weighted mean', at, values: points.map(({ z }) => z), tone: 'ink' },
    {
      kind: 'signals',
      label: 'Signal',
      at: signals.map((index) => at[index]!),
      values: signals.map((index) => points[index]!.z),
    },
  ];
}

/** Accessible words for the two pictures. */
export function picturesInWords(pictures: ErrorPictures): string {
  const { bias } = pictures.judgement;
  const signals = pictures.judgement.ewma?.points.filter(({ signal }) => signal).length ?? 0;
  const decimals = Math.min(6, pictures.decimals + 1);
  if (!bias.ok) return `${pictures.errors.length} reference samples; too few count to tell a bias.`;
  return `${bias.n} errors, bias ${formatSigned(bias.bias, decimals)} ${pictures.unit}, 95 % interval ${formatSigned(bias.low, decimals)} to ${formatSigned(bias.high, decimals)}; ${signals} chart signals.`;
}
