import path from 'node:path';
import type { Page } from 'playwright-core';
import { describe, expect, it } from 'vitest';
import { hashPassword } from '../../server/auth/password.ts';
import { persons, siteRoles, sites } from '../../server/db/schema/index.ts';
import { signInAs, useSite } from '../support/browser.ts';
import { plantData, withoutData } from '../support/plant-data.ts';

// Open data: gas turbine emissions (UCI Machine Learning Repository 551, CC BY 4.0); the figures expected at the end are
// those of its baseline.json, recipes `ols` and `ols_bias_ewma_0.3`, computed independently.
const folder = plantData('gas_turbine_nox');
const inputs = ['AT', 'AP', 'AH', 'AFDP', 'GTEP', 'TIT', 'TAT', 'TEY', 'CDP'];
const email = 'turbine.engineer@cupel.example';
const password = 'a long enough password';

const site = useSite(async ({ db }) => {
  const [made] = await db.insert(sites).values({ name: 'Turbine hall', zone: 'UTC' }).returning();
  const [person] = await db
    .insert(persons)
    .values({ name: 'Turbine Engineer', email, passwordHash: await hashPassword(password) })
    .returning();
  await db.insert(siteRoles).values({ personId: person!.id, siteId: made!.id, role: 'engineer' });
});

async function choose(page: Page, label: string, option: string | RegExp): Promise<void> {
  await page.getByLabel(label, { exact: true }).click();
  await page.getByRole('option', { name: option }).first().click();
}

const press = (page: Page, name: string | RegExp) => page.getByRole('button', { name, exact: true }).click();

async function makeUnitAndTags(page: Page): Promise<void> {
  await page.goto(`${site.address}/administration/sites/1/units`);
  await page.getByRole('button', { name: 'Add an area' }).first().click();
  await page.getByLabel('Name', { exact: true }).fill('Power');
  await press(page, 'Add the area');
  await page.getByLabel('Add a unit to Power').click();
  await page.getByLabel('Name', { exact: true }).fill('Gas turbine 1');
  await press(page, 'Add the unit');
  await page.getByText('Gas turbine 1').first().waitFor();
  await page.goto(`${site.address}/administration/sites/1/tags`);
  await page.getByRole('button', { name: 'Add tags' }).first().click();
  await page.getByText('A list from a spreadsheet').click();
  await page.getByLabel('Lines as copied').fill(inputs.map((name) => `${name}\tInput ${name}\t-`).join('\n'));
  await press(page, /^Add 9 tags/);
  await page.getByRole('cell', { name: 'CDP', exact: true }).first().waitFor();
}

async function importHistory(page: Page): Promise<void> {
  await page.goto(`${site.address}/history`);
  await page.getByRole('button', { name: 'Add a file' }).first().click();
  await page.locator('input[type=file]').setInputFiles(path.join(folder, 'history.csv'));
  await page.waitForURL(/\/history\/\d+/);
  await page
    .getByRole('button', { name: /^(Import|Add)/ })
    .first()
    .click();
  await page.getByRole('heading', { level: 1, name: /330,597/ }).waitFor({ timeout: 90_000 });
}

async function register(page: Page): Promise<void> {
  await page.goto(`${site.address}/register/new`);
  await page.getByLabel('Tag', { exact: true }).fill('AY-NOX');
  await page.getByLabel('Name', { exact: true }).fill('Stack nitrogen oxides');
  await page.getByLabel('Quantity', { exact: true }).fill('concentration');
  await page.getByLabel('Engineering unit', { exact: true }).fill('mg/m³');
  await page.getByLabel('Decimals shown', { exact: true }).fill('3');
  await choose(page, 'Unit of plant', /Gas turbine 1/);
  await page.getByRole('button', { name: /^Add a sample point/ }).click();
  await page.getByLabel(/name/i).last().fill('Stack');
  await page.getByRole('button', { name: /^Add (it|the sample point)/ }).click();
  await page.getByLabel('Allowed error', { exact: true }).fill('5');
  // Hourly data: judging single moments by steadiness makes no sense.
  await page.getByText('How samples pair with the estimate').click();
  await page.getByRole('switch', { name: /steady/i }).click();
  await press(page, 'Register it, then write its model');
  await page.waitForURL(/\/register\/\d+/);
}

async function uploadSamples(page: Page): Promise<void> {
  await page.goto(`${site.address}/samples`);
  await page.getByRole('button', { name: 'Add samples' }).first().click();
  await page.locator('input[type=file]').setInputFiles(path.join(folder, 'lab.csv'));
  await page.waitForURL(/\/samples\/imports\/\d+/);
  await page.getByLabel('Unit of every value').fill('mg/m³');
  await press(page, 'See what becomes of each row');
  await page.getByRole('button', { name: 'Add 1,531 samples' }).first().click();
  await page.getByRole('heading', { level: 1, name: /1,531/ }).waitFor();
  await page.getByText(/added/).first().waitFor();
}

async function writeAndFitModel(page: Page, sheet: string): Promise<void> {
  await page.goto(`${sheet}/model`);
  for (const input of inputs) await choose(page, 'Add an input', new RegExp(`^${input}\\b`));
  await page.getByLabel('Computed every', { exact: true }).fill('1');
  await choose(page, 'Unit of computed every', 'hours');
  await page.getByLabel('A reading holds for', { exact: true }).fill('1');
  await choose(page, 'Unit of a reading holds for', 'hours');
  await page.getByLabel('Samples from', { exact: true }).fill('2011-01-01');
  await page.getByLabel('to', { exact: true }).fill('2013-12-31');
  await page.getByRole('button', { name: /fit/i }).first().click();
  await page.getByText('What the fit found').waitFor({ timeout: 60_000 });
}

async function replayDraft(page: Page, sheet: string): Promise<void> {
  await page.goto(`${sheet}/replays`);
  await page.getByText(/draft/i).first().waitFor();
  await page.getByLabel('From', { exact: true }).fill('2011-01-01');
  await page.getByLabel('To', { exact: true }).fill('2015-12-31');
  await page.getByLabel('Judged from', { exact: true }).fill('2014-01-01');
  await page.getByLabel('Update factor', { exact: true }).fill('0.3');
  await press(page, 'Replay it');
  await page.waitForURL(/\/replays\/\d+/);
}

describe.skipIf(withoutData('gas_turbine_nox'))(
  'in the browser (skipped where ../shared/data is absent)',
  () => {
    it('an engineer goes from two CSV files to how wrong the estimate is', async () => {
      const page = await site.open();
      await signInAs(site, page, email, password);
      await makeUnitAndTags(page);
      await importHistory(page);
      await register(page);
      const sheet = /.*\/register\/\d+/.exec(page.url())![0];
      await uploadSamples(page);
      await writeAndFitModel(page, sheet);
      await replayDraft(page, sheet);
      const figures = page.getByRole('table').filter({ hasText: 'Holding the last result' });
      await figures.getByText('8.4674').waitFor({ timeout: 60_000 });
      const words = await figures.innerText();
      expect(words).toContain('+0.9401');
      expect(words).toContain('6.9716');
    }, 240_000);
  },
);
