import type { Context } from '../../server/context.ts';
import { withClient } from '../../server/db/client.ts';
import { ensurePartitions } from '../../server/db/partitions.ts';
import { Batch } from '../../server/features/history/batch.ts';
import { batchStored } from '../../server/features/history/changed.ts';
import { storeBatch } from '../../server/features/history/store.ts';
import type { UnitHistory } from '../simulation/simulate.ts';

const readingsAtOnce = 200_000;

/**
 * Adds the readings of a unit to the tags that there are, as an import does: roll-ups and estimates follow. A tag that
 * was renamed or removed meanwhile is left out.
 */
export async function addReadings(
  context: Context,
  siteId: number,
  tagIds: ReadonlyMap<string, number>,
  readings: UnitHistory['readings'],
): Promise<void> {
  const batch = new Batch();
  for (const [tag, { at, value }] of readings) {
    const tagId = tagIds.get(tag);
    if (tagId === undefined || at.length === 0) continue;
    if (batch.size + at.length > readingsAtOnce) await store(context, siteId, batch);
    for (let i = 0; i < at.length; i++) batch.add(tagId, at[i]!, value[i]!, 0);
  }
  await store(context, siteId, batch);
}

async function store(context: Context, siteId: number, batch: Batch): Promise<void> {
  if (batch.size === 0) return;
  const firstMs = Math.min(...batch.parts.map((part) => part.firstMs));
  const lastMs = Math.max(...batch.parts.map((part) => part.lastMs));
  await ensurePartitions(context.db, firstMs, lastMs);
  await withClient(context.pool, (db, client) =>
    db.transaction(async (tx) => {
      const { changed } = await storeBatch(tx, client, batch, { siteId, replaceExisting: false });
      await batchStored(tx, siteId, changed);
    }),
  );
  batch.clear();
}
