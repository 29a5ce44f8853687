import type { Context } from '../../context.ts';
import type { Actor, Origin } from '../../http/request.ts';
import { type Permitted, lockRow } from '../../http/rows.ts';
import { recordAudit } from '../audit/service.ts';
import { type RunRow, requestCancel } from './repo.ts';

/** Asks long work to stop; what has ended already is left as it is. */
export async function cancelRun(
  context: Context,
  by: { actor: Actor; origin: Origin },
  row: Permitted<RunRow>,
): Promise<RunRow> {
  return context.db.transaction(async (tx) => {
    const now = await lockRow(tx, 'run', row);
    if (now.finishedAt || now.cancelRequested) return now;
    await recordAudit(tx, {
      at: context.clock(),
      siteId: row.siteId,
      ...by,
      action: 'cancel',
      entity: 'run',
      entityId: row.id,
      entityName: row.kind,
    });
    return requestCancel(tx, row.siteId, row.id);
  });
}
