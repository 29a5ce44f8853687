import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import type { Page } from 'playwright-core';
import { beforeAll, describe, expect, it } from 'vitest';
import { demoPassword } from '../../seeds/company.ts';
import { seedDemo } from '../../seeds/demo.ts';
import { signInAs, useSite } from '../support/browser.ts';

const axe = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');
const site = useSite((context) => seedDemo(context, { dailyDays: 3 }));

/** Pages of the demo, as the person who works with each. */
const screens: [who: string, path: string][] = [
  ['manager', '/'],
  ['manager', '/register'],
  ['engineer', '/register/new'],
  ['engineer', '/register/1'],
  ['engineer', '/register/1/model'],
  ['engineer', '/register/1/replays'],
  ['engineer', '/register/1/samples'],
  ['technician', '/register/TY-1402/events'],
  ['technician', '/register/TY-1402/events?record=1'],
  ['engineer', '/register/TY-1402/recalibration'],
  ['manager', '/calibrations/waiting'],
  ['engineer', '/?view=mine&stopped=1'],
  ['engineer', '/?confirm=1'],
  ['manager', '/?class=A&use=closed-loop&fit=1'],
  ['engineer', '/sites/1/events'],
  ['engineer', '/sites/1/events?add=1'],
  ['engineer', '/register/1/sheet'],
  ['manager', '/register/1/changes'],
  ['engineer', '/register/1/sheet?edit=1'],
  ['engineer', '/duties'],
  ['manager', '/duties?whose=sites'],
  ['manager', '/duties?whose=sites&state=closed'],
  ['technician', '/samples'],
  ['technician', '/samples/points'],
  ['engineer', '/history'],
  ['administrator', '/administration/people'],
  ['administrator', '/administration/sites'],
  ['administrator', '/administration/sites/1/units'],
  ['engineer', '/administration/sites/1/tags'],
  ['administrator', '/administration/mail'],
  ['administrator', '/audit'],
  ['nobody', '/sign-in'],
  ['nobody', '/set-password'],
];

type Mode = 'wide and light' | 'narrow and dark';
const opened = new Map<string, Promise<Page>>();

/** One page for each person and mode, signed in once. */
function pageOf(who: string, mode: Mode): Promise<Page> {
  const key = `${who}, ${mode}`;
  const known = opened.get(key);
  if (known) return known;
  const made = openPage(who, mode);
  opened.set(key, made);
  return made;
}

async function openPage(who: string, mode: Mode): Promise<Page> {
  const page = await site.open(mode === 'narrow and dark' ? { width: 390, height: 844, dark: true } : {});
  if (who !== 'nobody') await signInAs(site, page, `${who}@cupel.example`, demoPassword);
  return page;
}

/** Ids of the demo are not known beforehand: a tag stands for its soft sensor. */
async function addressOf(path: string): Promise<string> {
  const one = async (query: string) => String((await site.context.pool.query(query)).rows[0].id);
  const sensor = `select id from soft_sensors where tag_name = 'TY-1402'`;
  if (path.includes('TY-1402')) return path.replace('TY-1402', await one(sensor));
  const waiting = `select id from calibrations where decision is null and soft_sensor_id = (${sensor})`;
  return path.includes('waiting') ? path.replace('waiting', await one(waiting)) : path;
}

async function show(who: string, path: string, mode: Mode): Promise<Page> {
  const page = await pageOf(who, mode);
  await page.goto(`${site.address}${await addressOf(path)}`);
  await page.locator('h1').first().waitFor();
  await page.waitForLoadState('networkidle');
  return page;
}

async function violations(page: Page): Promise<string[]> {
  // Run in the page's own world by the debugger, which the Content-Security-Policy does not reach.
  await page.evaluate(axe);
  const found = await page.evaluate(async () => {
    const { violations: all } = await (
      window as unknown as { axe: { run(): Promise<{ violations: Violation[] }> } }
    ).axe.run();
    return all.map(({ id, nodes }) => `${id}: ${nodes.map(({ html }) => html.slice(0, 120)).join(' | ')}`);
    interface Violation {
      id: string;
      nodes: { html: string }[];
    }
  });
  return found;
}

describe('every screen', () => {
  beforeAll(async () => {
    // Judged before it is looked at: the board shows figures only once the jobs that the demo queued are done.
    const deadline = Date.now() + 60_000;
    for (;;) {
      const left = await site.context.pool.query(
        `select count(*)::int as count from graphile_worker._private_jobs where attempts < max_attempts`,
      );
      if (left.rows[0].count === 0) return;
      if (Date.now() > deadline) throw new Error('the jobs of the demo did not end');
      await site.context.pool.query('select pg_sleep(0.2)');
    }
  });

  // Both at once: the browser draws them on two cores.
  it.each(screens)(
    'can be used by everybody, wide and on a phone in the dark: %s at %s',
    async (who, path) => {
      const [wide, narrow] = await Promise.all([
        show(who, path, 'wide and light').then(violations),
        show(who, path, 'narrow and dark').then(async (page) => {
          const wider = await page.evaluate(
            () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
          );
          return { wider, found: await violations(page) };
        }),
      ]);
      expect({ wide, ...narrow }, 'violations, and pixels that stand out to the right').toEqual({
        wide: [],
        wider: 0,
        found: [],
      });
    },
  );
});
