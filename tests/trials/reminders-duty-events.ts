import { calibrations } from '../../server/db/schema/index.ts';
import { reassignDuty, waiveDuty } from '../../server/features/duties/attend.ts';
import { addReview } from '../../server/features/duties/reviews.ts';
import { recalibrationDone } from '../../server/features/duties/service.ts';
import { findSensor } from '../../server/features/estimates/repo.ts';
import { exampleEvidence } from '../../shared/contracts/calibration-evidence.ts';
import { type Duty, type Sensor, dueAfter, localDate } from './reminders-model.ts';
import { type Scene, by, engineers, manager, open, permitted, rowOf } from './reminders-scene.ts';
import { pick } from './reminders-world.ts';

const inOrder = { purpose: true, consumers: true, inputs: true, validity: true, owner: true };

export async function attend(
  scene: Scene,
  sensor: Sensor,
  duty: Duty,
  kind: 'recalibration' | 'review',
): Promise<void> {
  const { context, nowMs } = scene;
  const who = await by(scene, pick(scene.random, engineers(scene, sensor.siteId)));
  if (kind === 'review') {
    const row = await permitted(scene, 'softSensor', sensor.id);
    await addReview(context, who, row, { conclusion: 'keep', answers: inOrder, note: '' });
  } else await recalibrate(scene, sensor, who);
  const today = localDate(nowMs, sensor.zone);
  open(scene, sensor, kind, dueAfter(sensor.intervals[kind], today, duty.dueOn, false));
}

async function recalibrate(scene: Scene, sensor: Sensor, who: Awaited<ReturnType<typeof by>>): Promise<void> {
  const { context, nowMs } = scene;
  const at = new Date(nowMs);
  const row = (await findSensor(context.db, sensor.siteId, sensor.id))!;
  await context.db.transaction(async (tx) => {
    const revision = await context.pool.query<{ id: number }>(
      'select id from revisions where soft_sensor_id = $1',
      [sensor.id],
    );
    const same = { slope: 1, offset: 0, slopeBefore: 1, offsetBefore: 0 };
    const decided = {
      decision: 'confirmed' as const,
      decidedAt: at,
      decidedBy: who.actor.id,
      effectiveFrom: at,
    };
    const [made] = await tx
      .insert(calibrations)
      .values({
        siteId: sensor.siteId,
        softSensorId: sensor.id,
        revisionId: revision.rows[0]!.id,
        number: sensor.opened,
        kind: 'as-found',
        ...same,
        evidence: exampleEvidence,
        pairIds: [],
        reason: 'Fit',
        proposedAt: at,
        proposedBy: who.actor.id,
        toBeEntered: false,
        ...decided,
      })
      .returning();
    await recalibrationDone(context, tx, who, row, made!.id);
  });
}

export async function waive(scene: Scene, sensor: Sensor, duty: Duty, dueOn: string): Promise<void> {
  const { id, version } = await rowOf(scene, sensor, duty.kind);
  const who = await by(scene, manager(scene, sensor.siteId));
  await waiveDuty(scene.context, who, await permitted(scene, 'duty', id), {
    reason: 'Rebuilt',
    dueOn,
    version,
  });
  open(scene, sensor, duty.kind, dueOn, duty.assigneeId);
}

export async function giveAway(scene: Scene, sensor: Sensor, duty: Duty): Promise<void> {
  const { id, version } = await rowOf(scene, sensor, duty.kind);
  const who = await by(scene, manager(scene, sensor.siteId));
  const personId = pick(scene.random, engineers(scene, sensor.siteId));
  await reassignDuty(scene.context, who, await permitted(scene, 'duty', id), {
    personId,
    reason: '',
    version,
  });
  duty.assigneeId = personId === sensor.ownerId ? null : personId;
}
