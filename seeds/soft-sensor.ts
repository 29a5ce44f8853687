import { and, eq, sql } from 'drizzle-orm';
import type { Model } from '../shared/contracts/models.ts';
import type { SheetFields } from '../shared/contracts/register.ts';
import type { Context } from '../server/context.ts';
import { ensurePartitions } from '../server/db/partitions.ts';
import {
  areas,
  methods,
  revisions,
  samplePoints,
  samples,
  softSensors,
  tags,
  units,
} from '../server/db/schema/index.ts';
import { readingsChanged } from '../server/features/history/changed.ts';
import { decideRevision, proposeRevision, saveDraft } from '../server/features/register/revisions.ts';
import { type By, registerSensor } from '../server/features/register/service.ts';
import type { SiteRow } from '../server/features/sites/repo.ts';
import { addArea, addUnit } from '../server/features/sites/service.ts';
import { refreshSpan } from '../server/features/tags/spans.ts';
import type { Permitted } from '../server/http/rows.ts';
import { type DemoHistory, type DemoSensor, simulate, stepMs } from './plants.ts';
import { randomFrom } from './random.ts';

export interface DemoActors {
  engineer: By;
  manager: By;
  technicianId: number;
  ownerId: number;
  deputyId: number;
  managerId: number;
}

const historyDays = 90;
const reportedAfterMs = 2 * 3_600_000;
const defaults = {
  rangeLow: null,
  rangeHigh: null,
  transportDelayMs: 0,
  pairingWindowMs: 0,
  steadyStateGate: false,
  allowedErrorPercent: null,
  allowedSpread: null,
  historyArrives: 'uploaded',
  historyEveryMs: 7 * 86_400_000,
  correctionMode: 'propose',
  updateFactor: 0.2,
  recalibrationMonths: 3,
  reviewMonths: 12,
} as const;

/** Puts one demo soft sensor in through the same services that people use; every figure shown is then computed. */
export async function seedSoftSensor(
  context: Context,
  actors: DemoActors,
  site: Permitted<SiteRow>,
  demo: DemoSensor,
  seed: number,
): Promise<void> {
  const now = context.clock();
  const past: Context = { ...context, clock: () => new Date(now.getTime() - 60 * 86_400_000) };
  const unitId = await place(past, actors.engineer, site, demo);
  const { pointId, methodId } = await laboratory(context, site.id, unitId, demo);
  const endMs = Math.floor(now.getTime() / stepMs) * stepMs;
  const history = simulate(demo, endMs, historyDays, seed);
  const tagIds = await inputTags(context, site.id, unitId, demo);
  const fields: SheetFields = {
    ...defaults,
    ...demo.sheet,
    unitId,
    samplePointId: pointId,
    methodId,
    ownerId: demo.owned ? actors.ownerId : null,
    deputyId: demo.owned ? actors.deputyId : null,
    approverId: actors.managerId,
  };
  const sheet = await registerSensor(past, actors.engineer, site, fields);
  await ensurePartitions(context.db, history.at[0]!, endMs);
  for (const [j, tagId] of tagIds.entries())
    await writeHistory(context, site.id, tagId, history.at, history.inputs[j]!);
  if (demo.form === 'external')
    await writeHistory(context, site.id, sheet.estimateTagId, history.at, history.estimate);
  await writeSamples(context, site.id, pointId, methodId, actors.technicianId, demo, history, seed);
  await putInService(context, past, actors, sheet.id, demo, tagIds);
}

async function place(context: Context, by: By, site: Permitted<SiteRow>, demo: DemoSensor): Promise<number> {
  const [unit] = await context.db
    .select()
    .from(units)
    .where(and(eq(units.siteId, site.id), eq(units.name, demo.unitName)));
  if (unit) return unit.id;
  const [known] = await context.db
    .select()
    .from(areas)
    .where(and(eq(areas.siteId, site.id), eq(areas.name, demo.area)));
  const area = known ?? (await addArea(context, by, site, { name: demo.area }));
  return (await addUnit(context, by, site, { name: demo.unitName, areaId: area.id })).id;
}

async function laboratory(context: Context, siteId: number, unitId: number, demo: DemoSensor) {
  const [point] = await context.db
    .insert(samplePoints)
    .values({ siteId, unitId, name: demo.point })
    .returning();
  const [known] = await context.db
    .select()
    .from(methods)
    .where(and(eq(methods.siteId, siteId), eq(methods.name, demo.method.name)));
  const values = { siteId, ...demo.method, quantity: demo.sheet.quantity, unit: demo.sheet.unit };
  const [method] = known ? [known] : await context.db.insert(methods).values(values).returning();
  return { pointId: point!.id, methodId: method!.id };
}

