import { and, asc, desc, eq, inArray, isNotNull, isNull, ne, sql } from 'drizzle-orm';
import type { DecidedOnSample } from '../../../shared/contracts/standing-samples.ts';
import type { Queryable } from '../../db/client.ts';
import { auditEntries, methods, persons, retests, samplePoints, samples } from '../../db/schema/index.ts';
import { sensorsByPoint } from '../samples/points-repo.ts';
import { sensorsFor } from '../samples/repo.ts';

export type SampleRow = typeof samples.$inferSelect;
export type NewSample = typeof samples.$inferInsert;

const selectSamples = (db: Queryable) =>
  db
    .select({
      sample: samples,
      samplePoint: samplePoints.name,
      method: methods.name,
      enteredBy: persons.name,
    })
    .from(samples)
    .innerJoin(
      samplePoints,
      and(eq(samplePoints.siteId, samples.siteId), eq(samplePoints.id, samples.samplePointId)),
    )
    .leftJoin(methods, and(eq(methods.siteId, samples.siteId), eq(methods.id, samples.methodId)))
    .innerJoin(persons, eq(persons.id, samples.enteredBy));

type Selected = Awaited<ReturnType<typeof selectSamples>>[number];
type Sensors = Awaited<ReturnType<typeof sensorsByPoint>>;

const shown = ({ sample, samplePoint, method, enteredBy }: Selected, sensors: Sensors) => ({
  ...sample,
  samplePoint,
  method,
  enteredBy,
  changed: sample.version > 1,
  goesTo: sensorsFor(sensors, sample.samplePointId, sample.methodId),
});

/** Ids of all versions of a sample, from any one of them. */
export async function versionIds(db: Queryable, siteId: number, id: number): Promise<number[]> {
  const found = await db.execute<{ id: string }>(sql`
    with recursive back as (
      select id, supersedes_id from samples where site_id = ${siteId} and id = ${id}
      union select s.id, s.supersedes_id from samples s join back b on s.site_id = ${siteId} and s.id = b.supersedes_id
    ), forth as (
      select id from back
      union select s.id from samples s join forth f on s.site_id = ${siteId} and s.supersedes_id = f.id
    )
    select id from forth order by id`);
  return found.rows.map((row) => Number(row.id));
}

/** Versions with who entered them, newest first. */
export async function listVersions(db: Queryable, siteId: number, ids: readonly number[]) {
  const rows = await selectSamples(db)
    .where(and(eq(samples.siteId, siteId), inArray(samples.id, [...ids])))
    .orderBy(desc(samples.version), desc(samples.id));
  const sensors = await sensorsByPoint(db, siteId);
  return rows.map((row) => shown(row, sensors));
}

/** Releases and withdrawals of these versions with their reasons, oldest first; from the audit trail, which keeps them. */
export async function listDeeds(db: Queryable, siteId: number, ids: readonly number[]) {
  const rows = await db
    .select({
      at: auditEntries.at,
      by: auditEntries.personName,
      action: auditEntries.action,
      reason: auditEntries.reason,
    })
    .from(auditEntries)
    .where(
      and(
        eq(auditEntries.siteId, siteId),
        eq(auditEntries.entity, 'sample'),
        inArray(auditEntries.entityId, ids.map(String)),
        inArray(auditEntries.action, ['decide', 'remove']),
      ),
    )
    .orderBy(asc(auditEntries.id));
  return rows.map(({ action, ...deed }) => ({
    ...deed,
    what: action === 'remove' ? ('withdrawn' as const) : ('released' as const),
  }));
}

/**
 * Recalibrations whose frozen evidence holds one of these versions, newest first. Pairs are found by soft sensor and
 * time, which are indexed, and not by sample.
 */
