import { sql } from 'drizzle-orm';
import { beforeAll, describe, expect, it } from 'vitest';
import { demoPeople } from '../../seeds/company.ts';
import { demoSignIns, keepDemoUpToDate, seedDemo, topUpDemo } from '../../seeds/demo.ts';
import { demoUnits } from '../../seeds/units.ts';
import { useServer } from '../support/server.ts';

const server = useServer();
const hourMs = 3_600_000;
/** Putting half a year in takes half a minute on two quiet processors. */
const patience = 300_000;

interface Standing extends Record<string, unknown> {
  tagName: string;
  life: string;
  health: string | null;
  codes: string[];
  stopped: boolean;
  referencesSince: number;
  form: string | null;
}

async function standings(): Promise<Map<string, Standing>> {
  const found = await server.context.db.execute<Standing>(sql`
    select s.tag_name as "tagName", l.state as life, st.health, st.stopped_since is not null as stopped,
      coalesce(st.references_since, 0) as "referencesSince",
      array(select jsonb_array_elements(st.reasons) ->> 'code') as codes,
      (select r.model ->> 'form' from revisions r where r.soft_sensor_id = s.id order by r.number desc limit 1) as form
    from soft_sensors s
    join current_life_states l on l.soft_sensor_id = s.id
    left join soft_sensor_status st on st.soft_sensor_id = s.id`);
  return new Map(found.rows.map((row) => [row.tagName, row]));
}

async function rows<T extends Record<string, unknown>>(query: ReturnType<typeof sql>): Promise<T[]> {
  return (await server.context.db.execute<T>(query)).rows as T[];
}
const count = async (query: ReturnType<typeof sql>) => Number((await rows<{ n: string }>(query))[0]!.n);

