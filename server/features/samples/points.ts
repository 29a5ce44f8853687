import { eq, sql } from 'drizzle-orm';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { LabMethod, SamplePoint } from '../../../shared/contracts/samples.ts';
import { sayNarrow } from '../../../shared/rules/precision-sentences.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { methods, samplePoints } from '../../db/schema/index.ts';
import type { Actor, Origin } from '../../http/request.ts';
import { type Permitted, type SiteRow, lockRow } from '../../http/rows.ts';
import { stale } from '../../http/stale.ts';
import { toWire } from '../../http/wire.ts';
import { lastSaveOf, recordAudit } from '../audit/service.ts';
import { getUnit } from '../sites/repo.ts';
import { archivedAt } from '../sites/service.ts';
import {
  type MethodRow,
  type SamplePointRow,
  findPointCalled,
  getSamplePoint,
  methodNameTaken,
} from './points-repo.ts';

interface By {
  actor: Actor;
  origin: Origin;
}
interface Changed {
  archived: boolean;
  version: number;
}
type PointBody = Pick<SamplePoint, 'name' | 'unitId'> & { aliases?: string[] | undefined };
type MethodBody = Pick<LabMethod, 'name' | 'quantity' | 'unit' | 'repeatability' | 'reproducibility'>;

export async function addSamplePoint(
  context: Context,
  by: By,
  site: SiteRow,
  body: PointBody,
): Promise<SamplePoint> {
  return context.db.transaction(async (tx) => {
    await refusePointNames(tx, site.id, body, null);
    await refuseForeignUnit(tx, site.id, body.unitId);
    const [made] = await tx
      .insert(samplePoints)
      .values({ siteId: site.id, ...body, aliases: body.aliases ?? [] })
      .returning({ id: samplePoints.id });
    const after = await getSamplePoint(tx, site.id, made!.id);
    await note(context, tx, by, 'sample-point', 'add', null, after);
    return toWire(after);
  });
}

export async function changeSamplePoint(
  context: Context,
  by: By,
  row: Permitted<SamplePointRow>,
  body: PointBody & Changed,
): Promise<SamplePoint> {
  return context.db.transaction(async (tx) => {
    const locked = await lockRow(tx, 'samplePoint', row);
    const before = await getSamplePoint(tx, row.siteId, row.id);
    if (locked.version !== body.version) {
      throw stale('sample point', toWire(before), await lastSaveOf(tx, 'sample-point', row.id));
    }
    const { archived, version, ...given } = body;
    const values = { ...given, aliases: given.aliases ?? locked.aliases };
    await refusePointNames(tx, row.siteId, values, row.id);
    await refuseForeignUnit(tx, row.siteId, body.unitId);
    if (body.archived && !locked.archivedAt) refuseInUse(before);
    await tx
      .update(samplePoints)
      .set({ ...values, archivedAt: archivedAt(context, locked.archivedAt, archived), version: version + 1 })
      .where(eq(samplePoints.id, row.id));
    const after = await getSamplePoint(tx, row.siteId, row.id);
    await note(context, tx, by, 'sample-point', 'change', before, after);
    return toWire(after);
  });
}

function refuseInUse(point: { name: string; goesTo: { tagName: string }[] }): void {
  if (point.goesTo.length === 0) return;
  const tags = point.goesTo.map(({ tagName }) => tagName).join(', ');
  const take = point.goesTo.length === 1 ? 'takes its' : 'take their';
  throw new AppError(
    'conflict',
    `${tags} ${take} samples from ${point.name}. Name another point on the data sheet first.`,
  );
}

export async function addMethod(
  context: Context,
  by: By,
  site: SiteRow,
  body: MethodBody,
): Promise<LabMethod> {
  return context.db.transaction(async (tx) => {
    refuseNarrow(body);
    await refuseMethodName(tx, site.id, body.name, null);
    const [after] = await tx
      .insert(methods)
      .values({ siteId: site.id, ...body })
      .returning();
    await note(context, tx, by, 'method', 'add', null, after!);
    return toWire(after!);
  });
}

export async function changeMethod(
  context: Context,
  by: By,
  row: Permitted<MethodRow>,
  body: MethodBody & Changed,
): Promise<LabMethod> {
  return context.db.transaction(async (tx) => {
    const before = await lockRow(tx, 'method', row);
    if (before.version !== body.version) {
      throw stale('method', toWire({ ...before }), await lastSaveOf(tx, 'method', row.id));
    }
    refuseNarrow(body);
    await refuseMethodName(tx, row.siteId, body.name, row.id);
    const { archived, version, ...values } = body;
    const [after] = await tx
      .update(methods)
      .set({ ...values, archivedAt: archivedAt(context, before.archivedAt, archived), version: version + 1 })
      .where(eq(methods.id, row.id))
      .returning();
    await note(context, tx, by, 'method', 'change', before, after!);
    return toWire(after!);
  });
}

function refuseField(path: string, message: string): never {
  throw new AppError('invalid-input', message, { fields: [{ path, message }] });
}

/** Names and other names of sample points are one list at a site: a file's name leads to one point only. */
async function refusePointNames(
  tx: Tx,
  siteId: number,
  { name, aliases = [] }: PointBody,
  exceptId: number | null,
): Promise<void> {
  await tx.execute(sql`select pg_advisory_xact_lock(hashtext('sample-points'), ${siteId}::int)`);
  const seen = new Set<string>();
  for (const [index, known] of [name, ...aliases].entries()) {
    const path = index === 0 ? 'name' : 'aliases';
    if (seen.has(known.toLowerCase())) refuseField(path, `${known} stands here twice. Write each name once.`);
    seen.add(known.toLowerCase());
    const other = await findPointCalled(tx, siteId, known, exceptId);
    if (!other) continue;
    if (other.name.toLowerCase() !== known.toLowerCase()) {
      refuseField(path, `${other.name} goes by the name ${known} already. Take it from there first.`);
    }
    refuseField(path, `There is a sample point ${known} at this site already. Choose another name.`);
  }
}

async function refuseMethodName(
  tx: Tx,
  siteId: number,
  name: string,
  exceptId: number | null,
): Promise<void> {
  if (!(await methodNameTaken(tx, siteId, name, exceptId))) return;
  refuseField('name', `There is a method ${name} at this site already. Choose another name.`);
}

function refuseNarrow({ repeatability: r, reproducibility: R }: MethodBody): void {
  if (r === null || R === null || r <= R) return;
  refuseField('reproducibility', sayNarrow(r, R));
}

async function refuseForeignUnit(tx: Tx, siteId: number, unitId: number | null): Promise<void> {
  if (unitId === null || (await getUnit(tx, siteId, unitId))) return;
  refuseField('unitId', 'This unit is not one of the site. Choose another.');
}

async function note(
  context: Context,
  tx: Tx,
  by: By,
  entity: 'sample-point' | 'method',
  action: 'add' | 'change',
  before: Record<string, unknown> | null,
  after: { id: number; siteId: number; name: string } & Record<string, unknown>,
): Promise<void> {
  await recordAudit(tx, {
    at: context.clock(),
    siteId: after.siteId,
    ...by,
    action,
    entity,
    entityId: after.id,
    entityName: after.name,
    before,
    after,
  });
}