export async function decidedOn(
  db: Queryable,
  siteId: number,
  ids: readonly number[],
): Promise<DecidedOnSample[]> {
  const found = await db.execute<DecidedRow>(sql`
    select distinct on (c.id) c.id as "calibrationId", c.number, c.soft_sensor_id as "softSensorId",
      f.tag_name as "tagName", c.kind, c.decision, c.proposed_at as "proposedAt", c.decided_at as "decidedAt",
      d.name as "decidedBy", s.version as "sampleVersion", p.reference
    from samples s
    join soft_sensors f on f.site_id = s.site_id
    join pairs p on p.site_id = s.site_id and p.soft_sensor_id = f.id and p.sample_id = s.id
      and p.taken_at = coalesce(s.taken_at, (s.taken_on + time '12:00') at time zone 'UTC')
    join calibrations c on c.site_id = s.site_id and c.soft_sensor_id = f.id and p.id = any(c.pair_ids)
    left join persons d on d.id = c.decided_by
    where s.site_id = ${siteId} and s.id = any(${sql.param([...ids])}::bigint[])
    order by c.id desc, p.id desc`);
  const iso = (at: string | Date) => new Date(at).toISOString();
  return found.rows.map((row) => ({
    ...row,
    proposedAt: iso(row.proposedAt),
    decidedAt: row.decidedAt === null ? null : iso(row.decidedAt),
  }));
}
type DecidedRow = Record<string, unknown> &
  Omit<DecidedOnSample, 'proposedAt' | 'decidedAt'> & {
    proposedAt: string | Date;
    decidedAt: string | Date | null;
  };

/** Samples that stand and are held, the longest first, with the re-test that is open. */
export async function listHeld(db: Queryable, siteId: number) {
  const askers = persons;
  const rows = await selectSamples(db)
    .where(
      and(
        eq(samples.siteId, siteId),
        isNotNull(samples.heldSince),
        isNull(samples.supersededAt),
        isNull(samples.withdrawnAt),
      ),
    )
    .orderBy(asc(samples.heldSince), asc(samples.id));
  const sensors = await sensorsByPoint(db, siteId);
  const asked = await db
    .select({
      sampleId: retests.sampleId,
      askedBy: askers.name,
      askedAt: retests.askedAt,
      reason: retests.reason,
    })
    .from(retests)
    .innerJoin(askers, eq(askers.id, retests.askedBy))
    .where(and(eq(retests.siteId, siteId), isNull(retests.answer)));
  const bySample = new Map(asked.map(({ sampleId, ...rest }) => [sampleId, rest]));
  return rows.map((row) => ({
    ...shown(row, sensors),
    heldSince: row.sample.heldSince!,
    retest: bySample.get(row.sample.id) ?? null,
  }));
}

/** Does another sample that stands bear this number at the point, for the method? */
export async function numberTaken(
  db: Queryable,
  siteId: number,
  key: Pick<SampleRow, 'samplePointId' | 'sampleNumber' | 'methodId'>,
  exceptId: number,
): Promise<boolean> {
  const count = await db.$count(
    samples,
    and(
      eq(samples.siteId, siteId),
      eq(samples.samplePointId, key.samplePointId),
      eq(samples.sampleNumber, key.sampleNumber),
      key.methodId === null ? isNull(samples.methodId) : eq(samples.methodId, key.methodId),
      isNull(samples.supersededAt),
      isNull(samples.withdrawnAt),
      ne(samples.id, exceptId),
    ),
  );
  return count > 0;
}

export async function setSample(
  tx: Queryable,
  { siteId, id }: Pick<SampleRow, 'siteId' | 'id'>,
  values: Partial<Pick<NewSample, 'heldSince' | 'supersededAt' | 'withdrawnAt' | 'flags'>>,
): Promise<void> {
  await tx
    .update(samples)
    .set(values)
    .where(and(eq(samples.siteId, siteId), eq(samples.id, id)));
}

export async function insertSample(tx: Queryable, row: NewSample): Promise<SampleRow> {
  const [made] = await tx.insert(samples).values(row).returning();
  return made!;
}
