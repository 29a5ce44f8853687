import { eq } from 'drizzle-orm';
import type { Interval } from '../../shared/contracts/interval.ts';
import type { Model } from '../../shared/contracts/models.ts';
import type { SheetFields } from '../../shared/contracts/register.ts';
import { defaultSamplingPlan } from '../../shared/rules/sampling-plan.ts';
import type { Context } from '../../server/context.ts';
import { revisions } from '../../server/db/schema/index.ts';
import { type SensorRow, findDraft, findSensor } from '../../server/features/estimates/repo.ts';
import { decideRevision, proposeRevision, saveDraft } from '../../server/features/register/revisions.ts';
import { registerSensor } from '../../server/features/register/service.ts';
import { addRun } from '../../server/features/runs/repo.ts';
import type { Permitted } from '../../server/http/rows.ts';
import type { DemoSensor } from '../simulation/unit.ts';
import { type SiteScene, atTime, dayMs, instantOf, personOf } from './scene.ts';

/** Every regression is fitted to the samples of its first six weeks; an external estimate needs no fit. */
export const trainingDays = 42;
const quarterMs = 900_000;

const months = (every: number): Interval => ({ every, unit: 'months', counted: 'last-done', anchorOn: null });
/** Usual intervals by importance class (common practice, no source). */
const intervals = {
  A: { recalibrationInterval: months(3), reviewInterval: months(12) },
  B: { recalibrationInterval: months(6), reviewInterval: months(12) },
  C: { recalibrationInterval: months(12), reviewInterval: months(24) },
};
const usual = {
  rangeLow: null,
  rangeHigh: null,
  pairingWindowMs: 0,
  steadyStateGate: false,
  allowedErrorPercent: null,
  historyArrives: 'uploaded',
  historyEveryMs: 7 * dayMs,
  correctionMode: 'propose',
  updateFactor: 0.2,
} as const;

const yearlyOn = (site: SiteScene, day: number): Interval => ({
  every: 12,
  unit: 'months',
  counted: 'anchored',
  anchorOn: new Date(site.startMs + day * dayMs).toISOString().slice(0, 10),
});

/** Registers one soft sensor with its tag, through the service, dated in its past. */
export async function register(
  context: Context,
  site: SiteScene,
  unitName: string,
  demo: DemoSensor,
  laboratory: { samplePointId: number; methodId: number },
): Promise<void> {
  const by = await personOf(context, demo.owner);
  const id = async (key: DemoSensor['owner']) => (await personOf(context, key)).actor.id;
  const fields: SheetFields = {
    ...usual,
    ...intervals[demo.sheet.importanceClass],
    samplingPlan: defaultSamplingPlan(demo.sheet.importanceClass),
    ...demo.sheet,
    ...laboratory,
    ...(demo.recalibration ? { recalibrationInterval: demo.recalibration } : {}),
    ...(demo.reviewOnDay ? { reviewInterval: yearlyOn(site, demo.reviewOnDay) } : {}),
    allowedSpread: demo.allowedSpread ?? null,
    unitId: site.units.get(unitName)!,
    ownerId: by.actor.id,
    deputyId: await id(demo.deputy),
    approverId: await id(demo.approver),
  };
  const then = atTime(context, instantOf(site, birthdayOf(demo)));
  const sheet = await registerSensor(then, by, site.row, fields);
  site.sensors.set(demo.sheet.tagName, { siteId: site.row.id, softSensorId: sheet.id });
  site.tags.set(demo.sheet.tagName, sheet.estimateTagId);
}

/** Day on which it was registered; its first model follows within days. */
export function birthdayOf(demo: DemoSensor): number {
  if (demo.life === 'waiting') return 176;
  return demo.life === 'draft' ? 178 : trainingDays - 2;
}