describe('the demo company', () => {
  let standing: Map<string, Standing>;
  const of = (tagName: string) => standing.get(tagName)!;

  beforeAll(async () => {
    server.now.value = new Date();
    await seedDemo(server.context, { dailyDays: 3 });
    await server.drainJobs();
    standing = await standings();
  }, patience);

  it('has three sites in three zones, nine units and 24 soft sensors of every model form', async () => {
    const zones = await rows<{ zone: string }>(sql`select zone from sites order by zone`);
    expect(zones.map(({ zone }) => zone)).toEqual([
      'America/Chicago',
      'Australia/Adelaide',
      'Europe/Copenhagen',
    ]);
    expect(await count(sql`select count(*) as n from units`)).toBeGreaterThanOrEqual(9);
    expect(standing.size).toBeGreaterThanOrEqual(24);
    expect(new Set([...standing.values()].map(({ form }) => form))).toEqual(
      new Set(['regression', 'external', null]),
    );
    const classes = await rows<{ c: string }>(
      sql`select distinct importance_class as c from soft_sensors order by 1`,
    );
    expect(classes.map(({ c }) => c)).toEqual(['A', 'B', 'C']);
  });

  it('has half a year of readings, under four million', async () => {
    const days = await count(
      sql`select extract(epoch from max(last_at) - min(first_at)) / 86400 as n from tag_spans`,
    );
    expect(days).toBeGreaterThan(181);
    const readings = await count(sql`select count(*) as n from readings`);
    expect(readings).toBeGreaterThan(1_500_000);
    expect(readings).toBeLessThan(4_000_000);
  });

  it('shows every health, and a unit that is stopped, and most soft sensors Fit', () => {
    const inService = [...standing.values()].filter(({ life, stopped }) => life === 'in-service' && !stopped);
    const healths = inService.map(({ health }) => health);
    expect(new Set(healths)).toEqual(new Set(['fit', 'watch', 'unfit', 'unproven']));
    const fit = healths.filter((health) => health === 'fit').length;
    expect(fit).toBeGreaterThanOrEqual(15);
    expect(fit).toBeLessThanOrEqual(17);
    expect(of('AY-3101').stopped).toBe(true);
  });

  it.each([
    ['an ageing thermocouple', 'TY-1402', 'unfit', 'bias-beyond-allowed'],
    ['a step after a shutdown', 'TY-3301', 'unfit', 'bias-beyond-allowed'],
    ['a stuck input', 'AY-7212', 'unfit', 'spread-beyond-allowed'],
    ['noise chased', 'AY-1204', 'watch', 'spread-beyond-allowed'],
    ['a method change mistaken for drift', 'AY-1201', 'watch', 'bias-reaches-allowed'],
    ['one that nobody sampled for weeks', 'AY-6112', 'unproven', 'reference-overdue'],
    ['a corrected thermocouple', 'TY-1405', 'fit', 'within-allowed'],
  ])('tells the story of %s', (_, tagName, health, code) => {
    expect(of(tagName)).toMatchObject({ life: 'in-service', health });
    expect(of(tagName).codes).toContain(code);
  });

  it('has one suspended, one draft and one first revision that waits', async () => {
    expect(of('AY-1207').life).toBe('suspended');
    expect([of('TY-3305').life, of('AY-8115').life]).toEqual(['draft', 'draft']);
    expect(await count(sql`select count(*) as n from revisions where decision is null`)).toBe(1);
  });

  it('has an ownership gap, an overdue recalibration, and a proposal that waits for a decision', async () => {
    const gaps = await rows(sql`select s.tag_name from duties d join soft_sensors s on s.id = d.soft_sensor_id
      where d.kind = 'ownership-gap' and d.state = 'open'`);
    expect(gaps).toEqual([{ tag_name: 'TY-2405' }]);
    const late = await rows<{
      tag_name: string;
    }>(sql`select s.tag_name from duties d join soft_sensors s on s.id = d.soft_sensor_id
      where d.kind = 'recalibration' and d.state = 'open' and d.due_on < current_date`);
    expect(late.map((row) => row.tag_name)).toContain('AY-6110');
    const waiting =
      await rows(sql`select s.tag_name, c.kind from calibrations c join soft_sensors s on s.id = c.soft_sensor_id
      where c.decision is null`);
    expect(waiting).toEqual([{ tag_name: 'TY-1402', kind: 'bias' }]);
  });

  it('has soft sensors to confirm as found: Fit, with at least 15 references since the last recalibration', () => {
    const ready = [...standing.values()].filter(
      ({ health, referencesSince, life, stopped }) =>
        life === 'in-service' && !stopped && health === 'fit' && referencesSince >= 15,
    );
    expect(ready.length).toBeGreaterThanOrEqual(10);
  });

  it('fitted every regression itself, to the samples of a stated period', async () => {
    const unfitted = await rows(
      sql`select id from revisions where model ->> 'form' = 'regression' and fit is null`,
    );
    expect(unfitted).toEqual([]);
  });

  it('shows half a year of health, worse now than it was', async () => {
    const months = await rows<{ month: string; unfit: number }>(sql`
      select month, sum(unfit)::int as unfit from site_months group by month order by month`);
    expect(months.length).toBeGreaterThanOrEqual(5);
    expect(months.at(-1)!.unfit).toBeGreaterThan(months[0]!.unfit);
    expect(await count(sql`select count(distinct day) as n from health_days`)).toBeGreaterThan(20);
  });

  it('names who may sign in, and nobody who left', async () => {
    const lines = await demoSignIns(server.context);
    expect(lines.join('\n')).toContain(demoPeople.engineer.email);
    expect(lines.join('\n')).not.toContain(demoPeople.formerEngineer.email);
  });

  describe('topped up a day later', () => {
    const before = { readings: 0, samples: 0, newest: 0 };

    const counts = async () => ({
      readings: await count(
        sql`select count(*) as n from readings r join tags t on t.id = r.tag_id where t.kind = 'measured'`,
      ),
      samples: await count(sql`select count(*) as n from samples`),
      newest: await count(sql`select extract(epoch from max(last_at)) * 1000 as n from tag_spans`),
    });

    beforeAll(async () => {
      Object.assign(before, await counts());
      server.now.value = new Date(server.now.value!.getTime() + 24 * hourMs);
      expect(await topUpDemo(server.context)).toBe(true);
      await server.drainJobs();
    }, patience);

    it('has a day of readings and samples more, and each once', async () => {
      const after = await counts();
      const tags = demoUnits
        .filter(({ everyMinuteFromDay }) => !everyMinuteFromDay)
        .flatMap((unit) => unit.instruments).length;
      const byMinute = demoUnits
        .filter(({ everyMinuteFromDay }) => everyMinuteFromDay)
        .flatMap((unit) => unit.instruments).length;
      expect(after.readings - before.readings).toBe(96 * tags + 1440 * byMinute);
      expect(after.newest - before.newest).toBeGreaterThanOrEqual(23.7 * hourMs);
      expect(after.samples - before.samples).toBeGreaterThan(20);
      const twice = await rows(
        sql`select sample_point_id, sample_number from samples group by 1, 2 having count(*) > 1`,
      );
      expect(twice).toEqual([]);
    });

    it('has the estimates and the health of that day', async () => {
      const last = await count(sql`select extract(epoch from t.last_at) * 1000 as n from tag_spans t
        join soft_sensors s on s.estimate_tag_id = t.tag_id where s.tag_name = 'AY-9310'`);
      expect(server.now.value!.getTime() - last).toBeLessThan(hourMs);
      expect((await standings()).get('TY-1402')!.health).toBe('unfit');
    });

    it('adds nothing when it is asked again at once', async () => {
      const now = await counts();
      await topUpDemo(server.context);
      expect(await counts()).toEqual(now);
    });
  });
});

describe('a company without the mark of a whole demo', () => {
  it('is left alone, and its operator told where the demo’s people are there', async () => {
    const { db } = server.context;
    await db.execute(sql`alter table audit_entries disable trigger all`);
    await db.execute(sql`delete from audit_entries where entity = 'demo company'`);
    await db.execute(sql`alter table audit_entries enable trigger all`);
    server.now.value = new Date(server.now.value!.getTime() + 24 * hourMs);
    const before = await count(sql`select count(*) as n from readings`);
    expect(await topUpDemo(server.context)).toBe(false);
    expect(await keepDemoUpToDate(server.context)).toEqual([expect.stringContaining('gets no new readings')]);
    expect(await count(sql`select count(*) as n from readings`)).toBe(before);
  });
});