async function inputTags(
  context: Context,
  siteId: number,
  unitId: number,
  demo: DemoSensor,
): Promise<number[]> {
  const made = await context.db
    .insert(tags)
    .values(
      demo.inputs.map(({ tag, description, unit }) => ({ siteId, unitId, name: tag, description, unit })),
    )
    .returning();
  return made.map((tag) => tag.id);
}

async function writeHistory(
  context: Context,
  siteId: number,
  tagId: number,
  at: readonly number[],
  values: readonly number[],
): Promise<void> {
  await context.db.transaction(async (tx) => {
    await tx.execute(sql`
      insert into readings (site_id, tag_id, at, value)
      select ${siteId}, ${tagId}, to_timestamp(ms / 1000), value
      from unnest(${sql.param([...at])}::float8[], ${sql.param([...values])}::float8[]) h (ms, value)`);
    await refreshSpan(tx, siteId, tagId);
    await readingsChanged(tx, { siteId, tagIds: [tagId], from: new Date(at[0]!), to: new Date(at.at(-1)!) });
  });
}

async function writeSamples(
  context: Context,
  siteId: number,
  pointId: number,
  methodId: number,
  enteredBy: number,
  demo: DemoSensor,
  history: DemoHistory,
  seed: number,
): Promise<void> {
  const random = randomFrom(seed + 1000);
  const last = history.at.length - 1 - demo.silentDays * 24;
  const rows = [];
  for (let k = last - 3; k >= 0; k -= demo.hoursBetweenSamples) {
    const value = (history.truth[k]! + demo.labSd * random.normal()).toFixed(demo.sheet.decimals + 1);
    const takenAt = new Date(history.at[k]!);
    rows.push({
      siteId,
      samplePointId: pointId,
      methodId,
      sampleNumber: `${demo.point.replaceAll(' ', '')}-${takenAt.toISOString().slice(2, 13).replace(/[-T]/g, '')}`,
      takenAt,
      reportedAt: new Date(takenAt.getTime() + reportedAfterMs),
      value: Number(value),
      unit: demo.sheet.unit,
      asWritten: value,
      enteredBy,
      enteredAt: new Date(takenAt.getTime() + reportedAfterMs),
    });
  }
  await context.db.insert(samples).values(rows);
}

async function putInService(
  context: Context,
  past: Context,
  actors: DemoActors,
  softSensorId: number,
  demo: DemoSensor,
  tagIds: readonly number[],
): Promise<void> {
  const [sensor] = await context.db.select().from(softSensors).where(eq(softSensors.id, softSensorId));
  const waiting = demo.life === 'waiting-for-approval';
  const then = waiting ? context : past;
  const later: Context = {
    ...then,
    clock: () => new Date(then.clock().getTime() + (waiting ? -3_600_000 : 3_600_000)),
  };
  const draft = await saveDraft(later, actors.engineer, sensor as Permitted<typeof sensor & object>, {
    model: modelOf(demo, tagIds),
    version: null,
  });
  const proposed = await proposeRevision(
    later,
    actors.engineer,
    sensor as Permitted<typeof sensor & object>,
    {
      version: draft.version,
      reason: 'First model, checked against a month of samples',
      changeReference: '',
    },
  );
  if (waiting) return;
  const [revision] = await context.db.select().from(revisions).where(eq(revisions.id, proposed.id));
  const approval: Context = { ...later, clock: () => new Date(later.clock().getTime() + 3_600_000) };
  await decideRevision(approval, actors.manager, revision as Permitted<typeof revision & object>, {
    decision: 'approved',
    reason: '',
  });
}

function modelOf(demo: DemoSensor, tagIds: readonly number[]): Model {
  const residualSd = Math.hypot(demo.modelSd, demo.labSd);
  if (demo.form === 'external') return { form: 'external', holdLimitMs: 2 * stepMs, residualSd };
  return {
    form: 'regression',
    stepMs,
    holdLimitMs: 2 * stepMs,
    intercept: demo.intercept,
    terms: demo.inputs.map(({ coefficient }, j) => ({ tagId: tagIds[j]!, coefficient })),
    residualSd,
  };
}