/** Drafts a model, fits it where it is a regression, and, unless it is to stay a draft, has it proposed and approved. */
export async function bringIntoService(context: Context, site: SiteScene, demo: DemoSensor): Promise<void> {
  const birthday = birthdayOf(demo);
  const fitOn = Math.max(birthday + 1, trainingDays);
  await draftModel(context, site, demo, { day: fitOn, fromDay: fitOn - trainingDays, stepMs: quarterMs });
  if (demo.life === 'draft') return;
  const revision = await propose(
    context,
    site,
    demo,
    fitOn + 1,
    'First model, checked on the samples it was fitted to',
  );
  if (demo.life === 'waiting') return;
  await approve(context, site, demo, revision, fitOn + 2);
}

/** A later revision of the same model: another step, fitted anew to the six weeks before. */
export async function revise(
  context: Context,
  site: SiteScene,
  demo: DemoSensor,
  { day, stepMs, reason }: { day: number; stepMs: number; reason: string },
): Promise<void> {
  await draftModel(context, site, demo, { day, fromDay: day - trainingDays, stepMs });
  await approve(context, site, demo, await propose(context, site, demo, day, reason), day);
}

async function draftModel(
  context: Context,
  site: SiteScene,
  demo: DemoSensor,
  { day, fromDay, stepMs }: { day: number; fromDay: number; stepMs: number },
): Promise<void> {
  const by = await personOf(context, demo.owner);
  const then = atTime(context, instantOf(site, day, 10));
  const sensor = await rowOf(context, site, demo);
  const before = await findDraft(context.db, sensor.siteId, sensor.id);
  const model = modelOf(site, demo, stepMs);
  const draft = await saveDraft(then, by, sensor, { model, version: before?.version ?? null });
  if (model.form === 'external') return;
  const [from, to] = [fromDay, day].map((end) => new Date(site.startMs + end * dayMs).toISOString());
  const key = { siteId: sensor.siteId, createdBy: by.actor.id, createdAt: then.clock() };
  const run = await addRun(context.db, { ...key, kind: 'fit', subjectId: sensor.id });
  const order = { siteId: sensor.siteId, softSensorId: sensor.id, runId: run.id, from: from!, to: to! };
  await context.compute.run('fit', { ...order, version: draft.version }, then.clock());
}

function modelOf(site: SiteScene, demo: DemoSensor, stepMs: number): Model {
  const holdLimitMs = 3 * stepMs;
  if ('external' in demo.estimate) {
    const { wander, noise } = demo.estimate.external;
    const laboratory = demo.sampling.method.reproducibility / 2.77;
    return { form: 'external', holdLimitMs, residualSd: Math.hypot(wander, noise, laboratory) };
  }
  const terms = demo.estimate.inputs.map((tag) => ({ tagId: site.tags.get(tag)!, coefficient: 0 }));
  return { form: 'regression', stepMs, holdLimitMs, intercept: 0, terms, residualSd: null };
}

async function propose(context: Context, site: SiteScene, demo: DemoSensor, day: number, reason: string) {
  const sensor = await rowOf(context, site, demo);
  const draft = await findDraft(context.db, sensor.siteId, sensor.id);
  const then = atTime(context, instantOf(site, day, 11));
  const body = { version: draft!.version, reason, changeReference: '' };
  const { id } = await proposeRevision(then, await personOf(context, demo.owner), sensor, body);
  const [revision] = await context.db.select().from(revisions).where(eq(revisions.id, id));
  return revision as Permitted<typeof revision & object>;
}

async function approve(
  context: Context,
  site: SiteScene,
  demo: DemoSensor,
  revision: Awaited<ReturnType<typeof propose>>,
  day: number,
): Promise<void> {
  const then = atTime(context, instantOf(site, day, 14));
  const by = await personOf(context, demo.approver);
  await decideRevision(then, by, revision, { decision: 'approved', reason: '' });
  const key = site.sensors.get(demo.sheet.tagName)!;
  await context.compute.run('estimate', key, then.clock());
}

export async function rowOf(
  context: Context,
  site: SiteScene,
  demo: Pick<DemoSensor, 'sheet'>,
): Promise<Permitted<SensorRow>> {
  const key = site.sensors.get(demo.sheet.tagName)!;
  return (await findSensor(context.db, key.siteId, key.softSensorId)) as Permitted<SensorRow>;
}
