import { simpleParser } from 'mailparser';
import type { Page } from 'playwright-core';
import { describe, expect, it, vi } from 'vitest';
import { localMails } from '../../server/db/schema/index.ts';
import { remind } from '../../server/features/duties/remind.ts';
import { signInAs, useSite } from '../support/browser.ts';
import {
  get,
  hour,
  makePlant,
  modelOf,
  type Plant,
  putInService,
  writeInputs,
  writeSamples,
} from '../support/plant.ts';
import { password, serverOn, type TestServer } from '../support/server.ts';

// From noon on: a digest goes out in the morning after, whenever the test runs.
let shift = new Date().setUTCHours(12, 0, 0, 0) - Date.now();
let server: TestServer;
let plant: Plant;
let softSensorId: number;

const site = useSite(
  async (context) => {
    server = serverOn(context);
    plant = await makePlant(server);
    await writeInputs(plant, 0, 260);
    await writeSamples(
      plant,
      Array.from({ length: 30 }, (_, i) => 5 + 8 * i),
    );
    const sensor = await putInService(plant, modelOf(plant, 6.4), { promisedReferenceMs: 9000 * hour });
    softSensorId = sensor.id;
    await server.drainJobs();
  },
  () => new Date(Date.now() + shift),
);

/** The HTML of the digest that the mail server took in for somebody; the site's own workers send it. */
async function digestTo(email: string): Promise<string> {
  const rows = await server.context.db.select().from(localMails);
  const letters = await Promise.all(rows.map(({ raw }) => simpleParser(raw)));
  const found = letters.find(({ to, html }) => JSON.stringify(to).includes(email) && html);
  if (!found) throw new Error(`no digest came to ${email}`);
  return String(found.html);
}

/** Counts what a person presses. */
function presses(page: Page) {
  const counted = { clicks: 0 };
  const press = async (role: 'button' | 'link' | 'radio', name: string | RegExp) => {
    counted.clicks += 1;
    await page.getByRole(role, { name }).first().click();
  };
  return { counted, press };
}

describe('a recalibration in the browser', () => {
  it('is proposed on its evidence, and a reason is asked for where it is missing', async () => {
    const page = await site.open();
    await signInAs(site, page, plant.engineer.email, password);
    await page.goto(`${site.address}/register/${softSensorId}/recalibration`);
    await page.getByText(/^Bias correction: set it to −1\.\d+.%\. On \d+ later samples/).waitFor();
    await page.getByRole('button', { name: /^Propose bias correction/ }).click();
    await page.getByText('Write a reason.').waitFor();
    await page.getByLabel('Reason').fill('Reads high since the feed changed');
    await page.getByRole('button', { name: /^Propose bias correction/ }).click();
    await page.waitForURL(/\/calibrations\/\d+$/);
    await page.getByText('You proposed it, so somebody else decides').waitFor();
  });

  it('goes from the reminder in the mailbox to a decision in under ten clicks', async () => {
    await remind(server.context);
    shift += 24 * hour;
    await remind(server.context);
    const letter = await vi.waitFor(() => digestTo(plant.manager.email), { timeout: 10_000 });
    const page = await site.open();
    // The mail as a mail program shows it: a page of its own, its links leading to the application.
    const shown = letter.replaceAll('http://127.0.0.1:4600', site.address);
    await page.setContent(shown);
    const { counted, press } = presses(page);
    await press('link', /recalibration/i);
    await page.getByLabel('E-mail address').fill(plant.manager.email);
    await page.getByLabel('Password').fill(password);
    await press('button', 'Sign in');
    await page.getByText('Waits for a decision').first().waitFor();
    await press('button', /^Approve$/);
    await page
      .getByText(/^Approved by /)
      .first()
      .waitFor();
    expect(counted.clicks).toBeLessThan(10);
    const { correction } = await get(plant.engineer, `/soft-sensors/${softSensorId}`);
    expect(correction.offset).toBeCloseTo(-1.4, 1);
  });

  it('prints its record on A4 without cutting anything off', async () => {
    const page = await site.open();
    await signInAs(site, page, plant.manager.email, password);
    await page.goto(`${site.address}/calibrations/1`);
    await page.getByRole('heading', { name: 'As left' }).waitFor();
    await page.emulateMedia({ media: 'print' });
    await page.setViewportSize({ width: 680, height: 960 });
    const wide = await page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth);
    expect(wide).toBeLessThanOrEqual(0);
    expect(await page.getByRole('button', { name: 'Print the record' }).isVisible()).toBe(false);
    const pdf = (await page.pdf({ format: 'A4' })).toString('latin1');
    const pages = pdf.match(/\/Type\s*\/Page[^s]/g)!.length;
    expect(pages).toBeGreaterThanOrEqual(1);
    expect(pages).toBeLessThanOrEqual(4);
  });
});
