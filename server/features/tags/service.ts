import { eq } from 'drizzle-orm';
import type { z } from 'zod';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { Series, Tag, tagFields } from '../../../shared/contracts/tags.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { tags } from '../../db/schema/index.ts';
import type { Actor, Origin } from '../../http/request.ts';
import { type Permitted, lockRow } from '../../http/rows.ts';
import { stale } from '../../http/stale.ts';
import { toWire } from '../../http/wire.ts';
import { lastSaveOf, recordAudit } from '../audit/service.ts';
import { lockHistory, readingsChanged } from '../history/changed.ts';
import { getUnit, type SiteRow } from '../sites/repo.ts';
import { archivedAt } from '../sites/service.ts';
import {
  type TagRow,
  countReadings,
  listHours,
  listReadings,
  listTags,
  removeReadings,
  tagsByName,
} from './repo.ts';
import { refreshSpan } from './spans.ts';

type TagBody = z.output<typeof tagFields>;
interface By {
  actor: Actor;
  origin: Origin;
}

const mostPoints = 3000;
const bad = 2;

export async function addTags(
  context: Context,
  by: By,
  site: Permitted<SiteRow>,
  bodies: TagBody[],
): Promise<Tag[]> {
  return context.db.transaction(async (tx) => {
    const known = await tagsByName(tx, site.id);
    const fields = bodies.flatMap((body, index) => {
      const twice = bodies.findIndex((other) => other.name.toLowerCase() === body.name.toLowerCase()) < index;
      if (!known.has(body.name.toLowerCase()) && !twice) return [];
      return [{ path: `tags.${index}.name`, message: `There is a tag ${body.name} at this site already.` }];
    });
    if (fields.length > 0) throw new AppError('invalid-input', fields[0]!.message, { fields });
    for (const [index, body] of bodies.entries())
      await refuseForeignUnit(tx, site.id, body.unitId, `tags.${index}.unitId`);
    const made = await tx
      .insert(tags)
      .values(bodies.map((body) => ({ siteId: site.id, ...body })))
      .returning({ id: tags.id });
    const ids = new Set(made.map((row) => row.id));
    const rows = (await listTags(tx, site.id)).filter((row) => ids.has(row.id));
    for (const row of rows) await note(context, tx, by, 'add', null, row);
    return toWire(rows);
  });
}

export async function changeTag(
  context: Context,
  by: By,
  row: Permitted<TagRow>,
  body: TagBody & { archived: boolean; version: number },
): Promise<Tag> {
  return context.db.transaction(async (tx) => {
    const locked = await lockRow(tx, 'tag', row);
    const [before] = await listTags(tx, row.siteId, { tagId: row.id });
    if (locked.version !== body.version)
      throw stale('tag', toWire(before!), await lastSaveOf(tx, 'tag', row.id));
    refuseEstimate(locked);
    await refuseForeignUnit(tx, row.siteId, body.unitId, 'unitId');
    const { archived, version, ...values } = body;
    await tx
      .update(tags)
      .set({ ...values, archivedAt: archivedAt(context, locked.archivedAt, archived), version: version + 1 })
      .where(eq(tags.id, row.id));
    const [after] = await listTags(tx, row.siteId, { tagId: row.id });
    await note(context, tx, by, 'change', before!, after!);
    return toWire(after!);
  });
}

/** Points for a chart: raw readings while there are few, else means with their range by the hour or coarser. */
export async function tagSeries(
  context: Context,
  tag: Permitted<TagRow>,
  from: Date,
  to: Date,
): Promise<Series> {
  const key = { siteId: tag.siteId, tagId: tag.id };
  if ((await countReadings(context.db, key, from, to, mostPoints)) <= mostPoints) {
    const rows = await listReadings(context.db, key, from, to);
    return {
      at: rows.map((row) => row.at.getTime()),
      value: rows.map((row) => (row.quality === bad ? null : row.value)),
      from: 'readings',
    };
  }
  const hours = await listHours(context.db, key, from, to, mostPoints);
  return {
    at: hours.map((row) => row.seconds * 1000),
    value: hours.map((row) => row.mean),
    low: hours.map((row) => row.low),
    high: hours.map((row) => row.high),
    from: 'hours',
  };
}

/** Removes readings between two instants; there is no other way to undo an import of history. */
export async function removeTagReadings(
  context: Context,
  by: By,
  tag: Permitted<TagRow>,
  body: { from: string; to: string; reason: string },
): Promise<number> {
  const from = new Date(body.from);
  const to = new Date(body.to);
  if (from > to) {
    const message = 'The end must not be before the beginning.';
    throw new AppError('invalid-input', message, { fields: [{ path: 'to', message }] });
  }
  return context.db.transaction(async (tx) => {
    await lockHistory(tx, tag.siteId);
    const gone = await removeReadings(tx, { siteId: tag.siteId, tagId: tag.id }, from, to);
    if (gone) {
      // Only the hours that lost something: the period as typed may span centuries.
      const change = { siteId: tag.siteId, tagIds: [tag.id], from: gone.first, to: gone.last };
      await readingsChanged(tx, change);
      await refreshSpan(tx, tag.siteId, tag.id);
    }
    const removed = gone?.removed ?? 0;
    await recordAudit(tx, {
      at: context.clock(),
      siteId: tag.siteId,
      ...by,
      action: 'remove',
      entity: 'readings',
      entityId: tag.id,
      entityName: tag.name,
      before: { from: body.from, to: body.to, readings: removed },
      reason: body.reason,
    });
    return removed;
  });
}

/** Name, unit and range of an estimate's tag stand on the data sheet, which keeps both alike. */
function refuseEstimate(tag: TagRow): void {
  if (tag.kind === 'measured') return;
  throw new AppError(
    'conflict',
    `${tag.name} holds the estimate of a soft sensor. Change it on its data sheet.`,
  );
}

async function refuseForeignUnit(tx: Tx, siteId: number, unitId: number | null, path: string): Promise<void> {
  if (unitId === null || (await getUnit(tx, siteId, unitId))) return;
  const message = 'This unit is not one of the site. Choose another.';
  throw new AppError('invalid-input', message, { fields: [{ path, message }] });
}

async function note(
  context: Context,
  tx: Tx,
  by: By,
  action: 'add' | 'change',
  before: Record<string, unknown> | null,
  after: { id: number; siteId: number; name: string } & Record<string, unknown>,
): Promise<void> {
  await recordAudit(tx, {
    at: context.clock(),
    siteId: after.siteId,
    ...by,
    action,
    entity: 'tag',
    entityId: after.id,
    entityName: after.name,
    before,
    after,
  });
}
