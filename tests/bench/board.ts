import autocannon from 'autocannon';
import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { hashPassword } from '../../server/auth/password.ts';
import { createSessions } from '../../server/auth/sessions.ts';
import { createApp } from '../../server/app.ts';
import type { Context } from '../../server/context.ts';
import { persons, siteRoles, sites } from '../../server/db/schema/index.ts';
import { recountSite } from '../../server/features/board/summary.ts';
import { routesOf } from '../../server/http/front-door.ts';
import { endpoint } from '../../shared/contracts/endpoint.ts';
import { startBenchServer } from './bench-server.ts';
import type { Figure } from './figure.ts';

const sensorsPerSite = 100;
const siteCount = 20;
const seconds = 5;

const selectOne = {
  'bench.selectOne': endpoint({
    method: 'GET',
    path: '/select-one',
    kind: 'json',
    summary: 'Answers select 1',
    access: { may: 'site.view', on: 'sites' },
    reply: z.object({ one: z.number() }),
    example: { one: 1 },
  }),
};

/** The peer goes through the same front door, with session and roles, and answers `select 1`. */
function peerRoutes(context: Context) {
  return routesOf(context, selectOne, {
    'bench.selectOne': async () => {
      const found = await context.db.execute<{ one: number }>(sql`select 1 as one`);
      return found.rows[0]!;
    },
  });
}

/** The board with 2,000 soft sensors, worst first, against an endpoint that answers `select 1`. */
export async function boardFigures(adminUrl: string): Promise<Figure[]> {
  const server = await startBenchServer(adminUrl, (context) =>
    createApp(context, { signInAttempts: 1000, extraFeatures: [peerRoutes] }),
  );
  try {
    const cookie = await fillCompany(server.context);
    const measure = async (path: string) => {
      const options = { url: `${server.address}/api/v1${path}`, connections: 4, headers: { cookie } };
      await autocannon({ ...options, duration: 1 });
      const result = await autocannon({ ...options, duration: seconds });
      if (result.non2xx > 0 || result['2xx'] === 0)
        throw new Error(`${path} answered ${result.non2xx} errors`);
      return 1000 / (result['2xx'] / result.duration);
    };
    const peerValue = await measure('/select-one');
    const value = await measure('/board');
    return [
      {
        name: 'board with 2,000 soft sensors, a request',
        value,
        unit: 'ms',
        peer: 'select 1 through the same front door',
        peerValue,
        ratio: value / peerValue,
        target: 5,
        met: value / peerValue <= 5,
      },
    ];
  } finally {
    await server.stop();
  }
}

async function fillCompany(context: Context): Promise<string> {
  const { db } = context;
  const [person] = await db
    .insert(persons)
    .values({
      name: 'Bench',
      email: 'bench@cupel.example',
      passwordHash: await hashPassword('a long enough password'),
    })
    .returning();
  const made = await db
    .insert(sites)
    .values(Array.from({ length: siteCount }, (_, i) => ({ name: `Site ${i}`, zone: 'Europe/Copenhagen' })))
    .returning();
  await db
    .insert(siteRoles)
    .values(made.map((site) => ({ personId: person!.id, siteId: site.id, role: 'manager' as const })));
  await db.execute(sql`
    with a as (insert into areas (site_id, name) select id, 'Area' from sites returning site_id, id),
    u as (insert into units (site_id, area_id, name) select a.site_id, a.id, 'Unit ' || n from a, generate_series(1, 10) n returning site_id, id),
    numbered as (select site_id, id, row_number() over (partition by site_id order by id) as n from u),
    t as (insert into tags (site_id, name, unit, kind) select s.id, 'AY-' || n, '°C', 'estimate' from sites s, generate_series(1, ${sensorsPerSite}) n returning site_id, id, name)
    insert into soft_sensors (site_id, unit_id, tag_name, name, quantity, unit, decimals, importance_class, consumers, estimate_tag_id,
      promised_reference_ms, allowed_error_absolute, history_every_ms, recalibration_interval, review_interval, created_at, created_by)
    select t.site_id, n.id, t.name, 'Soft sensor ' || t.name, 'temperature', '°C', 1, 'A', '[{"kind":"closed-loop","name":"loop"}]', t.id,
      86400000, 10, 60000, '{"every":3,"unit":"months","counted":"last-done","anchorOn":null}',
      '{"every":12,"unit":"months","counted":"last-done","anchorOn":null}', now(), ${person!.id}
    from t join numbered n on n.site_id = t.site_id and n.n = 1 + (t.id % 10)`);
  await db.execute(
    sql`insert into life_states (site_id, soft_sensor_id, state, effective_from, recorded_by) select site_id, id, 'in-service', now(), ${person!.id} from soft_sensors`,
  );
  await db.execute(
    sql`insert into ownerships (site_id, soft_sensor_id, owner_id, effective_from, recorded_by) select site_id, id, ${person!.id}, now(), ${person!.id} from soft_sensors`,
  );
  await db.execute(sql`
    insert into duties (site_id, soft_sensor_id, kind, due_on, opened_at, opened_on)
    select site_id, id, kind, current_date - 9 + (id * 7) % 180, now(), current_date
    from soft_sensors, unnest(array['recalibration', 'review']) kind`);
  await db.execute(sql`
    insert into soft_sensor_status (site_id, soft_sensor_id, health, severity, reasons, bias, bias_low, bias_high, counted, allowed_error, last_errors, last_reference_at, health_since, judged_at, in_service, owner_id, rank)
    select site_id, id, h.health, h.severity,
      jsonb_build_array(jsonb_build_object('code', 'within-allowed', 'health', h.health, 'figures', '{"n":30,"bias":1.2,"low":0.4,"high":2.0,"allowed":10}'::jsonb)),
      1.2, 0.4, 2.0, 30, 10,
      (select jsonb_agg(jsonb_build_object('at', '2026-11-01T00:00:00.000Z', 'error', sin(n), 'allowed', 10)) from generate_series(1, 20) n),
      now(), now(), now(), true, ${person!.id}, h.severity * 10000 + random() * 1000
    from soft_sensors, lateral (select (array['fit','fit','fit','fit','fit','fit','fit','watch','unproven','unfit'])[1 + id % 10] as health,
      (array[0,0,0,0,0,0,0,1,2,3])[1 + id % 10] as severity) h`);
  await db.transaction(async (tx) => {
    for (const site of made) await recountSite(tx, site.id, context.clock());
  });
  await db.execute(sql`
    insert into site_months (site_id, month, unfit, unproven)
    select id, to_char(now() - m * interval '1 month', 'YYYY-MM'), m % 4, m % 3 from sites, generate_series(1, 11) m`);
  await db.execute(sql`vacuum analyze`);
  const session = await createSessions(db, false).createSession(person!.id, {});
  return `cupel_session=${session.id}`;
}
