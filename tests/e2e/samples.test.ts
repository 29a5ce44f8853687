import type { Page } from 'playwright-core';
import { beforeAll, describe, expect, it } from 'vitest';
import { softSensorStatus } from '../../server/db/schema/index.ts';
import { signInAs, useSite } from '../support/browser.ts';
import { type Laboratory, makeLaboratory } from '../support/laboratory.ts';
import { password, serverOn, type TestServer } from '../support/server.ts';

let server: TestServer;
let lab: Laboratory;

const site = useSite(async (context) => {
  server = serverOn(context);
  lab = await makeLaboratory(server);
  await context.db.update(softSensorStatus).set({ inService: true });
});

let page: Page;
beforeAll(async () => {
  page = await site.open({ width: 390, height: 844 });
  await signInAs(site, page, lab.technician.email, password);
});

/** As a balance exports it, with a title, units below the header, a total, and three rows that can't go in as they are. */
const file = `Weekly export;;;;
Probe no.;Taken;Reading;Unit;Point
;;°C;;
KX-1;28.11.2026 06:00;1482,5;°C;Tarnby
KX-2;28.11.2026 14:00;14 82;°C;Tarnby
KX-3;28.11.2026 22:00;1479,5;°C;Crown 9
KX-4;29.11.2026 06:00;1480,5;°C;Crown 9
KX-5;29.11.2026 14:00;spilt;°C;Tarnby
Mean;;1480,8;;`;

const headline = () => page.locator('h1').textContent();
const card = (number: string) => page.locator('.row-card', { hasText: number });

describe('a technician with an export on a phone', () => {
  it('sees what becomes of it as a sentence, and the refused rows first, each open to be mended', async () => {
    await page.goto(`${site.address}/samples?add=1`);
    await page.locator('input[type=file]').setInputFiles({
      name: 'furnace-wk48.csv',
      mimeType: 'text/csv',
      buffer: Buffer.from(file),
    });
    await page.waitForURL(/\/samples\/imports\/\d+/);
    await expect.poll(headline).toBe('7 rows: 1 will be added, 2 skipped, 4 refused.');
    expect(await page.locator('.row-card').first().textContent()).toContain('KX-2');
  });

  it('mends a value on the spot', async () => {
    await card('KX-2').getByLabel('Value').fill('1482');
    await card('KX-2').getByRole('button', { name: 'Mend this row' }).click();
    await expect.poll(headline).toBe('7 rows: 2 will be added, 2 skipped, 3 refused.');
  });

  it('says once what an unknown point is, for every row and file that names it so', async () => {
    await card('KX-3').getByLabel('Crown 9 is').click();
    await page.getByRole('option', { name: 'Tarnby', exact: true }).click();
    await card('KX-3').getByRole('button', { name: 'Mend this row' }).click();
    await expect.poll(headline).toBe('7 rows: 4 will be added, 2 skipped, 1 refused.');
  });

  it('leaves out what can’t be saved, adds the rest and is told what came of it', async () => {
    await card('KX-5').getByRole('button', { name: 'Leave it out' }).click();
    await expect.poll(headline).toBe('7 rows: 4 will be added, 3 skipped.');
    await page.getByRole('button', { name: 'Add 4 samples' }).click();
    await expect.poll(headline).toBe('7 rows: 4 added, 3 skipped.');
    await server.drainJobs();
    await page.getByText(/^(No health changed at 1 soft sensor|1 soft sensor changed health)\./).waitFor();
  });

  it('finds the next file of the kind known', async () => {
    await page.goto(`${site.address}/samples?add=1`);
    await page.locator('input[type=file]').setInputFiles({
      name: 'furnace-wk49.csv',
      mimeType: 'text/csv',
      buffer: Buffer.from(file.replaceAll('KX-', 'KY-')),
    });
    await page.getByText('Known by its columns as “furnace”').waitFor();
    await expect.poll(headline).toBe('7 rows: 3 will be added, 2 skipped, 2 refused.');
  });
});
