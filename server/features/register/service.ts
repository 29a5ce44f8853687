import { and, eq } from 'drizzle-orm';
import type { Role } from '../../../shared/contracts/access.ts';
import type { FieldProblem } from '../../../shared/contracts/errors.ts';
import type { Sheet, SheetFields } from '../../../shared/contracts/register.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { lifeStates, methods, ownerships, samplePoints, softSensors, tags } from '../../db/schema/index.ts';
import type { Actor, Origin } from '../../http/request.ts';
import { invalidInput } from '../../http/parse.ts';
import { type Permitted, lockRow } from '../../http/rows.ts';
import { stale } from '../../http/stale.ts';
import type { SensorRow } from '../estimates/repo.ts';
import { markSensorDirty } from '../estimates/work.ts';
import { syncSensor } from '../duties/service.ts';
import { queueJudging } from '../judging/changed.ts';
import { lifeNow } from '../judging/repo.ts';
import { type Holders, recordOwnership } from '../ownership/change.ts';
import { listPeopleAtSite } from '../people/repo.ts';
import { type SiteRow, getUnit } from '../sites/repo.ts';
import { tagsByName } from '../tags/repo.ts';
import { note } from './note.ts';
import { currentOwnership } from './repo.ts';
import { fieldsOf, peopleOf, readSheet } from './sheet.ts';

export interface By {
  actor: Actor;
  origin: Origin;
}

/** Registers a soft sensor as a draft, with the tag that its estimate will be kept under. */
export async function registerSensor(
  context: Context,
  by: By,
  site: Permitted<SiteRow>,
  fields: SheetFields,
): Promise<Sheet> {
  return context.db.transaction(async (tx) => {
    await refuseWrongFields(tx, site.id, fields, null);
    const now = context.clock();
    const estimateTagId = await estimateTag(tx, site.id, fields);
    const { ownerId, deputyId, approverId, ...own } = fields;
    const [sensor] = await tx
      .insert(softSensors)
      .values({ ...own, siteId: site.id, estimateTagId, createdAt: now, createdBy: by.actor.id })
      .returning();
    const key = { siteId: site.id, softSensorId: sensor!.id, effectiveFrom: now, recordedBy: by.actor.id };
    await tx.insert(ownerships).values({ ...key, ownerId, deputyId, approverId });
    await tx.insert(lifeStates).values({ ...key, state: 'draft' });
    await note(context, tx, by, sensor!, 'add', 'softSensor', null, { ...fields });
    return readSheet(tx, sensor!, now);
  });
}

/** The tag of the estimate: its own name, made here, so that an external estimate may arrive under it. */
async function estimateTag(tx: Tx, siteId: number, fields: SheetFields): Promise<number> {
  const [tag] = await tx
    .insert(tags)
    .values({
      siteId,
      unitId: fields.unitId,
      name: fields.tagName,
      description: fields.name,
      unit: fields.unit,
      kind: 'estimate',
    })
    .returning({ id: tags.id });
  return tag!.id;
}

/** Changes a data sheet; a stale version gets both sides back. */
export async function changeSensor(
  context: Context,
  by: By,
  row: Permitted<SensorRow>,
  body: { fields: SheetFields; version: number },
): Promise<Sheet> {
  return context.db.transaction(async (tx) => {
    const sensor = await lockRow(tx, 'softSensor', row);
    const ownership = await currentOwnership(tx, row.siteId, row.id);
    const before = { ...fieldsOf(sensor), ...peopleOf(ownership) };
    if (sensor.version !== body.version) throw stale('data sheet', { ...before, version: sensor.version });
    await refuseWrongFields(tx, row.siteId, body.fields, sensor, before);
    if (body.fields.ownerId !== before.ownerId && body.fields.ownerId !== by.actor.id) {
      await refuseNewOwner(tx, sensor);
    }
    const { ownerId, deputyId, approverId, ...own } = body.fields;
    const [after] = await tx
      .update(softSensors)
      .set({ ...own, version: sensor.version + 1 })
      .where(and(eq(softSensors.siteId, row.siteId), eq(softSensors.id, row.id)))
      .returning();
    await tx
      .update(tags)
      .set({ name: own.tagName, description: own.name, unit: own.unit, unitId: own.unitId })
      .where(and(eq(tags.siteId, row.siteId), eq(tags.id, sensor.estimateTagId)));
    if (ownerId !== before.ownerId || deputyId !== before.deputyId || approverId !== before.approverId) {
      const recorded = { personId: by.actor.id, at: context.clock(), reason: '' };
      await recordOwnership(tx, after!, { ownerId, deputyId, approverId }, recorded);
    } else await syncSensor(tx, { siteId: row.siteId, softSensorId: row.id }, context.clock());
    await followUp(tx, sensor, after!);
    await note(context, tx, by, after!, 'change', 'softSensor', before, { ...body.fields });
    return readSheet(tx, after!, context.clock());
  });
}

