import { sql } from 'drizzle-orm';
import type { Context } from '../../server/context.ts';
import { recountSite } from '../../server/features/board/summary.ts';

/**
 * Adds `count` soft sensors in service to a site, all of one owner, ten to a unit: number 1 is unfit and in closed loop
 * (A), 2 and 3 are unproven, 4 to 6 on watch (4 for an hour, fit before), the last is stopped with its unit, all others
 * are fit. Their figures are made up; the pages only show them. Tags: AY-901, AY-902, …
 */
export async function addManySensors(
  { db, clock }: Context,
  siteId: number,
  ownerId: number,
  count: number,
): Promise<void> {
  const now = clock();
  const written = (hours: number) => new Date(now.getTime() - hours * 3_600_000).toISOString();
  const said = (hours: number) => sql`${written(hours)}::timestamptz`;
  await db.execute(sql`
    with a as (insert into areas (site_id, name) values (${siteId}, 'Long list') returning id),
    u as (insert into units (site_id, area_id, name) select ${siteId}, a.id, 'Line ' || n
      from a, generate_series(1, ${Math.ceil(count / 10)}::int) n returning id, name),
    t as (insert into tags (site_id, name, unit, kind) select ${siteId}, 'AY-' || 900 + n, '°C', 'estimate'
      from generate_series(1, ${count}::int) n returning id, name),
    n as (select t.id as tag_id, t.name, substr(t.name, 4)::int - 900 as n from t),
    s as (insert into soft_sensors (site_id, unit_id, tag_name, name, quantity, unit, decimals, importance_class, consumers,
        estimate_tag_id, promised_reference_ms, allowed_error_absolute, history_every_ms, recalibration_interval,
        review_interval, created_at, created_by)
      select ${siteId}, u.id, n.name, 'Outlet temperature ' || n.n, 'temperature', '°C', 0, case when n.n = 1 then 'A' else 'B' end,
        case when n.n = 1 then '[{"kind":"closed-loop","name":"fuel"}]' else '[{"kind":"display","name":"hall"}]' end::jsonb,
        n.tag_id, 86400000, 10, 60000, '{"every":6,"unit":"months","counted":"last-done","anchorOn":null}',
        '{"every":12,"unit":"months","counted":"last-done","anchorOn":null}', ${said(9000)}, ${ownerId}
      from n join u on u.name = 'Line ' || (n.n + 9) / 10 returning id, tag_name),
    l as (insert into life_states (site_id, soft_sensor_id, state, effective_from, recorded_by)
      select ${siteId}, id, 'in-service', ${said(9000)}, ${ownerId} from s),
    o as (insert into ownerships (site_id, soft_sensor_id, owner_id, effective_from, recorded_by)
      select ${siteId}, id, ${ownerId}, ${said(9000)}, ${ownerId} from s),
    h as (select s.id, n.n, case when n.n = 1 then 3 when n.n < 4 then 2 when n.n < 7 then 1 else 0 end as severity
      from s join n on n.name = s.tag_name)
    insert into soft_sensor_status (site_id, soft_sensor_id, health, severity, reasons, bias, bias_low, bias_high, counted,
      allowed_error, last_errors, last_reference_at, health_since, health_before, stopped_since, references_since,
      judged_at, in_service, owner_id, rank)
    select ${siteId}, id, (array['fit', 'watch', 'unproven', 'unfit'])[severity + 1], severity,
      jsonb_build_array(jsonb_build_object('code', (array['within-allowed', 'bias-reaches-allowed', 'interval-wider-than-allowed',
        'bias-beyond-allowed'])[severity + 1], 'health', (array['fit', 'watch', 'unproven', 'unfit'])[severity + 1],
        'figures', jsonb_build_object('n', 12, 'bias', 1 + 5 * severity, 'low', 5 * severity - 2, 'high', 4 + 5 * severity, 'allowed', 10))),
      1 + 5 * severity, 5 * severity - 2, 4 + 5 * severity, 12, 10,
      (select jsonb_agg(jsonb_build_object('at', ${written(48)}::text, 'error', (severity + 1) * 4 * sin(k), 'allowed', 10)) from generate_series(1, 20) k),
      ${said(30)}, case when n = 4 then ${said(1)} else ${said(720)} end, case when n = 4 then 'fit' end,
      case when n = ${count}::int then ${said(72)} end, 20, ${said(1)}, true, ${ownerId}, severity * 10000 - n
    from h`);
  await db.transaction((tx) => recountSite(tx, siteId, now));
}
