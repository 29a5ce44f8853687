import { and, eq, isNull } from 'drizzle-orm';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { Shift } from '../../../shared/contracts/sampling.ts';
import type { Area, Site, Unit } from '../../../shared/contracts/sites.ts';
import { plural } from '../../../shared/rules/format.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { areas, sites, units } from '../../db/schema/index.ts';
import type { Actor, Origin } from '../../http/request.ts';
import { type Permitted, lockRow } from '../../http/rows.ts';
import { stale } from '../../http/stale.ts';
import { toWire } from '../../http/wire.ts';
import { lastSaveOf, recordAudit } from '../audit/service.ts';
import { type AreaRow, type SiteRow, type UnitRow, holdArea, getSite, getUnit } from './repo.ts';

interface By {
  actor: Actor;
  origin: Origin;
}
interface Changed {
  archived: boolean;
  version: number;
}

/** When a row was archived: kept while it stays so, cleared when it is taken back. */
export const archivedAt = (context: Context, before: Date | null, archived: boolean): Date | null =>
  archived ? (before ?? context.clock()) : null;

interface SiteBody {
  name: string;
  zone: string;
  shifts?: Shift[] | undefined;
}

export async function addSite(context: Context, by: By, { shifts, ...body }: SiteBody): Promise<Site> {
  return context.db.transaction(async (tx) => {
    const [made] = await tx
      .insert(sites)
      .values({ ...body, ...(shifts && { shifts }) })
      .returning({ id: sites.id });
    const after = await getSite(tx, made!.id);
    await note(context, tx, by, 'site', after.id, 'add', null, after);
    return toWire(after);
  });
}

export async function changeSite(
  context: Context,
  by: By,
  row: Permitted<SiteRow>,
  body: SiteBody & Changed,
): Promise<Site> {
  return context.db.transaction(async (tx) => {
    const locked = await lockRow(tx, 'site', row);
    const before = await getSite(tx, row.id);
    if (locked.version !== body.version)
      throw stale('site', toWire(before), await lastSaveOf(tx, 'site', row.id));
    await tx
      .update(sites)
      .set({
        name: body.name,
        zone: body.zone,
        shifts: body.shifts ?? locked.shifts,
        archivedAt: archivedAt(context, locked.archivedAt, body.archived),
        version: locked.version + 1,
      })
      .where(eq(sites.id, row.id));
    const after = await getSite(tx, row.id);
    await note(context, tx, by, 'site', row.id, 'change', before, after);
    return toWire(after);
  });
}

export async function addArea(
  context: Context,
  by: By,
  site: Permitted<SiteRow>,
  body: { name: string },
): Promise<Area> {
  return context.db.transaction(async (tx) => {
    const [after] = await tx.insert(areas).values({ siteId: site.id, name: body.name }).returning();
    await note(context, tx, by, 'area', site.id, 'add', null, after!);
    return toWire(after!);
  });
}

export async function changeArea(
  context: Context,
  by: By,
  row: Permitted<AreaRow>,
  body: { name: string } & Changed,
): Promise<Area> {
  return context.db.transaction(async (tx) => {
    const before = await lockRow(tx, 'area', row);
    if (before.version !== body.version)
      throw stale('area', toWire({ ...before }), await lastSaveOf(tx, 'area', row.id));
    if (body.archived && !before.archivedAt) await refuseWithUnits(tx, before);
    const [after] = await tx
      .update(areas)
      .set({
        name: body.name,
        archivedAt: archivedAt(context, before.archivedAt, body.archived),
        version: before.version + 1,
      })
      .where(eq(areas.id, row.id))
      .returning();
    await note(context, tx, by, 'area', row.siteId, 'change', before, after!);
    return toWire(after!);
  });
}

export async function addUnit(
  context: Context,
  by: By,
  site: Permitted<SiteRow>,
  body: { name: string; areaId: number },
): Promise<Unit> {
  return context.db.transaction(async (tx) => {
    await refuseArea(tx, site.id, body.areaId);
    const [made] = await tx
      .insert(units)
      .values({ siteId: site.id, ...body })
      .returning({ id: units.id });
    const after = await getUnit(tx, site.id, made!.id);
    await note(context, tx, by, 'unit', site.id, 'add', null, after);
    return toWire(after);
  });
}

export async function changeUnit(
  context: Context,
  by: By,
  row: Permitted<UnitRow>,
  body: { name: string; areaId: number } & Changed,
): Promise<Unit> {
  return context.db.transaction(async (tx) => {
    const locked = await lockRow(tx, 'unit', row);
    const before = await getUnit(tx, row.siteId, row.id);
    if (locked.version !== body.version)
      throw stale('unit', toWire(before), await lastSaveOf(tx, 'unit', row.id));
    if (!body.archived || body.areaId !== locked.areaId) await refuseArea(tx, row.siteId, body.areaId);
    await tx
      .update(units)
      .set({
        name: body.name,
        areaId: body.areaId,
        archivedAt: archivedAt(context, locked.archivedAt, body.archived),
        version: locked.version + 1,
      })
      .where(eq(units.id, row.id));
    const after = await getUnit(tx, row.siteId, row.id);
    await note(context, tx, by, 'unit', row.siteId, 'change', before, after);
    return toWire(after);
  });
}

async function refuseArea(tx: Tx, siteId: number, areaId: number): Promise<void> {
  const area = await holdArea(tx, siteId, areaId);
  if (area && !area.archivedAt) return;
  const message = area
    ? `The area ${area.name} is archived. Take it back first, or choose another.`
    : 'This area is not one of the site. Choose another.';
  throw new AppError('invalid-input', message, { fields: [{ path: 'areaId', message }] });
}

async function refuseWithUnits(tx: Tx, area: AreaRow): Promise<void> {
  const open = and(eq(units.siteId, area.siteId), eq(units.areaId, area.id), isNull(units.archivedAt));
  const count = await tx.$count(units, open);
  if (count === 0) return;
  const message = `${area.name} still has ${plural(count, 'unit')}. Move or archive ${count === 1 ? 'it' : 'them'} first.`;
  throw new AppError('conflict', message, { fields: [{ path: 'archived', message }] });
}

async function note(
  context: Context,
  tx: Tx,
  by: By,
  entity: string,
  siteId: number,
  action: 'add' | 'change',
  before: Record<string, unknown> | null,
  after: Record<string, unknown> & { id: number; name: string },
): Promise<void> {
  await recordAudit(tx, {
    at: context.clock(),
    siteId,
    ...by,
    action,
    entity,
    entityId: after.id,
    entityName: after.name,
    before,
    after,
  });
}
