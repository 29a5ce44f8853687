import { sql } from 'drizzle-orm';
import type { EventKind } from '../../../shared/contracts/events.ts';
import type { Queryable } from '../../db/client.ts';
import type { SensorRow } from '../estimates/repo.ts';

/** A stop that ended, or that lasts (`to` null), of the soft sensor's unit or of itself. */
export interface Stoppage {
  from: Date;
  to: Date | null;
}

const about = (sensor: SensorRow) =>
  sql`(unit_id = ${sensor.unitId} or soft_sensor_id = ${sensor.id}) and site_id = ${sensor.siteId}`;

/** Stops of a soft sensor's unit and of itself, oldest first. */
export async function stoppagesOf(db: Queryable, sensor: SensorRow): Promise<Stoppage[]> {
  const found = await db.execute<{ stopped_at: string | Date; started_at: string | Date | null }>(
    sql`select stopped_at, started_at from stoppages where ${about(sensor)} order by stopped_at`,
  );
  return found.rows.map((row) => ({
    from: new Date(row.stopped_at),
    to: row.started_at === null ? null : new Date(row.started_at),
  }));
}

/** Since when it has been stopped at an instant; null where it runs. */
export function stoppedSince(stoppages: readonly Stoppage[], at: Date): Date | null {
  const standing = stoppages.filter(({ from, to }) => from <= at && (to === null || to > at));
  return standing.length === 0
    ? null
    : standing.reduce((first, { from }) => (from < first ? from : first), at);
}

/** The last event, recorded or not at that time, after which errors count anew: all kinds but a plain stop. */
export async function lastBaselineEvent(
  db: Queryable,
  sensor: SensorRow,
  now: Date,
): Promise<{ kind: EventKind; at: Date } | null> {
  const found = await db.execute<{ kind: EventKind; at: string | Date }>(sql`
    select kind, at from events
    where ${about(sensor)} and withdrawn_at is null and kind <> 'stop' and at <= ${now.toISOString()}::timestamptz
    order by at desc, id desc limit 1`);
  const row = found.rows[0];
  return row ? { kind: row.kind, at: new Date(row.at) } : null;
}
