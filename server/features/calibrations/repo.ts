import { type SQL, and, desc, eq, inArray, isNull, lte, max, ne, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { Calibration } from '../../../shared/contracts/calibrations.ts';
import type { CorrectionStep } from '../../../shared/rules/correction-steps.ts';
import type { Queryable } from '../../db/client.ts';
import { calibrations, pairs, persons, revisions, samples } from '../../db/schema/index.ts';
import { toWire } from '../../http/wire.ts';

export type CalibrationRow = typeof calibrations.$inferSelect;

/**
 * Corrections of a soft sensor as steps in time. A revision starts uncorrected; a correction that was entered in a
 * control system is in the readings already, so nothing is added to them here.
 */
export async function correctionSteps(
  db: Queryable,
  siteId: number,
  softSensorId: number,
): Promise<CorrectionStep[]> {
  const found = await db.execute<{ at: string | Date; slope: number; offset: number }>(sql`
    select effective_from as at, 1::float8 as slope, 0::float8 as "offset" from revisions
    where site_id = ${siteId} and soft_sensor_id = ${softSensorId} and effective_from is not null
    union all
    select effective_from, slope, "offset" from calibrations
    where site_id = ${siteId} and soft_sensor_id = ${softSensorId} and effective_from is not null and not to_be_entered
    order by at`);
  return found.rows.map(({ at, slope, offset }) => ({ fromMs: new Date(at).getTime(), slope, offset }));
}

async function newest(
  db: Queryable,
  moment: typeof calibrations.effectiveFrom | typeof calibrations.decidedAt,
  ...which: SQL[]
): Promise<Date | null> {
  const [row] = await db
    .select({ at: max(moment) })
    .from(calibrations)
    .where(and(...which));
  return row?.at ?? null;
}

const ofSensor = (siteId: number, softSensorId: number) => [
  eq(calibrations.siteId, siteId),
  eq(calibrations.softSensorId, softSensorId),
];

/** When the correction was last changed by a calibration in force at an instant; left as found changes nothing. */
export const lastCorrectedAt = (db: Queryable, siteId: number, softSensorId: number, now: Date) =>
  newest(
    db,
    calibrations.effectiveFrom,
    ...ofSensor(siteId, softSensorId),
    ne(calibrations.kind, 'as-found'),
    lte(calibrations.effectiveFrom, now),
  );

/** When it was last recalibrated, whether or not anything was changed. */
export const lastRecalibratedAt = (db: Queryable, siteId: number, softSensorId: number, now: Date) =>
  newest(
    db,
    calibrations.decidedAt,
    ...ofSensor(siteId, softSensorId),
    inArray(calibrations.decision, ['approved', 'confirmed']),
    lte(calibrations.decidedAt, now),
  );

const proposer = alias(persons, 'proposer');
const decider = alias(persons, 'decider');
const endsAt = sql<string | Date | null>`(select f.effective_to from calibrations_in_force f
  where f.site_id = ${calibrations.siteId} and f.id = ${calibrations.id})`;

/** Calibrations of a soft sensor with who proposed and decided, newest first; or only one of them. */
export async function listCalibrations(
  db: Queryable,
  siteId: number,
  softSensorId: number,
  onlyId?: number,
): Promise<Calibration[]> {
  const rows = await db
    .select({
      row: calibrations,
      revisionNumber: revisions.number,
      proposedBy: { id: proposer.id, name: proposer.name },
      decidedBy: { id: decider.id, name: decider.name },
      effectiveTo: endsAt,
    })
    .from(calibrations)
    .innerJoin(
      revisions,
      and(eq(revisions.siteId, calibrations.siteId), eq(revisions.id, calibrations.revisionId)),
    )
    .innerJoin(proposer, eq(proposer.id, calibrations.proposedBy))
    .leftJoin(decider, eq(decider.id, calibrations.decidedBy))
    .where(
      and(
        eq(calibrations.siteId, siteId),
        eq(calibrations.softSensorId, softSensorId),
        onlyId === undefined ? undefined : eq(calibrations.id, onlyId),
      ),
    )
    .orderBy(desc(calibrations.number));
  return rows.map(({ row, effectiveTo, ...names }) => {
    const {
      pairIds: _pairIds,
      ownerId: _ownerId,
      revisionId: _revisionId,
      enteredRecordedBy: _enteredRecordedBy,
      enteredRecordedAt: _enteredRecordedAt,
      evidence,
      ...own
    } = row;
    const end = effectiveTo === null ? null : new Date(effectiveTo).toISOString();
    return { ...toWire(own), evidence, ...names, effectiveTo: end };
  });
}

export async function getCalibration(db: Queryable, row: CalibrationRow): Promise<Calibration> {
  return (await listCalibrations(db, row.siteId, row.softSensorId, row.id))[0]!;
}

/** A proposal that nobody decided yet; at most one a soft sensor. */
export async function findWaiting(db: Queryable, siteId: number, softSensorId: number) {
  const [row] = await db
    .select()
    .from(calibrations)
    .where(
      and(
        eq(calibrations.siteId, siteId),
        eq(calibrations.softSensorId, softSensorId),
        isNull(calibrations.decision),
      ),
    );
  return row ?? null;
}

export async function nextNumber(db: Queryable, siteId: number, softSensorId: number): Promise<number> {
  const [last] = await db
    .select({ number: calibrations.number })
    .from(calibrations)
    .where(and(eq(calibrations.siteId, siteId), eq(calibrations.softSensorId, softSensorId)))
    .orderBy(desc(calibrations.number))
    .limit(1);
  return (last?.number ?? 0) + 1;
}

/** The pairs that a calibration was judged on, as they were frozen, in order of the time taken. */
export async function pairsOf(db: Queryable, row: CalibrationRow) {
  return db
    .select({ pair: pairs, sampleNumber: samples.sampleNumber })
    .from(pairs)
    .innerJoin(samples, and(eq(samples.siteId, pairs.siteId), eq(samples.id, pairs.sampleId)))
    .where(and(eq(pairs.siteId, row.siteId), sql`${pairs.id} = any(${sql.param(row.pairIds)}::bigint[])`))
    .orderBy(pairs.takenAt, pairs.sampleId);
}

/** Numbers of the samples whose pairs no longer stand: revised, withdrawn, or paired anew since. */
export async function revisedSamples(db: Queryable, row: CalibrationRow): Promise<string[]> {
  const found = await pairsOf(db, row);
  return found.filter(({ pair }) => pair.supersededAt !== null).map(({ sampleNumber }) => sampleNumber);
}
