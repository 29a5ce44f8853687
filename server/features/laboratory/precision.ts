import type {
  LaboratoryBias,
  MethodPrecision,
  PrecisionFigure,
  StandardPrecision,
} from '../../../shared/contracts/precision.ts';
import { individualsLimits } from '../../../shared/numerics/control-charts.ts';
import { meanOf } from '../../../shared/numerics/descriptive.ts';
import type { Refusal, Result } from '../../../shared/numerics/result.ts';
import {
  biasOfLaboratory,
  intermediatePrecision,
  pooledRepeatability,
  type SdWithInterval,
} from '../../../shared/numerics/site-precision.ts';
import { twoDigits } from '../../../shared/rules/precision-sentences.ts';
import type { Queryable } from '../../db/client.ts';
import type { MethodRow } from '../samples/points-repo.ts';
import { listStandards, replicatesOf } from './standards-repo.ts';

/** Newest samples with replicates that are looked at: a laboratory of ten years ago is another one. */
const mostSets = 2000;
/** Series that make the limits for the newest mean, at least and at most. */
const fewestForLimits = 15;
const mostForLimits = 30;

/** How precise the laboratory of the site is with a method, from its own repeats. */
export async function precisionOf(db: Queryable, method: MethodRow): Promise<MethodPrecision> {
  const { siteId, id: methodId } = method;
  const sets = await replicatesOf(db, siteId, methodId, mostSets);
  const replicates = { samples: sets.length, figure: figureOf(pooledRepeatability(sets)) };
  const kept = (await listStandards(db, siteId, methodId)).filter(({ archivedAt }) => archivedAt === null);
  const standards = kept.map(standardPrecision);
  return {
    methodId,
    name: method.name,
    unit: method.unit,
    version: method.version,
    repeatability: method.repeatability,
    reproducibility: method.reproducibility,
    replicates,
    standards,
    offers: {
      r: offered([replicates.figure, ...standards.map(({ repeatability }) => repeatability)]),
      R: offered(standards.map(({ sitePrecision }) => sitePrecision)),
    },
  };
}

type Standard = Awaited<ReturnType<typeof listStandards>>[number];

function standardPrecision({ id, name, acceptedValue, results }: Standard): StandardPrecision {
  const standing = results.filter(({ withdrawnAt }) => withdrawnAt === null);
  const series = standing.map(({ values }) => values);
  return {
    standardId: id,
    name,
    acceptedValue,
    series: series.length,
    results: series.reduce((sum, { length }) => sum + length, 0),
    repeatability: figureOf(pooledRepeatability(series)),
    sitePrecision: figureOf(intermediatePrecision(series)),
    bias: biasOf(biasOfLaboratory(series, acceptedValue)),
    outOfControl: newestOutside(standing),
  };
}

function figureOf(found: Result<SdWithInterval>): PrecisionFigure {
  return found.ok ? found : tooLittle(found);
}

function biasOf(found: ReturnType<typeof biasOfLaboratory>): LaboratoryBias {
  return found.ok ? found : tooLittle(found);
}

function tooLittle({ reason, field, got = 0, needed = 0 }: Refusal) {
  const why =
    reason === 'no-spread' ? 'no-spread' : field === 'series' ? 'too-few-series' : 'too-few-repeats';
  return {
    ok: false as const,
    reason: why as 'no-spread' | 'too-few-series' | 'too-few-repeats',
    got,
    needed,
  };
}

/** The limit of the figure that rests on most degrees of freedom. */
function offered(figures: readonly PrecisionFigure[]): number | null {
  const known = figures.filter((figure) => figure.ok);
  if (known.length === 0) return null;
  return twoDigits(
    known.reduce((best, next) => (next.degreesOfFreedom > best.degreesOfFreedom ? next : best)).limit,
  );
}

/** Is the newest mean outside the limits of an individuals chart of those before it? `results`: newest first. */
function newestOutside(
  results: readonly { measuredAt: Date; values: number[] }[],
): StandardPrecision['outOfControl'] {
  const [newest, ...before] = results;
  if (!newest || before.length < fewestForLimits) return null;
  const means = before.slice(0, mostForLimits).map(({ values }) => meanOf(values));
  const limits = individualsLimits(means.reverse());
  if (!limits.ok) return null;
  const mean = meanOf(newest.values);
  if (mean >= limits.lower && mean <= limits.upper) return null;
  return { measuredAt: newest.measuredAt.toISOString(), mean, low: limits.lower, high: limits.upper };
}
