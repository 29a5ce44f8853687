import { and, eq } from 'drizzle-orm';
import type { OwnerPart } from '../../../shared/contracts/ownership.ts';
import type { Tx } from '../../db/client.ts';
import { ownerships, softSensorStatus } from '../../db/schema/index.ts';
import type { SensorRow } from '../estimates/repo.ts';
import { currentOwnership } from '../register/repo.ts';
import { syncSensor } from '../duties/service.ts';

export interface Holders {
  ownerId: number | null;
  deputyId: number | null;
  approverId: number | null;
}

/** Who looks after a soft sensor once somebody takes a part; a deputy who becomes owner leaves the part of deputy open. */
export function withPart(now: Holders, part: OwnerPart, personId: number): Holders {
  if (part === 'deputy') return { ...now, deputyId: personId };
  return { ...now, ownerId: personId, deputyId: now.deputyId === personId ? null : now.deputyId };
}

/** Records who looks after a soft sensor from now on, and opens or closes an ownership gap with it. */
export async function recordOwnership(
  tx: Tx,
  sensor: SensorRow,
  holders: Holders,
  by: { personId: number; at: Date; reason: string },
): Promise<void> {
  const before = await currentOwnership(tx, sensor.siteId, sensor.id);
  const { ownerId, deputyId, approverId } = holders;
  // Two changes within one millisecond still follow each other.
  const from = Math.max(by.at.getTime(), before ? before.effectiveFrom.getTime() + 1 : 0);
  await tx.insert(ownerships).values({
    siteId: sensor.siteId,
    softSensorId: sensor.id,
    ownerId,
    deputyId,
    approverId,
    effectiveFrom: new Date(from),
    recordedBy: by.personId,
    reason: by.reason,
  });
  await tx
    .update(softSensorStatus)
    .set({ ownerId })
    .where(and(eq(softSensorStatus.siteId, sensor.siteId), eq(softSensorStatus.softSensorId, sensor.id)));
  await syncSensor(tx, { siteId: sensor.siteId, softSensorId: sensor.id }, by.at);
}
