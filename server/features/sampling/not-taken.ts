import type { NotTaken } from '../../../shared/contracts/sampling.ts';
import type { Context } from '../../context.ts';
import { samplesNotTaken } from '../../db/schema/index.ts';
import { invalidInput } from '../../http/parse.ts';
import type { SiteRow } from '../../http/rows.ts';
import { recordAudit } from '../audit/service.ts';
import type { By } from '../register/service.ts';
import { findPointInUse } from '../samples/points-repo.ts';

/** Keeps why an asked-for sample was not taken; a key that was sent before changes nothing. */
export async function recordNotTaken(
  context: Context,
  by: By,
  site: SiteRow,
  body: NotTaken,
): Promise<{ again: boolean }> {
  return context.db.transaction(async (tx) => {
    const point = await findPointInUse(tx, site.id, body.samplePointId);
    if (!point) {
      const message = 'This sample point is not one in use at the site. Choose another.';
      throw invalidInput([{ path: 'samplePointId', message }]);
    }
    const now = context.clock();
    const { askedFor, ...said } = body;
    const [made] = await tx
      .insert(samplesNotTaken)
      .values({
        ...said,
        siteId: site.id,
        askedFor: new Date(askedFor),
        recordedBy: by.actor.id,
        recordedAt: now,
      })
      .onConflictDoNothing({ target: [samplesNotTaken.siteId, samplesNotTaken.entryKey] })
      .returning();
    if (!made) return { again: true };
    await recordAudit(tx, {
      at: now,
      siteId: site.id,
      ...by,
      action: 'add',
      entity: 'sample-not-taken',
      entityId: made.id,
      entityName: point.name,
      before: null,
      after: { askedFor, reason: made.reason },
      reason: made.note,
    });
    return { again: false };
  });
}
