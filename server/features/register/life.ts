import { and, eq } from 'drizzle-orm';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { Sheet } from '../../../shared/contracts/register.ts';
import { mayDecide } from '../../../shared/rules/permissions.ts';
import type { Context } from '../../context.ts';
import { lifeStates, softSensorStatus } from '../../db/schema/index.ts';
import { type Permitted, lockRow } from '../../http/rows.ts';
import { recountSite } from '../board/summary.ts';
import type { SensorRow } from '../estimates/repo.ts';
import { lifeNow } from '../judging/repo.ts';
import { note } from './note.ts';
import { currentOwnership } from './repo.ts';
import type { By } from './service.ts';
import { readSheet } from './sheet.ts';

/** Suspends a soft sensor at once; a reason may follow later. */
export async function suspend(
  context: Context,
  by: By,
  row: Permitted<SensorRow>,
  reason: string,
): Promise<Sheet> {
  return changeLife(context, by, row, 'suspended', reason, (state) =>
    state === 'in-service' ? null : 'Only a soft sensor in service can be suspended.',
  );
}

/** Puts a suspended soft sensor back in service. */
export async function putBack(context: Context, by: By, row: Permitted<SensorRow>): Promise<Sheet> {
  const ownership = await currentOwnership(context.db, row.siteId, row.id);
  const nobody = {
    siteId: row.siteId,
    approverId: ownership?.approverId ?? null,
    proposedBy: 0,
    editedBy: [],
  };
  if (mayDecide(by.actor, nobody)) {
    throw new AppError(
      'forbidden',
      'Only the named approver or a manager of the site puts a soft sensor back in service.',
    );
  }
  return changeLife(context, by, row, 'in-service', '', (state) =>
    state === 'suspended' ? null : 'This soft sensor is not suspended.',
  );
}

/** Says afterwards why it was suspended; a reason once given stays. */
export async function sayWhySuspended(
  context: Context,
  by: By,
  row: Permitted<SensorRow>,
  reason: string,
): Promise<Sheet> {
  return context.db.transaction(async (tx) => {
    const sensor = await lockRow(tx, 'softSensor', row);
    const life = await lifeNow(tx, row.siteId, row.id);
    if (life?.state !== 'suspended') throw new AppError('conflict', 'This soft sensor is not suspended.');
    if (life.reason !== '')
      throw new AppError('conflict', 'A reason was given already, and stays as it was given.');
    await tx.update(lifeStates).set({ reason }).where(eq(lifeStates.id, life.id));
    await note(
      context,
      tx,
      by,
      sensor,
      'change',
      'softSensor',
      { lifeReason: '' },
      { lifeReason: reason },
      reason,
    );
    return readSheet(tx, sensor, context.clock());
  });
}

async function changeLife(
  context: Context,
  by: By,
  row: Permitted<SensorRow>,
  state: 'suspended' | 'in-service',
  reason: string,
  refusal: (state: string | undefined) => string | null,
): Promise<Sheet> {
  return context.db.transaction(async (tx) => {
    const sensor = await lockRow(tx, 'softSensor', row);
    const before = await lifeNow(tx, row.siteId, row.id);
    const refused = refusal(before?.state);
    if (refused) throw new AppError('conflict', refused);
    const key = { siteId: row.siteId, softSensorId: row.id, recordedBy: by.actor.id };
    await tx.insert(lifeStates).values({ ...key, state, reason, effectiveFrom: context.clock() });
    await tx
      .update(softSensorStatus)
      .set({ inService: state === 'in-service' })
      .where(and(eq(softSensorStatus.siteId, row.siteId), eq(softSensorStatus.softSensorId, row.id)));
    await recountSite(tx, row.siteId, context.clock());
    await note(
      context,
      tx,
      by,
      sensor,
      'change',
      'softSensor',
      { life: before?.state },
      { life: state },
      reason,
    );
    return readSheet(tx, sensor, context.clock());
  });
}
