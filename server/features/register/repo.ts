import { and, desc, eq, inArray, isNull, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { Queryable } from '../../db/client.ts';
import {
  areas,
  drafts,
  lifeStates,
  methods,
  ownerships,
  persons,
  revisions,
  samplePoints,
  sites,
  softSensorStatus,
  softSensors,
  units,
} from '../../db/schema/index.ts';
import type { SensorRow } from '../estimates/repo.ts';

const owner = alias(persons, 'owner');
const deputy = alias(persons, 'deputy');
const approver = alias(persons, 'approver');
const proposer = alias(persons, 'proposer');
const decider = alias(persons, 'decider');
const editor = alias(persons, 'editor');

const newestOwnership = sql`(select o.id from ownerships o where o.site_id = ${softSensors.siteId}
  and o.soft_sensor_id = ${softSensors.id} order by o.effective_from desc, o.id desc limit 1)`;
const newestLife = sql`(select l.id from life_states l where l.site_id = ${softSensors.siteId}
  and l.soft_sensor_id = ${softSensors.id} order by l.effective_from desc, l.id desc limit 1)`;

/** Rows of the register, of the given sites. */
export async function listSensors(db: Queryable, siteIds: number[] | 'every', siteId?: number) {
  return db
    .select({
      id: softSensors.id,
      siteId: softSensors.siteId,
      siteName: sites.name,
      areaName: areas.name,
      unitName: units.name,
      tagName: softSensors.tagName,
      name: softSensors.name,
      quantity: softSensors.quantity,
      unit: softSensors.unit,
      decimals: softSensors.decimals,
      importanceClass: softSensors.importanceClass,
      consumers: softSensors.consumers,
      life: lifeStates.state,
      form: sql<'regression' | 'external' | null>`coalesce(
        (select r.model ->> 'form' from revisions r where r.site_id = ${softSensors.siteId} and r.soft_sensor_id = ${softSensors.id}
          and r.decision = 'approved' order by r.effective_from desc limit 1), ${drafts.model} ->> 'form')`,
      owner: { id: owner.id, name: owner.name },
      health: softSensorStatus.health,
      reasons: softSensorStatus.reasons,
      lastReferenceAt: softSensorStatus.lastReferenceAt,
    })
    .from(softSensors)
    .innerJoin(sites, eq(sites.id, softSensors.siteId))
    .innerJoin(units, and(eq(units.siteId, softSensors.siteId), eq(units.id, softSensors.unitId)))
    .innerJoin(areas, and(eq(areas.siteId, units.siteId), eq(areas.id, units.areaId)))
    .innerJoin(lifeStates, eq(lifeStates.id, newestLife))
    .leftJoin(ownerships, eq(ownerships.id, newestOwnership))
    .leftJoin(owner, eq(owner.id, ownerships.ownerId))
    .leftJoin(drafts, and(eq(drafts.siteId, softSensors.siteId), eq(drafts.softSensorId, softSensors.id)))
    .leftJoin(
      softSensorStatus,
      and(eq(softSensorStatus.siteId, softSensors.siteId), eq(softSensorStatus.softSensorId, softSensors.id)),
    )
    .where(
      and(
        isNull(sites.archivedAt),
        siteIds === 'every' ? undefined : inArray(softSensors.siteId, siteIds.length > 0 ? siteIds : [0]),
        siteId === undefined ? undefined : eq(softSensors.siteId, siteId),
      ),
    )
    .orderBy(sites.name, units.name, softSensors.tagName);
}

/** What stands around a soft sensor on its sheet: names of its place, people, life. */
export async function surroundings(db: Queryable, sensor: SensorRow) {
  const [row] = await db
    .select({
      siteName: sites.name,
      siteZone: sites.zone,
      areaName: areas.name,
      unitName: units.name,
      samplePointName: samplePoints.name,
      methodName: methods.name,
      methodReproducibility: methods.reproducibility,
      life: lifeStates.state,
      lifeSince: lifeStates.effectiveFrom,
      lifeReason: lifeStates.reason,
      owner: { id: owner.id, name: owner.name },
      deputy: { id: deputy.id, name: deputy.name },
      approver: { id: approver.id, name: approver.name },
    })
    .from(softSensors)
    .innerJoin(sites, eq(sites.id, softSensors.siteId))
    .innerJoin(units, and(eq(units.siteId, softSensors.siteId), eq(units.id, softSensors.unitId)))
    .innerJoin(areas, and(eq(areas.siteId, units.siteId), eq(areas.id, units.areaId)))
    .innerJoin(lifeStates, eq(lifeStates.id, newestLife))
    .leftJoin(ownerships, eq(ownerships.id, newestOwnership))
    .leftJoin(owner, eq(owner.id, ownerships.ownerId))
    .leftJoin(deputy, eq(deputy.id, ownerships.deputyId))
    .leftJoin(approver, eq(approver.id, ownerships.approverId))
    .leftJoin(
      samplePoints,
      and(eq(samplePoints.siteId, softSensors.siteId), eq(samplePoints.id, softSensors.samplePointId)),
    )
    .leftJoin(methods, and(eq(methods.siteId, softSensors.siteId), eq(methods.id, softSensors.methodId)))
    .where(and(eq(softSensors.siteId, sensor.siteId), eq(softSensors.id, sensor.id)));
  return row!;
}

/** Revisions of a soft sensor with the names of who proposed and decided, newest first. */
export async function listRevisions(db: Queryable, siteId: number, softSensorId: number, onlyId?: number) {
  return db
    .select({
      revision: revisions,
      proposedBy: { id: proposer.id, name: proposer.name },
      decidedBy: { id: decider.id, name: decider.name },
    })
    .from(revisions)
    .innerJoin(proposer, eq(proposer.id, revisions.proposedBy))
    .leftJoin(decider, eq(decider.id, revisions.decidedBy))
    .where(
      and(
        eq(revisions.siteId, siteId),
        eq(revisions.softSensorId, softSensorId),
        onlyId === undefined ? undefined : eq(revisions.id, onlyId),
      ),
    )
    .orderBy(desc(revisions.number));
}

export async function draftWithEditor(db: Queryable, siteId: number, softSensorId: number) {
  const [row] = await db
    .select({ draft: drafts, editor: editor.name })
    .from(drafts)
    .innerJoin(editor, eq(editor.id, drafts.updatedBy))
    .where(and(eq(drafts.siteId, siteId), eq(drafts.softSensorId, softSensorId)));
  return row ?? null;
}

export async function currentOwnership(db: Queryable, siteId: number, softSensorId: number) {
  const [row] = await db
    .select()
    .from(ownerships)
    .where(and(eq(ownerships.siteId, siteId), eq(ownerships.softSensorId, softSensorId)))
    .orderBy(desc(ownerships.effectiveFrom), desc(ownerships.id))
    .limit(1);
  return row ?? null;
}

export async function workWaits(db: Queryable, siteId: number, softSensorId: number): Promise<boolean> {
  const found = await db.execute(
    sql`select 1 from soft_sensor_work where site_id = ${siteId} and soft_sensor_id = ${softSensorId}`,
  );
  return found.rows.length > 0;
}
