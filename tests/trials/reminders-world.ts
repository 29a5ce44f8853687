import type { Db } from '../../server/db/client.ts';
import {
  areas,
  lifeStates,
  ownerships,
  persons,
  revisions,
  siteRoles,
  sites,
  softSensors,
  tags,
  units,
} from '../../server/db/schema/index.ts';
import { type Every, type Person, type Sensor, type World, later, localDate } from './reminders-model.ts';
import type { SeededRandom } from './seeded-random.ts';

/** North and south of the equator, one with a half-hour offset. */
const zones = ['Europe/Copenhagen', 'Asia/Kolkata', 'America/Santiago'];
const dayMs = 86_400_000;

export interface Size {
  sensors: number;
  people: number;
}

export const pick = <T>(random: SeededRandom, from: readonly T[]): T =>
  from[Math.floor(random.uniform() * from.length)]!;

/** Sites, people and soft sensors in the database, and the same as the model sees them. */
export async function makeWorld(db: Db, random: SeededRandom, size: Size, startMs: number): Promise<World> {
  const places = [];
  for (const [i, zone] of zones.entries()) places.push(await addPlace(db, `Works ${i + 1}`, zone));
  const people = await addPeople(db, random, size.people, places);
  const made: World = {
    people,
    sensors: [],
    stopped: new Map(places.flatMap(({ unitIds }) => unitIds.map((id) => [id, null]))),
    started: new Map(),
    offers: [],
    expected: new Map(),
    known: new Set(),
  };
  for (let n = 0; n < size.sensors; n++) {
    made.sensors.push(await addSensor(db, random, n, pick(random, places), made, startMs));
  }
  return made;
}

type Place = Awaited<ReturnType<typeof addPlace>>;

async function addPlace(db: Db, name: string, zone: string) {
  const [site] = await db.insert(sites).values({ name, zone }).returning();
  const siteId = site!.id;
  const [area] = await db.insert(areas).values({ siteId, name: 'Hot end' }).returning();
  const named = ['Kiln', 'Furnace', 'Column'].map((unit) => ({ siteId, areaId: area!.id, name: unit }));
  const made = await db.insert(units).values(named).returning();
  return { siteId, zone, unitIds: made.map(({ id }) => id) };
}

/** Every tenth is a manager, the rest are engineers; some hold the role at a second site. */
async function addPeople(db: Db, random: SeededRandom, count: number, places: Place[]) {
  const people = new Map<number, Person>();
  for (let n = 0; n < count; n++) {
    const email = `person${n}@trial.example`;
    const [row] = await db
      .insert(persons)
      .values({ name: `Person ${n}`, email })
      .returning();
    const at = [places[n % places.length]!, ...(random.uniform() < 0.2 ? [pick(random, places)] : [])];
    const siteIds = new Set(at.map(({ siteId }) => siteId));
    const manager = n < places.length || n % 10 === 0;
    const role = manager ? ('manager' as const) : ('engineer' as const);
    const roles = [...siteIds].map((siteId) => ({ personId: row!.id, siteId, role }));
    await db.insert(siteRoles).values(roles);
    const home = places.find(({ siteId }) => siteId === Math.min(...siteIds))!;
    people.set(row!.id, {
      id: row!.id,
      email,
      homeZone: home.zone,
      active: true,
      engineerAt: manager ? new Set() : siteIds,
      managerAt: manager ? siteIds : new Set(),
    });
  }
  return people;
}

async function addSensor(
  db: Db,
  random: SeededRandom,
  n: number,
  place: Place,
  world: World,
  startMs: number,
): Promise<Sensor> {
  const { siteId, zone } = place;
  const engineers = [...world.people.values()].filter(({ engineerAt }) => engineerAt.has(siteId));
  const [owner, deputy] = [...engineers].sort(() => random.uniform() - 0.5);
  const importanceClass = random.uniform() < 0.5 ? ('A' as const) : ('C' as const);
  const tagName = `TY-${1000 + n}`;
  const unitId = pick(random, place.unitIds);
  const sinceMs = startMs - random.uniform() * 120 * dayMs;
  const inServiceOn = localDate(sinceMs, zone);
  const intervals = {
    recalibration: recalibrationEvery(random, inServiceOn),
    review: reviewEvery(inServiceOn),
  };
  const [tag] = await db
    .insert(tags)
    .values({ siteId, unitId, name: tagName, unit: '°C', kind: 'estimate' })
    .returning();
  const asInterval = ({ every, unit, anchorOn }: Every) => {
    const counted = anchorOn === null ? ('last-done' as const) : ('anchored' as const);
    return { every, unit, counted, anchorOn };
  };
  const [sensor] = await db
    .insert(softSensors)
    .values({
      siteId,
      unitId,
      tagName,
      name: 'Interior temperature',
      quantity: 'temperature',
      unit: '°C',
      decimals: 0,
      importanceClass,
      estimateTagId: tag!.id,
      promisedReferenceMs: dayMs,
      allowedErrorAbsolute: 10,
      historyEveryMs: dayMs,
      recalibrationInterval: asInterval(intervals.recalibration),
      reviewInterval: asInterval(intervals.review),
      createdAt: new Date(sinceMs),
      createdBy: owner!.id,
    })
    .returning();
  const deputyId = importanceClass === 'A' || random.uniform() < 0.5 ? deputy!.id : null;
  const key = { siteId, softSensorId: sensor!.id };
  const from = { effectiveFrom: new Date(sinceMs), recordedBy: owner!.id };
  await db.insert(ownerships).values({ ...key, ...from, ownerId: owner!.id, deputyId });
  await db.insert(lifeStates).values({ ...key, ...from, state: 'in-service' });
  const model = { form: 'external' as const, holdLimitMs: 600_000, residualSd: null };
  const proposed = { proposedAt: new Date(sinceMs), proposedBy: owner!.id, reason: 'First model' };
  const manager = [...world.people.values()].find(({ managerAt }) => managerAt.has(siteId))!;
  const decided = { decision: 'approved' as const, decidedAt: new Date(sinceMs), decidedBy: manager.id };
  await db
    .insert(revisions)
    .values({ ...key, number: 1, model, ...proposed, ...decided, effectiveFrom: new Date(sinceMs) });
  return {
    id: sensor!.id,
    siteId,
    unitId,
    zone,
    tagName,
    importanceClass,
    intervals,
    inServiceOn,
    ownerId: owner!.id,
    deputyId,
    duties: new Map(),
    opened: 0,
  };
}

/** Months or days, counted from last done or from an anchor at the end of a month. */
function recalibrationEvery(random: SeededRandom, inServiceOn: string): Every {
  const months = random.uniform() < 0.6;
  const every = months ? 1 + Math.floor(random.uniform() * 6) : 20 + Math.floor(random.uniform() * 100);
  const anchored = random.uniform() < 0.4;
  const anchorOn = months ? '2025-08-31' : later(inServiceOn, -Math.floor(random.uniform() * 60));
  return { every, unit: months ? 'months' : 'days', anchorOn: anchored ? anchorOn : null };
}

const reviewEvery = (inServiceOn: string): Every => ({
  every: 1 + (Number(inServiceOn.slice(-2)) % 12),
  unit: 'months',
  anchorOn: null,
});
