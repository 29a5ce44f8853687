import type { z } from 'zod';
import type { chartSeries } from '../../../shared/contracts/judging.ts';
import { bandAround } from '../../../shared/rules/band.ts';
import { correctSeries } from '../../../shared/rules/correction-steps.ts';
import type { Context } from '../../context.ts';
import type { Permitted } from '../../http/rows.ts';
import { correctionSteps } from '../calibrations/repo.ts';
import { findTag } from '../tags/repo.ts';
import { tagSeries } from '../tags/service.ts';
import { type SensorRow, approvedRevisions } from './repo.ts';

type ChartSeries = z.input<typeof chartSeries>;

/** The estimate for a chart with the band that should hold 95 % of true values, where its SD is known. */
export async function estimateSeries(
  context: Context,
  sensor: SensorRow,
  from: Date,
  to: Date,
): Promise<ChartSeries> {
  const tag = (await findTag(context.db, sensor.siteId, sensor.estimateTagId))!;
  const series = await tagSeries(context, tag as Permitted<typeof tag>, from, to);
  const sd = (await approvedRevisions(context.db, sensor.siteId, sensor.id)).at(-1)?.model.residualSd ?? null;
  const steps = await correctionSteps(context.db, sensor.siteId, sensor.id);
  const value = correctSeries(series.at, series.value, steps);
  return { at: series.at, value, ...bandAround(value, sd) };
}
