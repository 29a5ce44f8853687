import { mkdir } from 'node:fs/promises';
import path from 'node:path';
import { type Browser, type Page, chromium } from 'playwright-core';
import { demoPassword } from '../../seeds/company.ts';

/**
 * The pictures of the README, taken of the demo company on a Cupel that runs: `npm start` in one terminal,
 * `npm run pictures` in another (with an address of its own: `npm run pictures -- http://127.0.0.1:4700`).
 */
const address = process.argv[2] ?? 'http://127.0.0.1:4600';
const folder = path.resolve('tests/pictures');

interface Picture {
  name: string;
  who: string;
  dark?: boolean;
  phone?: boolean;
  go(page: Page): Promise<void>;
}

const visit = (page: Page, where: string) => page.goto(`${address}${where}`);

/** Opens the data sheet of a tag through the search of the bar, as a person would. */
async function openSheet(page: Page, tagName: string, tab: string): Promise<void> {
  await visit(page, `/register?find=${tagName}`);
  await page
    .getByRole('link', { name: new RegExp(tagName) })
    .first()
    .click();
  await page.waitForURL(/\/register\/\d+/);
  await page.getByRole('tab', { name: tab }).click();
}

const pictures: Picture[] = [
  { name: 'board', who: 'manager', go: async (page) => void (await visit(page, '/')) },
  { name: 'sheet', who: 'engineer', go: (page) => openSheet(page, 'TY-1402', 'Estimate') },
  {
    name: 'evidence',
    who: 'manager',
    async go(page) {
      await visit(page, '/');
      await page.getByRole('link', { name: 'See evidence' }).first().click();
      await page.getByText('Waits for a decision').first().waitFor();
    },
  },
  { name: 'duties', who: 'engineer', dark: true, go: async (page) => void (await visit(page, '/duties')) },
  {
    name: 'samples',
    who: 'technician',
    phone: true,
    go: async (page) => void (await visit(page, '/samples')),
  },
  {
    name: 'board-phone',
    who: 'manager',
    phone: true,
    dark: true,
    go: async (page) => void (await visit(page, '/')),
  },
];

async function take(browser: Browser, { name, who, dark, phone, go }: Picture): Promise<void> {
  const context = await browser.newContext({
    viewport: phone ? { width: 390, height: 844 } : { width: 1440, height: 940 },
    colorScheme: dark ? 'dark' : 'light',
    timezoneId: 'Europe/Copenhagen',
  });
  const page = await context.newPage();
  await visit(page, '/sign-in');
  await page.getByLabel('E-mail address').fill(`${who}@cupel.example`);
  await page.getByLabel('Password').fill(demoPassword);
  await page.getByRole('button', { name: 'Sign in', exact: true }).click();
  await page.waitForURL((url) => url.pathname !== '/sign-in');
  await go(page);
  await page.waitForLoadState('networkidle');
  await page.evaluate(() => document.fonts.ready);
  await page.screenshot({ path: path.join(folder, `${name}.png`), animations: 'disabled' });
  await context.close();
  process.stdout.write(`tests/pictures/${name}.png\n`);
}

await mkdir(folder, { recursive: true });
const browser = await chromium.launch({
  executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium',
  headless: true,
  args: ['--no-sandbox', '--disable-gpu'],
});
for (const picture of pictures) await take(browser, picture);
await browser.close();
