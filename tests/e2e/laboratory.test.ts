import type { Page } from 'playwright-core';
import { beforeAll, describe, expect, it } from 'vitest';
import { signInAs, useSite } from '../support/browser.ts';
import { password, serverOn } from '../support/server.ts';
import { makeStanding, type Standing, v1 } from '../support/standing-samples.ts';

let scene: Standing;
let decided: number;
let asked: number;

const site = useSite(async (context) => {
  scene = await makeStanding(serverOn(context));
  decided = await scene.addSample();
  await scene.decideOn(decided);
  asked = await scene.addSample({ value: 1534 });
  await scene.engineer.post(v1(`/samples/${asked}/retest`)).send({ reason: 'Far from the others' });
});

let page: Page;
beforeAll(async () => {
  page = await site.open({ width: 390, height: 844 });
  await signInAs(site, page, scene.lab.technician.email, password);
});

const headline = () => page.locator('h1').textContent();

describe('a technician with a sample that stands', () => {
  it('corrects it with a reason, and sees what was decided on the old value', async () => {
    await page.goto(`${site.address}/samples/${decided}`);
    await page.getByRole('button', { name: 'Correct it' }).click();
    await page.getByText('1 recalibration was judged on this sample.').waitFor();
    await page.getByLabel('Value', { exact: true }).fill('1482,5');
    await page.getByRole('button', { name: 'Save the correction' }).click();
    await page.getByText('Write why it is corrected.').waitFor();
    await page.getByLabel('Why it is corrected').fill('Read off wrongly');
    await page.getByRole('button', { name: 'Save the correction' }).click();
    await expect.poll(headline).toContain('1482,5');
    await page.getByText('1, no longer stands').waitFor();
  });

  it('answers a re-test with a second result', async () => {
    await page.goto(`${site.address}/samples/${asked}`);
    await page.getByRole('button', { name: 'Answer the re-test' }).click();
    await page.getByText('Yes: a second result').click();
    await page.getByRole('textbox', { name: 'Second result' }).fill('1486');
    await page.getByRole('button', { name: 'Send the answer' }).click();
    await expect.poll(headline).toContain('1486');
    await page.getByText(/^Tove Halbrook answered on .*: a second result, 1486.°C\.$/).waitFor();
  });
});

describe('a technician with a check standard', () => {
  it('adds one, types results with decimal commas and reads how precise the laboratory is', async () => {
    await page.goto(`${site.address}/samples/points?precision=${scene.lab.methodId}`);
    await page.getByRole('button', { name: 'Add a check standard' }).click();
    await page.getByLabel('Name', { exact: true }).fill('Gold point');
    await page.getByLabel('Accepted value').fill('1064,2');
    await page.getByRole('button', { name: 'Add the check standard' }).click();
    const standard = page.locator('.standard', { hasText: 'Gold point' });
    await standard.getByRole('button', { name: 'Add results' }).click();
    await standard.getByLabel(/^Results in/).fill('1064,1\n1064,5\n1063,9\n1064,4\n1064,0\n1064,6\n1064,2');
    await standard.getByRole('button', { name: 'Add the results' }).click();
    // By hand: sum of squares 0.4171 over 6, so s = 0.2637 and r = 0.73.
    await standard.getByText(/^0\.73.°C \(95 % interval .*6 degrees of freedom$/).waitFor();
    await standard.getByText('Not known yet: 1 series of at least 7.').first().waitFor();
  });
});
