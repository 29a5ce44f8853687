import { sql } from 'drizzle-orm';
import type { Context } from '../server/context.ts';
import { findPersonByEmail } from '../server/features/people/repo.ts';
import { demoPassword, demoPeople, demoSites, technicianOf } from './company.ts';
import { leaveMark } from './registry/mark.ts';
import { addPeople } from './registry/people.ts';
import { addPlaces } from './registry/place.ts';
import { addReadings } from './registry/readings.ts';
import { addLaboratory, addSamples } from './registry/samples.ts';
import { type SiteScene, atTime, dayMs, instantOf, personOf } from './registry/scene.ts';
import { bringIntoService, register } from './registry/sensors.ts';
import { liveThrough } from './registry/timeline.ts';
import { simulate } from './simulation/simulate.ts';
import type { DemoUnit } from './simulation/unit.ts';
import { stories } from './stories.ts';
import { demoUnits } from './units.ts';

export { keepDemoUpToDate, topUpDemo } from './top-up.ts';

export const seed = 11;
export const historyDays = 182;

/**
 * Fills an empty database with the demo company and half a year of its history. Every figure is computed by the product:
 * health once a week, and on each of the last `dailyDays` days.
 */
export async function seedDemo(context: Context, { dailyDays = 30 } = {}): Promise<void> {
  const nowMs = context.clock().getTime();
  const startMs = Math.floor(nowMs / dayMs - historyDays) * dayMs;
  const rows = await addPeople(context, new Date(startMs));
  const sites = demoSites.map(({ name }): SiteScene => ({
    name,
    row: rows.get(name)!,
    startMs,
    nowMs,
    dailyDays,
    units: new Map(),
    tags: new Map(),
    sensors: new Map(),
  }));
  await Promise.all(sites.map((site) => seedSite(context, site)));
  const siteIds = Object.fromEntries(sites.map(({ name, row }) => [name, row.id]));
  await leaveMark(context, { seed, startMs, siteIds });
}

async function seedSite(context: Context, site: SiteScene): Promise<void> {
  const units = demoUnits.filter((unit) => unit.site === site.name);
  const engineer = await personOf(context, 'engineer');
  await addPlaces(atTime(context, instantOf(site, 0)), engineer, site, units);
  const technician = await personOf(context, technicianOf[site.name]);
  for (const unit of units) await seedUnit(context, site, unit, technician.actor.id);
  const sensors = units.flatMap((unit) => unit.sensors);
  for (const sensor of sensors) await bringIntoService(context, site, sensor);
  // Without figures on what was just put in, each judging would read all samples to find the few new ones (measured).
  await context.db.execute(sql`analyze samples, pairs`);
  await liveThrough(context, site, stories[site.name]);
}

async function seedUnit(
  context: Context,
  site: SiteScene,
  unit: DemoUnit,
  technicianId: number,
): Promise<void> {
  const { hoursAhead } = demoSites.find(({ name }) => name === site.name)!;
  const { startMs, nowMs: untilMs } = site;
  const history = await simulate(unit, { seed, startMs, untilMs, hoursAhead });
  const laboratory = await addLaboratory(context, site.row.id, site.units.get(unit.name)!, unit);
  for (const sensor of unit.sensors) {
    const { tagName } = sensor.sheet;
    await register(context, site, unit.name, sensor, laboratory.get(tagName)!);
    await addSamples(context, site.row.id, technicianId, sensor, history.samples.get(tagName)!);
  }
  await addReadings(context, site.row.id, site.tags, history.readings);
}

/** Lines that tell a newcomer how to sign in; none where the demo's people were not put in or have gone. */
export async function demoSignIns(context: Context): Promise<string[]> {
  const present = await Promise.all(
    Object.values(demoPeople).map(async (person) =>
      (await findPersonByEmail(context.db, person.email)) ? person : null,
    ),
  );
  const named = present.filter((person) => person !== null && person.says !== '');
  if (named.length === 0) return [];
  return [
    `Sign in with the password "${demoPassword}" as one of the demo's people:`,
    ...named.map((person) => `  ${person!.email.padEnd(28)} ${person!.name}, ${person!.says}`),
  ];
}
