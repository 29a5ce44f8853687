import { and, eq, inArray, sql } from 'drizzle-orm';
import type { Context } from '../server/context.ts';
import { tags, tagSpans } from '../server/db/schema/index.ts';
import { findPersonByEmail } from '../server/features/people/repo.ts';
import { demoPeople, technicianOf } from './company.ts';
import { type DemoMark, findMark } from './registry/mark.ts';
import { addReadings } from './registry/readings.ts';
import { addSamples } from './registry/samples.ts';
import { hoursAheadOf } from './registry/scene.ts';
import { simulate } from './simulation/simulate.ts';
import type { DemoUnit } from './simulation/unit.ts';
import { demoUnits } from './units.ts';

/** Nothing new is to be expected sooner. */
const shortestGapMs = 15 * 60_000;
/** The server answers its first visitors before the simulation runs. */
const afterStartMs = 2000;
const everyMs = 3_600_000;

/**
 * Tops the demo up now and every hour, beside whatever else the server does. Returns what its operator should know: that
 * what is there can't be gone on with.
 */
export async function keepDemoUpToDate(context: Context): Promise<string[]> {
  if (!(await findMark(context))) {
    const known = await findPersonByEmail(context.db, demoPeople.administrator.email);
    return known ? [cannotGoOn] : [];
  }
  const topUp = () =>
    void topUpDemo(context).catch((error: unknown) => {
      if (!context.pool.ending) context.log.warn({ err: error }, 'the demo could not be brought up to date');
    });
  setTimeout(topUp, afterStartMs).unref();
  setInterval(topUp, everyMs).unref();
  return [];
}

const cannotGoOn =
  'The example company here is of an earlier version, or its first start was interrupted, so it gets no new readings. ' +
  'For a fresh one stop Cupel, remove its data folder and start again.';

/**
 * Brings the demo's readings and samples up to now: the simulation runs again from its first day, and what is newer than
 * the last stored reading of a unit is added. Only a demo that this program put in is touched; false where there is none.
 */
export async function topUpDemo(context: Context): Promise<boolean> {
  const mark = await findMark(context);
  if (!mark) return false;
  for (const unit of demoUnits) await topUpUnit(context, mark, unit);
  return true;
}

async function topUpUnit(context: Context, mark: DemoMark, unit: DemoUnit): Promise<void> {
  const siteId = mark.siteIds[unit.site]!;
  const untilMs = context.clock().getTime();
  const { ids, lastMs } = await tagsOf(context, siteId, unit);
  if (untilMs - lastMs < shortestGapMs) return;
  const history = await simulate(unit, {
    seed: mark.seed,
    startMs: mark.startMs,
    untilMs,
    hoursAhead: hoursAheadOf(unit.site),
    keepFromMs: lastMs + 1,
  });
  await addReadings(context, siteId, ids, history.readings);
  const technician = await findPersonByEmail(context.db, demoPeople[technicianOf[unit.site]].email);
  if (!technician) return;
  for (const sensor of unit.sensors) {
    const results = history.samples.get(sensor.sheet.tagName)!;
    await addSamples(context, siteId, technician.id, sensor, results);
  }
}

/** The unit's tags that are there still, and the last instant that any of them has a reading of. */
async function tagsOf(context: Context, siteId: number, unit: DemoUnit) {
  const external = unit.sensors.filter((sensor) => 'external' in sensor.estimate);
  const names = [...unit.instruments.map(({ tag }) => tag), ...external.map(({ sheet }) => sheet.tagName)];
  const rows = await context.db
    .select({ id: tags.id, name: tags.name, last: sql<string | null>`${tagSpans.lastAt}` })
    .from(tags)
    .leftJoin(tagSpans, and(eq(tagSpans.siteId, tags.siteId), eq(tagSpans.tagId, tags.id)))
    .where(and(eq(tags.siteId, siteId), inArray(tags.name, names)));
  return {
    ids: new Map(rows.map(({ name, id }) => [name, id])),
    lastMs: Math.max(0, ...rows.map(({ last }) => (last ? new Date(last).getTime() : 0))),
  };
}
