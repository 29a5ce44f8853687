import {
  answerHandover,
  proposeHandover,
  withdrawHandover,
} from '../../server/features/ownership/service.ts';
import { changePerson, everybody } from '../../server/features/people/service.ts';
import { type Offer, type Sensor, engineerOf, localDate } from './reminders-model.ts';
import { type Scene, by, engineers, manager, open, origin, permitted } from './reminders-scene.ts';
import { pick } from './reminders-world.ts';

export async function offerTo(scene: Scene, sensor: Sensor): Promise<void> {
  const { random, world, tick } = scene;
  const toId = pick(random, engineers(scene, sensor.siteId));
  if (toId === sensor.ownerId) return;
  const who = await by(scene, manager(scene, sensor.siteId));
  const row = await permitted(scene, 'softSensor', sensor.id);
  const made = await proposeHandover(scene.context, who, row, { part: 'owner', toId, reason: 'Moves on' });
  const answerAt = tick + 1 + Math.floor(random.uniform() * 30);
  world.offers.push({ key: `handover ${made.id}`, sensor, id: made.id, toId, answerAt });
}

export async function answerOffers(scene: Scene): Promise<void> {
  const { context, random, world, tick } = scene;
  for (const offer of world.offers.filter(({ answerAt }) => answerAt <= tick)) {
    const row = await permitted(scene, 'handover', offer.id);
    const { siteId } = offer.sensor;
    if (engineerOf(world, siteId, offer.toId) === null) {
      await withdrawHandover(context, await by(scene, manager(scene, siteId)), row);
    } else {
      const answer = random.uniform() < 0.7 ? ('accepted' as const) : ('declined' as const);
      const who = await by(scene, offer.toId);
      await answerHandover(context, who, row, { answer, reason: 'As agreed' });
      if (answer === 'accepted') takeOwner(scene, offer.sensor, offer.toId);
    }
    world.offers = world.offers.filter((one: Offer) => one !== offer);
  }
}

function takeOwner(scene: Scene, sensor: Sensor, personId: number): void {
  sensor.ownerId = personId;
  if (sensor.deputyId === personId) sensor.deputyId = null;
  lookForGap(scene, sensor);
}

function lookForGap(scene: Scene, sensor: Sensor): void {
  const valid = (id: number | null) => engineerOf(scene.world, sensor.siteId, id) !== null;
  const gap = !valid(sensor.ownerId) || (sensor.importanceClass === 'A' && !valid(sensor.deputyId));
  const stands = sensor.duties.has('ownership-gap');
  if (gap && !stands) open(scene, sensor, 'ownership-gap', localDate(scene.nowMs, sensor.zone));
  if (!gap && stands) sensor.duties.delete('ownership-gap');
}

/** An engineer of the site names themself, which takes back an offer of the same part. */
export async function fillGap(scene: Scene, sensor: Sensor): Promise<void> {
  const { context, random, world } = scene;
  const part =
    engineerOf(world, sensor.siteId, sensor.ownerId) === null ? ('owner' as const) : ('deputy' as const);
  const toId = pick(
    random,
    engineers(scene, sensor.siteId).filter((id) => id !== sensor.ownerId && id !== sensor.deputyId),
  );
  const row = await permitted(scene, 'softSensor', sensor.id);
  await proposeHandover(context, await by(scene, toId), row, { part, toId, reason: 'Somebody must' });
  if (part === 'owner') {
    world.offers = world.offers.filter((offer) => offer.sensor !== sensor);
    takeOwner(scene, sensor, toId);
  } else {
    sensor.deputyId = toId;
    lookForGap(scene, sensor);
  }
}

export async function deactivateSomebody(scene: Scene): Promise<void> {
  const { context, random, world, administratorId } = scene;
  const leaver = pick(
    random,
    [...world.people.values()].filter((one) => one.active && one.engineerAt.size > 0),
  );
  if ([...leaver.engineerAt].some((siteId) => engineers(scene, siteId).length <= 4)) return;
  const person = (await everybody(context)).find(({ id }) => id === leaver.id)!;
  const { actor } = await by(scene, administratorId);
  await changePerson(context, actor, leaver.id, { ...person, deactivated: true }, origin);
  leaver.active = false;
  for (const sensor of world.sensors) lookForGap(scene, sensor);
}
