import { and, eq } from 'drizzle-orm';
import { AppError } from '../../../shared/contracts/errors.ts';
import { referencesToConfirm } from '../../../shared/rules/confirmation.ts';
import { evidenceRefusalSentence } from '../../../shared/rules/recalibration-sentences.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { softSensors } from '../../db/schema/index.ts';
import { recalibrationDone } from '../duties/service.ts';
import { type SensorRow, findSensor } from '../estimates/repo.ts';
import { queueJudging } from '../judging/changed.ts';
import { countReferences, findStatus, lifeNow } from '../judging/repo.ts';
import { note } from '../register/note.ts';
import type { By } from '../register/service.ts';
import { evidenceNow } from './evidence.ts';
import { findWaiting, lastRecalibratedAt } from './repo.ts';
import { addCalibration, told } from './service.ts';

interface Confirmed {
  confirmed: { softSensorId: number; calibrationId: number }[];
  refused: { softSensorId: number; tagName: string; why: string }[];
}

/**
 * Confirms soft sensors as found, one record each. Nothing changes, so no second person is asked; that is why only those
 * that are Fit with enough references since the last recalibration are let through.
 */
export async function confirmAsFound(
  context: Context,
  by: By,
  siteIds: number[] | 'every',
  softSensorIds: readonly number[],
): Promise<Confirmed> {
  const sensors: SensorRow[] = [];
  for (const id of new Set(softSensorIds)) sensors.push(await permittedSensor(context, siteIds, id));
  const outcome: Confirmed = { confirmed: [], refused: [] };
  for (const sensor of sensors) {
    const answer = await context.db.transaction((tx) => confirmOne(context, tx, by, sensor));
    const { id: softSensorId, tagName } = sensor;
    if (typeof answer === 'string') outcome.refused.push({ softSensorId, tagName, why: answer });
    else outcome.confirmed.push({ softSensorId, calibrationId: answer });
  }
  return outcome;
}

/** To somebody without the right at its site a soft sensor does not exist, and nothing at all is confirmed. */
async function permittedSensor(
  context: Context,
  siteIds: number[] | 'every',
  id: number,
): Promise<SensorRow> {
  const [found] = await context.db.select().from(softSensors).where(eq(softSensors.id, id));
  if (!found || (siteIds !== 'every' && !siteIds.includes(found.siteId)))
    throw new AppError('not-found', 'There is no such soft sensor, or you can’t recalibrate it.');
  return found;
}

async function confirmOne(context: Context, tx: Tx, by: By, given: SensorRow): Promise<number | string> {
  await tx
    .select({ id: softSensors.id })
    .from(softSensors)
    .where(and(eq(softSensors.siteId, given.siteId), eq(softSensors.id, given.id)))
    .for('update');
  const sensor = (await findSensor(tx, given.siteId, given.id))!;
  const why = await whyNot(tx, sensor, context.clock());
  if (why) return why;
  const now = context.clock();
  const { reply, pairIds, revision } = await evidenceNow(tx, sensor, now);
  if (!reply.ok) return evidenceRefusalSentence(reply);
  const { slope, offset } = reply.evidence.candidates[0]!;
  const made = await addCalibration(tx, sensor, {
    revisionId: revision!.id,
    kind: 'as-found',
    slope: slope!,
    offset: offset!,
    slopeBefore: slope!,
    offsetBefore: offset!,
    evidence: reply.evidence,
    pairIds,
    reason: 'Confirmed as found',
    proposedAt: now,
    proposedBy: by.actor.id,
    toBeEntered: false,
    decision: 'confirmed',
    decidedAt: now,
    decidedBy: by.actor.id,
    effectiveFrom: now,
  });
  await recalibrationDone(context, tx, by, sensor, made.id);
  await queueJudging(tx, sensor.siteId, sensor.id);
  await note(context, tx, by, sensor, 'decide', 'recalibration', null, {
    ...told(made),
    decision: 'confirmed',
  });
  return made.id;
}

async function whyNot(tx: Tx, sensor: SensorRow, now: Date): Promise<string | null> {
  if ((await lifeNow(tx, sensor.siteId, sensor.id))?.state !== 'in-service') return 'It is not in service.';
  const status = await findStatus(tx, sensor.siteId, sensor.id);
  if (!status || status.health !== 'fit') return 'It is not Fit, so its evidence must be looked at.';
  if (status.stoppedSince) return 'Its unit is stopped.';
  // Counted anew: the status may not have been judged yet since it was last confirmed.
  const last = await lastRecalibratedAt(tx, sensor.siteId, sensor.id, now);
  const references = await countReferences(tx, sensor, last, now);
  if (references < referencesToConfirm) {
    return `${references} references since the last recalibration; ${referencesToConfirm} are needed.`;
  }
  const waiting = await findWaiting(tx, sensor.siteId, sensor.id);
  return waiting ? `Recalibration ${waiting.number} waits for a decision.` : null;
}
