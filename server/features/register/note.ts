import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { recordAudit } from '../audit/service.ts';
import type { SensorRow } from '../estimates/repo.ts';
import type { By } from './service.ts';

/** An audit row about a soft sensor, or about a part of it. */
export async function note(
  context: Context,
  tx: Tx,
  by: By,
  sensor: SensorRow,
  action: 'add' | 'change' | 'start' | 'propose' | 'decide',
  part: string,
  before: Record<string, unknown> | null,
  after: Record<string, unknown>,
  reason = '',
): Promise<void> {
  await recordAudit(tx, {
    at: context.clock(),
    siteId: sensor.siteId,
    ...by,
    action,
    entity: 'softSensor',
    entityId: sensor.id,
    entityName: part === 'softSensor' ? sensor.tagName : `${sensor.tagName}, ${part}`,
    before,
    after,
    reason,
  });
}