/** What changes how samples pair or are judged is worked through again. */
async function followUp(tx: Tx, before: SensorRow, after: SensorRow): Promise<void> {
  const repairs = ['samplePointId', 'methodId', 'transportDelayMs', 'pairingWindowMs'] as const;
  if (repairs.some((field) => before[field] !== after[field])) {
    const firstSample = new Date(0);
    await markSensorDirty(tx, after.siteId, after.id, firstSample);
  } else await queueJudging(tx, after.siteId, after.id);
}

async function refuseWrongFields(
  tx: Tx,
  siteId: number,
  fields: SheetFields,
  own: SensorRow | null,
  before: Holders | null = null,
): Promise<void> {
  const problems: FieldProblem[] = [];
  const say = (path: keyof SheetFields, message: string) => problems.push({ path, message });
  if (!(await getUnit(tx, siteId, fields.unitId)))
    say('unitId', 'This unit is not one of the site. Choose another.');
  const taken = (await tagsByName(tx, siteId)).get(fields.tagName.toLowerCase());
  if (taken && taken.id !== own?.estimateTagId) {
    say(
      'tagName',
      `There is a tag ${taken.name} at this site already. Choose another, such as ${taken.name}-EST.`,
    );
  }
  if (fields.samplePointId !== null && !(await atSite(tx, samplePoints, siteId, fields.samplePointId))) {
    say('samplePointId', 'This sample point is not one of the site. Choose another.');
  }
  if (fields.methodId !== null && !(await atSite(tx, methods, siteId, fields.methodId))) {
    say('methodId', 'This method is not one of the site. Choose another.');
  }
  await checkPeople(tx, siteId, fields, before, say);
  if (problems.length > 0)
    throw invalidInput(
      problems.map(({ path, message }) => ({ path: own ? `fields.${path}` : path, message })),
    );
}

async function atSite(
  tx: Tx,
  table: typeof samplePoints | typeof methods,
  siteId: number,
  id: number,
): Promise<boolean> {
  return (await tx.$count(table, and(eq(table.siteId, siteId), eq(table.id, id)))) > 0;
}

async function checkPeople(
  tx: Tx,
  siteId: number,
  fields: SheetFields,
  before: Holders | null,
  say: (path: keyof SheetFields, message: string) => void,
): Promise<void> {
  const people = new Map((await listPeopleAtSite(tx, siteId)).map((person) => [person.id, person]));
  for (const { path, roles, message } of partRoles) {
    const id = fields[path];
    // Whoever lost the role meanwhile is an ownership gap of its own and is in the way of no other change.
    if (id === null || id === before?.[path]) continue;
    const held = people.get(id)?.roles;
    if (!held) say(path, 'This person has no role at the site. Choose somebody who has.');
    else if (!roles.some((role) => held.includes(role))) say(path, message);
  }
}

const partRoles: { path: 'ownerId' | 'deputyId' | 'approverId'; roles: Role[]; message: string }[] = [
  {
    path: 'ownerId',
    roles: ['engineer'],
    message: 'The owner must be an engineer of the site. Choose somebody who is.',
  },
  {
    path: 'deputyId',
    roles: ['engineer'],
    message: 'The deputy must be an engineer of the site. Choose somebody who is.',
  },
  {
    path: 'approverId',
    roles: ['engineer', 'manager'],
    message: 'The approver must be an engineer or a manager of the site. Choose somebody who is.',
  },
];

/** Once a soft sensor has left its draft, a new owner is asked first. */
async function refuseNewOwner(tx: Tx, sensor: SensorRow): Promise<void> {
  const life = await lifeNow(tx, sensor.siteId, sensor.id);
  if (life?.state === 'draft') return;
  const message =
    'A soft sensor that left its draft changes its owner by handing over, so that the successor accepts. Offer it under “Hand over”, or name yourself.';
  throw invalidInput([{ path: 'fields.ownerId', message }]);
}
