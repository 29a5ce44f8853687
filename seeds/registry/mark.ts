import { desc, eq } from 'drizzle-orm';
import type { Context } from '../../server/context.ts';
import { auditEntries } from '../../server/db/schema/index.ts';
import { recordAudit } from '../../server/features/audit/service.ts';

/** Raised when the simulation changes, so that no new numbers are put behind old ones. */
const simulationVersion = 1;
const entity = 'demo company';

/** What must be known to go on with a demo that was put in: written last, so that a half one is never gone on with. */
export interface DemoMark {
  version: number;
  seed: number;
  startMs: number;
  siteIds: Record<string, number>;
}

export async function leaveMark(context: Context, mark: Omit<DemoMark, 'version'>): Promise<void> {
  await context.db.transaction((tx) =>
    recordAudit(tx, {
      at: context.clock(),
      siteId: null,
      actor: null,
      origin: { requestId: 'demo', fromAddress: '' },
      action: 'add',
      entity,
      entityId: '1',
      entityName: 'Demo company',
      after: { ...mark, version: simulationVersion },
    }),
  );
}

/** The mark of a demo that can be gone on with; null where there is none, or one of another simulation. */
export async function findMark(context: Context): Promise<DemoMark | null> {
  const [entry] = await context.db
    .select({ after: auditEntries.after })
    .from(auditEntries)
    .where(eq(auditEntries.entity, entity))
    .orderBy(desc(auditEntries.id))
    .limit(1);
  const mark = entry?.after as DemoMark | null | undefined;
  return mark?.version === simulationVersion ? mark : null;
}
