import type { Context } from '../../context.ts';
import { queueJudging } from './changed.ts';
import { sensorsInService } from './repo.ts';

/** Time alone changes health (a reference falls overdue, inputs stop): every soft sensor in service is judged again. */
export async function queueJudgingOfAll(context: Context): Promise<void> {
  for (const { siteId, softSensorId } of await sensorsInService(context.db)) {
    await queueJudging(context.db, siteId, softSensorId);
  }
}
