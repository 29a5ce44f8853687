import { sql } from 'drizzle-orm';
import type { SampleImportView } from '../../../shared/contracts/sample-import.ts';
import type { Health } from '../../../shared/contracts/judging.ts';
import type { Queryable } from '../../db/client.ts';
import type { ImportRow } from './imports-repo.ts';

interface Judged extends Record<string, unknown> {
  softSensorId: number;
  tagName: string;
  health: Health;
  judged: boolean;
  changed: boolean;
}

/** What came of adding a file: the soft sensors whose samples it brought, and those whose health changed since. */
export async function receiptOf(db: Queryable, row: ImportRow): Promise<SampleImportView['receipt']> {
  if (row.state !== 'committed') return null;
  const since = row.committedAt!.toISOString();
  const found = await db.execute<Judged>(sql`
    select s.id as "softSensorId", s.tag_name as "tagName", t.health,
      t.judged_at >= ${since}::timestamptz as judged, t.health_since >= ${since}::timestamptz as changed
    from soft_sensors s
    join soft_sensor_status t on t.site_id = s.site_id and t.soft_sensor_id = s.id
    where s.site_id = ${row.siteId} and t.in_service and exists (
      select from samples x
      where x.site_id = s.site_id and x.import_id = ${row.id} and x.sample_point_id = s.sample_point_id
        and (x.method_id is null or s.method_id is null or x.method_id = s.method_id))
    order by s.tag_name`);
  return {
    softSensors: found.rows.length,
    waiting: found.rows.filter(({ judged }) => !judged).length,
    changedHealth: found.rows
      .filter(({ judged, changed }) => judged && changed)
      .map(({ softSensorId, tagName, health }) => ({ softSensorId, tagName, health })),
  };
}
