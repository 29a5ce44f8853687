import { events } from '../../server/db/schema/index.ts';
import { attend, giveAway, waive } from './reminders-duty-events.ts';
import { type Sensor, daysFrom, dueAfter, later, localDate } from './reminders-model.ts';
import { answerOffers, deactivateSomebody, fillGap, offerTo } from './reminders-owner-events.ts';
import { type Scene, open } from './reminders-scene.ts';
import { pick } from './reminders-world.ts';

/** The duties that a first look finds to be missing. */
export function openAll(scene: Scene): void {
  for (const sensor of scene.world.sensors) {
    for (const kind of ['recalibration', 'review'] as const) {
      open(scene, sensor, kind, dueAfter(sensor.intervals[kind], sensor.inServiceOn, null, true));
    }
  }
}

/** One round of changes: at most one a soft sensor, and now and then a unit or a person. */
export async function change(scene: Scene): Promise<void> {
  const { random, world } = scene;
  await answerOffers(scene);
  for (const sensor of world.sensors) await changeSensor(scene, sensor);
  if (random.uniform() < 0.1) await stopOrStart(scene, pick(random, [...world.stopped.keys()]));
  if (random.uniform() < 0.01 * scene.bustle) await deactivateSomebody(scene);
}

async function changeSensor(scene: Scene, sensor: Sensor): Promise<void> {
  const { random, world, nowMs } = scene;
  const today = localDate(nowMs, sensor.zone);
  for (const duty of sensor.duties.values()) {
    if (duty.kind === 'ownership-gap') {
      if (random.uniform() < 0.02 * scene.bustle) return fillGap(scene, sensor);
    } else if (daysFrom(duty.dueOn, today) >= duty.attendAt) return attend(scene, sensor, duty, duty.kind);
  }
  const chance = random.uniform() / scene.bustle;
  const duty = sensor.duties.get(pick(random, ['recalibration', 'review']))!;
  if (chance < 0.002) await waive(scene, sensor, duty, later(today, 5 + Math.floor(random.uniform() * 15)));
  else if (chance < 0.004) await giveAway(scene, sensor, duty);
  else if (chance < 0.006 && !world.offers.some((offer) => offer.sensor === sensor))
    await offerTo(scene, sensor);
}

export async function stopOrStart({ context, world, nowMs, ...scene }: Scene, unitId: number): Promise<void> {
  const stopped = world.stopped.get(unitId) !== null;
  const { siteId } = world.sensors.find((sensor) => sensor.unitId === unitId) ?? {};
  if (siteId === undefined) return;
  const at = new Date(nowMs);
  const recorded = { at, recordedAt: at, recordedBy: scene.administratorId };
  await context.db.insert(events).values({ siteId, unitId, kind: stopped ? 'start' : 'stop', ...recorded });
  world.stopped.set(unitId, stopped ? null : nowMs);
  if (stopped) world.started.set(unitId, nowMs);
}
