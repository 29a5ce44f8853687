import { and, eq, sql } from 'drizzle-orm';
import type { Queryable } from '../../db/client.ts';
import { softSensors } from '../../db/schema/index.ts';
import { addJob } from '../../jobs/queue.ts';

/** Samples at these points were added, superseded or withdrawn: each soft sensor judged there is judged again. */
export async function samplesChanged(
  tx: Queryable,
  change: { siteId: number; samplePointIds: number[] },
): Promise<void> {
  const sensors = await tx
    .select({ id: softSensors.id })
    .from(softSensors)
    .where(
      and(
        eq(softSensors.siteId, change.siteId),
        sql`${softSensors.samplePointId} = any(${sql.param(change.samplePointIds)}::int[])`,
      ),
    );
  for (const { id } of sensors) await queueJudging(tx, change.siteId, id);
}

export async function queueJudging(tx: Queryable, siteId: number, softSensorId: number): Promise<void> {
  await addJob(tx, 'judge', { siteId, softSensorId }, { key: `judge:${softSensorId}` });
}
