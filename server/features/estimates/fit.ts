import { and, eq } from 'drizzle-orm';
import type pg from 'pg';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { FitSummary, RegressionModel } from '../../../shared/contracts/models.ts';
import { gridWithin } from '../../../shared/numerics/grid.ts';
import { fitLeastSquares } from '../../../shared/numerics/regression.ts';
import { fitRefusalSentence } from '../../../shared/rules/fit-sentences.ts';
import { withClient } from '../../db/client.ts';
import { drafts } from '../../db/schema/index.ts';
import { samplesBetween } from '../judging/repo.ts';
import { carryOut } from '../runs/work.ts';
import { getSite } from '../sites/repo.ts';
import type { ComputeContext } from './context.ts';
import { readInputs } from './inputs.ts';
import { type SensorRow, findDraft, findSensor, tagNames } from './repo.ts';

export interface FitOrder {
  siteId: number;
  softSensorId: number;
  runId: number;
  from: string;
  to: string;
  version: number;
}

/** Fits the draft's coefficients by least squares on the samples of [from, to) and saves them with what the fit found. */
export async function fitDraft(context: ComputeContext, order: FitOrder): Promise<void> {
  await carryOut(context, order.runId, () =>
    withClient(context.pool, async (db, client) => {
      const sensor = (await findSensor(db, order.siteId, order.softSensorId))!;
      const draft = await findDraft(db, order.siteId, order.softSensorId);
      if (!draft || draft.version !== order.version || draft.model.form !== 'regression') {
        throw new AppError('stale', 'The draft was changed meanwhile, so nothing was saved. Fit it again.');
      }
      const data = await trainingData(db, client, sensor, draft.model, order);
      const { zone } = await getSite(db, order.siteId);
      const { fit, model } = fitted(draft.model, data, order, zone);
      const saved = await db
        .update(drafts)
        .set({ model, fit, version: draft.version + 1, updatedAt: context.clock() })
        .where(and(eq(drafts.id, draft.id), eq(drafts.version, order.version)));
      if (saved.rowCount !== 1)
        throw new AppError('stale', 'The draft was changed meanwhile, so nothing was saved. Fit it again.');
      return { softSensorId: sensor.id, samples: fit.samples };
    }),
  );
}

interface TrainingData {
  columns: Float64Array[];
  y: Float64Array;
  names: { tagId: number; name: string; unit: string }[];
  notUsed: Map<string, number>;
}

/** Inputs at each sample's time minus the transport delay, by the grid rule, beside the laboratory result. */
async function trainingData(
  db: Parameters<typeof samplesBetween>[0],
  client: pg.PoolClient,
  sensor: SensorRow,
  model: RegressionModel,
  period: { from: string; to: string },
): Promise<TrainingData> {
  const until = new Date(Date.parse(period.to) - 1);
  const samples = await samplesBetween(db, sensor, new Date(period.from), until);
  const known = await tagNames(
    db,
    sensor.siteId,
    model.terms.map((term) => term.tagId),
  );
  const names = model.terms.map(({ tagId }) => ({
    tagId,
    name: known.get(tagId)?.name ?? '',
    unit: known.get(tagId)?.unit ?? '',
  }));
  const notUsed = new Map<string, number>();
  if (samples.length === 0)
    return { columns: names.map(() => new Float64Array()), y: new Float64Array(), names, notUsed };
  const first = samples[0]!.takenAt!.getTime() - sensor.transportDelayMs;
  const last = samples.at(-1)!.takenAt!.getTime() - sensor.transportDelayMs;
  const grid = gridWithin(first - model.stepMs, last, model.stepMs);
  const inputs = await readInputs(client, sensor.siteId, model, grid);
  const rows: { x: number[]; y: number }[] = [];
  for (const sample of samples) {
    const index = Math.floor(
      (sample.takenAt!.getTime() - sensor.transportDelayMs - grid.startMs) / grid.stepMs,
    );
    const x = inputs.map((column) => column.value[index] ?? NaN);
    const reason = sample.qualifier
      ? 'censored'
      : sample.heldSince
        ? 'held'
        : sample.compositeMs
          ? 'composite'
          : x.every(Number.isFinite)
            ? null
            : 'no-input';
    if (reason) notUsed.set(reason, (notUsed.get(reason) ?? 0) + 1);
    else rows.push({ x, y: sample.value });
  }
  return {
    columns: names.map((_, j) => Float64Array.from(rows, (row) => row.x[j]!)),
    y: Float64Array.from(rows, (row) => row.y),
    names,
    notUsed,
  };
}

function fitted(
  model: RegressionModel,
  data: TrainingData,
  order: FitOrder,
  zone: string,
): { model: RegressionModel; fit: FitSummary } {
  const names = data.names.map(({ name }) => name);
  const found = fitLeastSquares({ columns: data.columns, names, y: data.y, intercept: true });
  if (!found.ok) throw new AppError('not-enough-data', fitRefusalSentence(found, { ...order, zone }));
  const range = (column: Float64Array) => ({
    low: column.reduce((a, b) => Math.min(a, b), Infinity),
    high: column.reduce((a, b) => Math.max(a, b), -Infinity),
  });
  return {
    model: {
      ...model,
      intercept: found.intercept,
      terms: model.terms.map((term, j) => ({ ...term, coefficient: found.coefficients[j]! })),
      residualSd: found.residualSd,
    },
    fit: {
      from: order.from,
      to: order.to,
      samples: found.n,
      residualSd: found.residualSd,
      rSquared: found.r2,
      conditionNumber: found.conditionNumber,
      intercept: { value: found.intercept, standardError: found.interceptStandardError },
      terms: data.names.map(({ tagId, name }, j) => ({
        tagId,
        tagName: name,
        coefficient: found.coefficients[j]!,
        standardError: found.standardErrors[j]!,
        ...range(data.columns[j]!),
      })),
      collinear: found.collinearGroups,
      notUsed: [...data.notUsed].map(([code, count]) => ({ code, count })),
    },
  };
}
