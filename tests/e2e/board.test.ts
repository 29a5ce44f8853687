import type { Page } from 'playwright-core';
import { beforeAll, describe, expect, it } from 'vitest';
import { boardLooks } from '../../server/db/schema/index.ts';
import { signInAs, useSite } from '../support/browser.ts';
import { addManySensors } from '../support/many-sensors.ts';
import {
  hour,
  makePlant,
  modelOf,
  type Plant,
  putInService,
  writeInputs,
  writeSamples,
} from '../support/plant.ts';
import { password, serverOn, type TestServer } from '../support/server.ts';

const many = 60;
let server: TestServer;
let plant: Plant;

/** An engineer owns 60 soft sensors with figures that only the pages see, and one with true samples that is fit. */
const site = useSite(async (context) => {
  server = serverOn(context);
  plant = await makePlant(server);
  await writeInputs(plant, 0, 260);
  await writeSamples(
    plant,
    Array.from({ length: 30 }, (_, i) => 5 + 8 * i),
  );
  const ages = { promisedReferenceMs: 900_000 * hour, historyEveryMs: 900_000 * hour };
  const name = 'Free lime';
  const owned = { ownerId: plant.engineer.personId };
  await putInService(plant, modelOf(plant), { name, ...ages, ...owned });
  await server.drainJobs();
  await addManySensors(context, plant.siteId, plant.engineer.personId, many);
});

let page: Page;
beforeAll(async () => {
  page = await site.open();
  await signInAs(site, page, plant.engineer.email, password);
});

const open = async (path: string) => {
  await page.goto(`${site.address}${path}`);
  await page.getByRole('group', { name: 'Soft sensors listed' }).waitFor();
  await page.waitForLoadState('networkidle');
};
const tagsListed = async () =>
  (await page.locator('td a.sensor b').allTextContents()).map((tag) => tag.trim());
const numbered = (...numbers: number[]) => numbers.map((n) => `AY-${900 + n}`);

describe('an engineer with 60 soft sensors', () => {
  it('sees at once what is not fit of theirs, worst first, with the rest counted and folded', async () => {
    await open('/');
    expect(await page.locator('h1').textContent()).toBe(
      '1 of 60 soft sensors can’t be relied on; it is in closed loop.',
    );
    await page.getByRole('button', { name: 'Mine', exact: true }).click();
    await page
      .getByText('You own or are deputy of: 1 unfit, 2 unproven, 3 to watch, 54 fit, 1 stopped.')
      .waitFor();
    expect(await tagsListed()).toEqual(numbered(1, 2, 3, 4, 5, 6));
    await page.getByRole('button', { name: 'Show 54 fit' }).click();
    await page.getByRole('button', { name: 'Show 1 stopped' }).click();
    await page.getByText(/^Unit stopped since /).waitFor();
    await page.getByText('61 soft sensors', { exact: true }).waitFor();
    expect(page.url()).toContain('view=mine');
    expect(page.url()).toContain('fit=1');
  });

  it('narrows the list by class, use and words, which the address keeps', async () => {
    await open('/?use=closed-loop');
    expect(await tagsListed()).toEqual(numbered(1));
    await open('/?class=A&use=display');
    await page.getByText('No match here for class A, display.').waitFor();
    await open('/?find=temperature+42');
    expect(await tagsListed()).toEqual(numbered(42));
  });

  it('tells what changed since they last looked, and what it was before', async () => {
    await open('/');
    expect(await page.getByRole('button', { name: 'Since you last looked' }).isDisabled()).toBe(true);
    const lookedAt = new Date(Date.now() - 3 * hour);
    await server.context.db
      .insert(boardLooks)
      .values({ personId: plant.engineer.personId, lookedAt })
      .onConflictDoUpdate({ target: boardLooks.personId, set: { lookedAt, previousAt: null } });
    await open('/?view=new');
    // The one with true samples came into health when this file began.
    await page.getByText(/Watch since .*, was Fit/).waitFor();
    await page.getByText(/^\d+ soft sensors changed since you looked on /).waitFor();
    expect(await tagsListed()).toContain('AY-904');
    expect(await tagsListed()).not.toContain('AY-901');
  });
});

