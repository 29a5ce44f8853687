import type { Context } from '../../server/context.ts';
import { judgeNow } from '../../server/features/judging/service.ts';
import type { Happening } from '../stories.ts';
import { demoUnits } from '../units.ts';
import { type SiteScene, atTime, dayMs, instantOf } from './scene.ts';
import { birthdayOf, trainingDays } from './sensors.ts';

/** First day on which anything is judged. */
const judgedFromDay = trainingDays + 3;
const judgedAtHour = 20;

/** Lives through half a year at a site: what people did, and between it the judging, each at its own time and in order. */
export async function liveThrough(
  context: Context,
  site: SiteScene,
  happenings: readonly Happening[],
): Promise<void> {
  const done = happenings.map(({ day, hour, act }) => ({
    ms: instantOf(site, day, hour),
    run: (then: Context) => act(then, site),
  }));
  const judged = judgingTimes(site).map((ms) => ({ ms, run: (then: Context) => judgeSite(then, site) }));
  const all = [...done, ...judged].filter(({ ms }) => ms <= site.nowMs).sort((a, b) => a.ms - b.ms);
  for (const { ms, run } of all) await run(atTime(context, ms));
}

function judgingTimes(site: SiteScene): number[] {
  const times: number[] = [];
  const dailyFromMs = site.nowMs - site.dailyDays * dayMs;
  for (let day = judgedFromDay; instantOf(site, day, judgedAtHour) < site.nowMs;) {
    const ms = instantOf(site, day, judgedAtHour);
    times.push(ms);
    day += ms < dailyFromMs ? 7 : 1;
  }
  return [...times, site.nowMs];
}

async function judgeSite(context: Context, site: SiteScene): Promise<void> {
  const day = (context.clock().getTime() - site.startMs) / dayMs;
  for (const { sheet, life, ...demo } of demoUnits.flatMap((unit) => unit.sensors)) {
    const key = site.sensors.get(sheet.tagName);
    const begun = birthdayOf({ sheet, life, ...demo }) + 5;
    if (key && (life === 'in-service' || life === 'suspended') && day >= begun) await judgeNow(context, key);
  }
}
