import type { Context } from '../../server/context.ts';
import { findActor, findPersonByEmail } from '../../server/features/people/repo.ts';
import type { By } from '../../server/features/register/service.ts';
import type { SiteRow } from '../../server/http/rows.ts';
import { type DemoSite, type PersonKey, demoPeople, demoSites } from '../company.ts';

export const dayMs = 86_400_000;

/** One of the demo's sites with what has been put into it, by name. */
export interface SiteScene {
  name: DemoSite;
  row: SiteRow;
  startMs: number;
  /** Now, as the demo is put in. */
  nowMs: number;
  /** How many of the last days are judged each; before them one day a week is. */
  dailyDays: number;
  units: Map<string, number>;
  tags: Map<string, number>;
  sensors: Map<string, { siteId: number; softSensorId: number }>;
}

/** The same context at another time: what services do then is dated then. */
export const atTime = (context: Context, ms: number): Context => ({ ...context, clock: () => new Date(ms) });

/** A day since the beginning at an hour of local standard time. */
export const instantOf = (site: Pick<SiteScene, 'name' | 'startMs'>, day: number, hour = 9): number =>
  site.startMs + day * dayMs + (hour - hoursAheadOf(site.name)) * 3_600_000;

export const hoursAheadOf = (name: DemoSite): number =>
  demoSites.find((site) => site.name === name)!.hoursAhead;

/** A person of the demo as services know who acts. */
export async function personOf(context: Context, key: PersonKey): Promise<By> {
  const person = await findPersonByEmail(context.db, demoPeople[key].email);
  const actor = await findActor(context.db, person!.id);
  return { actor: actor!, origin: { requestId: 'demo', fromAddress: '' } };
}