describe('confirming as found', () => {
  it('lists each with its figures, and does nothing but through that list', async () => {
    await open('/?view=mine');
    await page.getByRole('button', { name: 'Confirm 54 as found…' }).click();
    const dialog = page.getByRole('dialog');
    await dialog
      .getByText(/^bias \+1\.0\s°C ± 3\.0, allowed 10; 20 references since the last recalibration$/)
      .first()
      .waitFor();
    await dialog.getByText(/confirmed by Person \d+ on \d+ \w+\. Nothing is changed\./).waitFor();
    await dialog.getByRole('button', { name: 'Choose none' }).click();
    expect(await dialog.getByRole('button', { name: 'Confirm 0 as found' }).isDisabled()).toBe(true);
    await dialog.getByRole('button', { name: 'Leave it' }).click();
    await dialog.waitFor({ state: 'hidden' });
    expect(await page.getByRole('button', { name: 'Confirm 54 as found…' }).isVisible()).toBe(true);
  });

  it('says which were confirmed, with their records, and why others were refused', async () => {
    await open('/?view=mine&confirm=1');
    const dialog = page.getByRole('dialog');
    await dialog.getByRole('button', { name: 'Choose none' }).click();
    for (const name of [/Free lime/, /AY-907/]) await dialog.getByRole('checkbox', { name }).click();
    await dialog.getByRole('button', { name: 'Confirm 2 as found' }).click();
    await dialog.getByText('1 soft sensor confirmed as found').waitFor();
    const record = dialog.locator('a[href^="/calibrations/"]');
    expect(await record.count()).toBe(1);
    expect(await dialog.locator('li').textContent()).toBe(
      'AY-907: 0 references since the last recalibration; 15 are needed.',
    );
    await dialog.getByRole('button', { name: 'Close' }).last().click();
    await page.getByRole('button', { name: 'Confirm 53 as found…' }).waitFor();
  });
});

describe('the board on A4', () => {
  it('holds headline, months, reasons, strips and everything fit, on a few pages, without navigation or anything cut off', async () => {
    await page.addInitScript(() => {
      // Printing itself opens a dialog of the browser; what would be printed is looked at here.
      window.print = () => document.documentElement.setAttribute('data-printed', 'yes');
    });
    await page.emulateMedia({ colorScheme: 'dark' });
    await open('/');
    await page.getByRole('button', { name: 'Print the board' }).click();
    await page.locator('html[data-printed]').waitFor({ state: 'attached' });
    await page.emulateMedia({ media: 'print', colorScheme: 'dark' });
    // A4 less its margins, at 96 dots an inch.
    await page.setViewportSize({ width: Math.floor(((210 - 28) / 25.4) * 96), height: 1000 });

    const paper = page.locator('article.paper');
    const words = (await paper.textContent())!.replaceAll(/\s+/g, ' ');
    for (const said of [
      '1 of 60 soft sensors can’t be relied on; it is in closed loop.',
      'Unfit and unproven, by month',
      'Reads 16.0 °C high',
      'unit stopped since',
      'never for a trip, an interlock, relief or a permit',
      'Approved means reviewed by a second person, not true',
    ])
      expect(words.replaceAll('\u00a0', ' ')).toContain(said);
    expect(await paper.locator('tbody .error-strip').count()).toBe(6);
    expect(await paper.locator('ul.fit li').count()).toBe(54);

    expect(await page.getByRole('button').locator('visible=true').count()).toBe(0);
    expect(await page.getByRole('navigation').locator('visible=true').count()).toBe(0);
    const shown = await page.evaluate(() => {
      const { clientWidth, scrollWidth } = document.documentElement;
      const article = document.querySelector('article.paper')!;
      const wider = [...article.querySelectorAll('*')].filter(
        (part) => part.getBoundingClientRect().right > clientWidth + 1,
      );
      return {
        over: scrollWidth - clientWidth,
        wider: wider.map((part) => part.outerHTML.slice(0, 80)),
        ink: getComputedStyle(article).color,
        kept: [...article.querySelectorAll('tbody, li')].every(
          (part) => getComputedStyle(part).breakInside === 'avoid',
        ),
      };
    });
    // Ink as in the light theme, though the screen is dark.
    expect(shown).toEqual({ over: 0, wider: [], ink: 'rgb(34, 40, 43)', kept: true });

    const pdf = (await page.pdf({ preferCSSPageSize: true })).toString('latin1');
    const pages = pdf.match(/\/Type\s*\/Page[^s]/g)!.length;
    expect(pages).toBeGreaterThanOrEqual(2);
    expect(pages).toBeLessThanOrEqual(3);
    const sizes = [...pdf.matchAll(/\/MediaBox\s*\[0 0 ([\d.]+) ([\d.]+)\]/g)];
    // ISO 216: 210 mm × 297 mm, in points of 1/72 inch.
    for (const [, width, height] of sizes) {
      expect(Number(width)).toBeCloseTo((210 / 25.4) * 72, -0.5);
      expect(Number(height)).toBeCloseTo((297 / 25.4) * 72, -0.5);
    }
    expect(sizes.length).toBeGreaterThan(0);
  });
});
