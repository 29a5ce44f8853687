import { and, eq, sql } from 'drizzle-orm';
import { type DutyChange, planDuties } from '../../../shared/rules/duty-plan.ts';
import type { Context } from '../../context.ts';
import type { Queryable, Tx } from '../../db/client.ts';
import { duties } from '../../db/schema/index.ts';
import type { SensorRow } from '../estimates/repo.ts';
import type { By } from '../register/service.ts';
import { type SensorFacts, dutyFacts } from './facts.ts';

interface SensorKey {
  siteId: number;
  softSensorId: number;
}

/** A record that is being written in the same transaction and closes the open duty of its kind. */
interface JustDone {
  kind: 'recalibration' | 'review';
  recordId: number;
}

/** Opens, moves and closes duties wherever the facts ask for it; asked again, it finds nothing to do. */
export async function syncDuties(context: Context): Promise<void> {
  const now = context.clock();
  for (const facts of await dutyFacts(context.db, now, 'all')) {
    if (planDuties(facts).length === 0) continue;
    await context.db.transaction((tx) => syncSensor(tx, facts, now));
  }
}

/** The same for every soft sensor that a person owns or deputises for, in the transaction that changed the person. */
export async function syncDutiesOfPerson(tx: Tx, personId: number, now: Date): Promise<void> {
  const held = await tx.execute<{ siteId: number; softSensorId: number }>(sql`
    select s.site_id as "siteId", s.id as "softSensorId" from soft_sensors s
    join lateral (select w.owner_id, w.deputy_id from ownerships w where w.site_id = s.site_id and w.soft_sensor_id = s.id
      order by w.effective_from desc, w.id desc limit 1) o on ${personId} in (o.owner_id, o.deputy_id)
    order by s.site_id, s.id`);
  for (const key of held.rows) await syncSensor(tx, key, now);
}

/** The same for one soft sensor, in the transaction that changed its facts. Returns whether anything was to do. */
export async function syncSensor(tx: Tx, key: SensorKey, now: Date, done?: JustDone): Promise<boolean> {
  // Locked before its facts are read, so that two who come at once don't both open a duty.
  await tx.execute(
    sql`select 1 from soft_sensors where site_id = ${key.siteId} and id = ${key.softSensorId} for update`,
  );
  const [facts] = await dutyFacts(tx, now, key);
  if (!facts) return false;
  if (done) facts[done.kind].justDone = done.recordId;
  const changes = planDuties(facts);
  for (const change of changes) await carryOutChange(tx, facts, change, now);
  return changes.length > 0;
}

async function carryOutChange(tx: Tx, facts: SensorFacts, change: DutyChange, now: Date): Promise<void> {
  const { siteId, softSensorId, today } = facts;
  switch (change.do) {
    case 'open': {
      const { kind, dueOn, assigneeId } = change;
      const opened = { openedAt: now, openedOn: today };
      await tx.insert(duties).values({ siteId, softSensorId, kind, dueOn, assigneeId, ...opened });
      return;
    }
    case 'move':
      await tx
        .update(duties)
        .set({ dueOn: change.dueOn, version: sql`${duties.version} + 1` })
        .where(and(eq(duties.siteId, siteId), eq(duties.id, change.dutyId)));
      return;
    case 'close': {
      const record = change.recordId;
      await tx
        .update(duties)
        .set({
          state: 'done',
          closedAt: change.at ?? now,
          closedBy: change.by,
          reason: change.reason,
          ...(change.kind === 'recalibration' ? { calibrationId: record } : {}),
          ...(change.kind === 'review' ? { reviewId: record } : {}),
          version: sql`${duties.version} + 1`,
        })
        .where(and(eq(duties.siteId, siteId), eq(duties.id, change.dutyId)));
    }
  }
}

/** Closes the open recalibration duty with the calibration that attended to it, and opens the next. */
export async function recalibrationDone(
  context: Context,
  tx: Tx,
  _by: By,
  sensor: SensorRow,
  calibrationId: number,
): Promise<void> {
  const key = { siteId: sensor.siteId, softSensorId: sensor.id };
  await syncSensor(tx, key, context.clock(), { kind: 'recalibration', recordId: calibrationId });
}

/** When the open recalibration and review fall due, as dates at the site. */
export async function dueDatesOf(
  db: Queryable,
  siteId: number,
  softSensorId: number,
): Promise<{ recalibration: string | null; review: string | null }> {
  const rows = await db
    .select({ kind: duties.kind, dueOn: duties.dueOn })
    .from(duties)
    .where(and(eq(duties.siteId, siteId), eq(duties.softSensorId, softSensorId), eq(duties.state, 'open')));
  const of = (kind: string) => rows.find((row) => row.kind === kind)?.dueOn ?? null;
  return { recalibration: of('recalibration'), review: of('review') };
}
