import type { Context } from '../../server/context.ts';
import { findActor } from '../../server/features/people/repo.ts';
import { findRow } from '../../server/http/rows.ts';
import { type Kind, type Sensor, type World, engineerOf, localDate } from './reminders-model.ts';
import { pick } from './reminders-world.ts';
import type { SeededRandom } from './seeded-random.ts';

/** What happens at one moment: the same change through the services, and to what the model knows. */
export interface Scene {
  context: Context;
  random: SeededRandom;
  world: World;
  administratorId: number;
  nowMs: number;
  tick: number;
  /** How many times as often as usual people waive, give away, hand over and leave. */
  bustle: number;
}

export const origin = { requestId: 'trial', fromAddress: '' };

export const by = async ({ context }: Scene, id: number) => ({
  actor: (await findActor(context.db, id))!,
  origin,
});

/** The front door would have let this person through. */
export const permitted = async (scene: Scene, target: 'softSensor' | 'duty' | 'handover', id: number) =>
  (await findRow(scene.context.db, target, { softSensorId: id, dutyId: id, handoverId: id }))!.row as never;

export const engineers = ({ world }: Scene, siteId: number): number[] =>
  [...world.people.keys()].filter((id) => engineerOf(world, siteId, id) !== null);

export const manager = ({ world, random }: Scene, siteId: number): number =>
  pick(
    random,
    [...world.people.values()].filter((one) => one.active && one.managerAt.has(siteId)),
  ).id;

/** Opens a duty in the model, to be attended to some day before or after it is due. */
export function open(
  scene: Scene,
  sensor: Sensor,
  kind: Kind,
  dueOn: string,
  assigneeId: number | null = null,
): void {
  const every = kind === 'ownership-gap' ? null : sensor.intervals[kind];
  const days = every ? every.every * (every.unit === 'days' ? 1 : 30) : 0;
  sensor.duties.set(kind, {
    key: `${sensor.id} ${kind} ${++sensor.opened}`,
    kind,
    dueOn,
    openedOn: localDate(scene.nowMs, sensor.zone),
    assigneeId,
    attendAt: Math.floor(scene.random.uniform() * 70) - Math.min(25, Math.floor(days / 2)),
  });
}

export const rowOf = async ({ context }: Scene, sensor: Sensor, kind: Kind) =>
  (
    await context.pool.query<{ id: number; version: number }>(
      `select id, version from duties where soft_sensor_id = $1 and kind = $2 and state = 'open'`,
      [sensor.id, kind],
    )
  ).rows[0]!;
