import { type SQL, and, desc, eq, gt, isNull, ne, or, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { Handover, OwnershipEntry } from '../../../shared/contracts/ownership.ts';
import type { Queryable } from '../../db/client.ts';
import { handovers, ownerships, persons, sites, softSensors } from '../../db/schema/index.ts';
import type { Actor } from '../../http/request.ts';
import { toWire } from '../../http/wire.ts';

const from = alias(persons, 'handover_from');
const to = alias(persons, 'handover_to');
const proposer = alias(persons, 'handover_proposer');
const answerer = alias(persons, 'handover_answerer');
const owner = alias(persons, 'owner');
const deputy = alias(persons, 'deputy');
const approver = alias(persons, 'approver');
const recorder = alias(persons, 'recorder');

const holds = (actor: Actor, siteId: number, role: string): boolean =>
  actor.roles.some((held) => held.siteId === siteId && held.role === role);

/** May the person take an unanswered offer back: who made it, or a manager of the site. */
export const mayWithdraw = (actor: Actor, row: { siteId: number; proposedBy: number }): boolean =>
  row.proposedBy === actor.id || holds(actor, row.siteId, 'manager');

async function selectHandovers(db: Queryable, actor: Actor, where: SQL | undefined): Promise<Handover[]> {
  const rows = await db
    .select({
      row: handovers,
      siteName: sites.name,
      siteZone: sites.zone,
      tagName: softSensors.tagName,
      name: softSensors.name,
      from: { id: from.id, name: from.name },
      to: { id: to.id, name: to.name },
      proposedBy: { id: proposer.id, name: proposer.name },
      answeredBy: { id: answerer.id, name: answerer.name },
    })
    .from(handovers)
    .innerJoin(sites, and(eq(sites.id, handovers.siteId), isNull(sites.archivedAt)))
    .innerJoin(
      softSensors,
      and(eq(softSensors.siteId, handovers.siteId), eq(softSensors.id, handovers.softSensorId)),
    )
    .innerJoin(to, eq(to.id, handovers.toId))
    .innerJoin(proposer, eq(proposer.id, handovers.proposedBy))
    .leftJoin(from, eq(from.id, handovers.fromId))
    .leftJoin(answerer, eq(answerer.id, handovers.answeredBy))
    .where(where)
    .orderBy(desc(handovers.proposedAt), desc(handovers.id));
  return rows.map(({ row: { fromId: _from, toId, proposedBy, ...row }, ...names }) => ({
    ...toWire(row),
    ...names,
    mayAnswer: row.answer === null && toId === actor.id,
    mayWithdraw: row.answer === null && mayWithdraw(actor, { siteId: row.siteId, proposedBy }),
  }));
}

export async function readHandover(
  db: Queryable,
  actor: Actor,
  siteId: number,
  id: number,
): Promise<Handover> {
  const found = await selectHandovers(db, actor, and(eq(handovers.siteId, siteId), eq(handovers.id, id)));
  return found[0]!;
}

/** Unanswered offers about one soft sensor. */
export const waitingOf = (
  db: Queryable,
  actor: Actor,
  siteId: number,
  softSensorId: number,
): Promise<Handover[]> =>
  selectHandovers(
    db,
    actor,
    and(eq(handovers.siteId, siteId), eq(handovers.softSensorId, softSensorId), isNull(handovers.answer)),
  );

const mine = (actor: Actor, siteIds: number[] | 'every') =>
  and(
    siteIds === 'every' ? undefined : sql`${handovers.siteId} = any(${sql.param(siteIds)}::int[])`,
    or(eq(handovers.toId, actor.id), eq(handovers.proposedBy, actor.id), eq(handovers.fromId, actor.id)),
  );

/** Unanswered offers that a person must answer, or made, or gives away, at the sites where they have a role. */
export const waitingFor = (db: Queryable, actor: Actor, siteIds: number[] | 'every'): Promise<Handover[]> =>
  selectHandovers(db, actor, and(isNull(handovers.answer), mine(actor, siteIds)));

const declinedShownMs = 30 * 86_400_000;

/** What a person offered, or gave away, and was declined lately, as long as no offer of the same followed. */
export const declinedLately = (
  db: Queryable,
  actor: Actor,
  siteIds: number[] | 'every',
  now: Date,
): Promise<Handover[]> =>
  selectHandovers(
    db,
    actor,
    and(
      eq(handovers.answer, 'declined'),
      ne(handovers.toId, actor.id),
      gt(handovers.answeredAt, new Date(now.getTime() - declinedShownMs)),
      mine(actor, siteIds),
      sql`not exists (select from handovers later where later.site_id = ${handovers.siteId}
        and later.soft_sensor_id = ${handovers.softSensorId} and later.part = ${handovers.part}
        and later.proposed_at > ${handovers.proposedAt})`,
    ),
  );

/** Who looked after a soft sensor, newest first; each entry ends where the next begins. */
export async function ownershipHistory(
  db: Queryable,
  siteId: number,
  softSensorId: number,
): Promise<OwnershipEntry[]> {
  const rows = await db
    .select({
      from: ownerships.effectiveFrom,
      reason: ownerships.reason,
      owner: { id: owner.id, name: owner.name },
      deputy: { id: deputy.id, name: deputy.name },
      approver: { id: approver.id, name: approver.name },
      recordedBy: { id: recorder.id, name: recorder.name },
    })
    .from(ownerships)
    .innerJoin(recorder, eq(recorder.id, ownerships.recordedBy))
    .leftJoin(owner, eq(owner.id, ownerships.ownerId))
    .leftJoin(deputy, eq(deputy.id, ownerships.deputyId))
    .leftJoin(approver, eq(approver.id, ownerships.approverId))
    .where(and(eq(ownerships.siteId, siteId), eq(ownerships.softSensorId, softSensorId)))
    .orderBy(desc(ownerships.effectiveFrom), desc(ownerships.id));
  return rows.map((row, i) => ({
    ...row,
    from: row.from.toISOString(),
    until: rows[i - 1]?.from.toISOString() ?? null,
  }));
}
