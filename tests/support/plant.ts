import { samplePoints, samples, sites, readings } from '../../server/db/schema/index.ts';
import { ensurePartitions } from '../../server/db/partitions.ts';
import type { SheetFields } from '../../shared/contracts/register.ts';
import type { Agent, TestServer } from './server.ts';
import { sheetFields } from './sheet-fields.ts';

export const hour = 3_600_000;
export const plantStart = Date.UTC(2026, 0, 1);

export const inputA = (k: number) => 10 + Math.sin(k / 7) + 0.5 * Math.cos(k / 3);
export const inputB = (k: number) => 4 + Math.cos(k / 11);
export const labError = (i: number) => 0.1 * Math.sin(i * 12.9898);
/** The plant's truth: 5 + 2 a − 3 b. */
export const truth = (k: number) => 5 + 2 * inputA(k) - 3 * inputB(k);

export const at = (k: number) => new Date(plantStart + k * hour);

/** A site with an engineer, a manager, a unit, two tags and a sample point. */
export async function makePlant(server: TestServer) {
  const { db } = server.context;
  const [site] = await db
    .insert(sites)
    .values({ name: `Site ${Math.random()}`, zone: 'Europe/Copenhagen' })
    .returning();
  const siteId = site!.id;
  const engineer = await server.signedIn({ roles: [{ siteId, role: 'engineer' }] });
  const manager = await server.signedIn({ roles: [{ siteId, role: 'manager' }] });
  const area = await post(engineer, `/sites/${siteId}/areas`, { name: 'Hot end' });
  const unit = await post(engineer, `/sites/${siteId}/units`, { name: 'Kiln', areaId: area.id });
  const tags = await post(engineer, `/sites/${siteId}/tags`, {
    tags: ['A', 'B'].map((name) => ({ name, unit: 't/h', unitId: unit.id, rangeLow: null, rangeHigh: null })),
  });
  const [point] = await db.insert(samplePoints).values({ siteId, name: 'P1', unitId: unit.id }).returning();
  const tagIds = tags.rows.map((row: { id: number }) => row.id) as number[];
  return { server, siteId, engineer, manager, unitId: unit.id as number, pointId: point!.id, tagIds };
}
export type Plant = Awaited<ReturnType<typeof makePlant>>;

export async function post(agent: Agent, path: string, body: object) {
  const answer = await agent.post(`/api/v1${path}`).send(body);
  if (answer.status !== 200)
    throw new Error(`${path} answered ${answer.status}: ${JSON.stringify(answer.body).slice(0, 400)}`);
  return answer.body;
}

export async function get(agent: Agent, path: string, query: object = {}) {
  const answer = await agent.get(`/api/v1${path}`).query(query);
  if (answer.status !== 200)
    throw new Error(`${path} answered ${answer.status}: ${JSON.stringify(answer.body).slice(0, 400)}`);
  return answer.body;
}

/** Hourly readings of both inputs for the hours [from, to). */
export async function writeInputs(plant: Plant, from: number, to: number): Promise<void> {
  const { db } = plant.server.context;
  await ensurePartitions(db, at(from).getTime(), at(to).getTime());
  const hours = Array.from({ length: to - from }, (_, i) => from + i);
  const rows = hours.flatMap((k) => [
    { siteId: plant.siteId, tagId: plant.tagIds[0]!, at: at(k), value: inputA(k) },
    { siteId: plant.siteId, tagId: plant.tagIds[1]!, at: at(k), value: inputB(k) },
  ]);
  await db.insert(readings).values(rows);
  for (const tagId of plant.tagIds) await plant.server.refreshSpan(plant.siteId, tagId);
}

/** One laboratory sample at each of these hours, reported an hour later; returns the hours. */
export async function writeSamples(plant: Plant, hours: readonly number[], value = truth): Promise<void> {
  await plant.server.context.db.insert(samples).values(
    hours.map((k, i) => ({
      siteId: plant.siteId,
      samplePointId: plant.pointId,
      sampleNumber: `S${k}`,
      takenAt: at(k),
      reportedAt: at(k + 1),
      value: value(k) + labError(i),
      unit: '%',
      asWritten: '',
      enteredBy: plant.engineer.personId,
      enteredAt: at(0),
    })),
  );
}

export const modelOf = (plant: Plant, intercept = 5, coefficients = [2, -3]) => ({
  form: 'regression' as const,
  stepMs: hour,
  holdLimitMs: hour,
  intercept,
  terms: plant.tagIds.map((tagId, j) => ({ tagId, coefficient: coefficients[j]! })),
  residualSd: 0.1,
});

/** Registers a soft sensor, proposes a model and has the manager approve it. */
export async function putInService(plant: Plant, model: object, own: Partial<SheetFields> = {}) {
  const fields = sheetFields({ unitId: plant.unitId, samplePointId: plant.pointId, ...own });
  const sheet = await post(plant.engineer, `/sites/${plant.siteId}/soft-sensors`, fields);
  await approveModel(plant, sheet.id, model, null);
  return sheet as { id: number; estimateTagId: number };
}

export async function approveModel(
  plant: Plant,
  softSensorId: number,
  model: object,
  version: number | null,
) {
  const saved = await plant.engineer
    .put(`/api/v1/soft-sensors/${softSensorId}/draft`)
    .send({ model, version });
  if (saved.status !== 200) throw new Error(JSON.stringify(saved.body));
  const revision = await post(plant.engineer, `/soft-sensors/${softSensorId}/revisions`, {
    version: saved.body.version,
    reason: 'A model to test',
    changeReference: '',
  });
  const { now } = plant.server;
  if (now.value) now.value = new Date(now.value.getTime() + 60_000);
  await post(plant.manager, `/revisions/${revision.id}/decision`, { decision: 'approved', reason: '' });
}
