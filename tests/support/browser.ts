import { createServer, type Server } from 'node:http';
import path from 'node:path';
import { type Browser, type BrowserContext, type Page, chromium } from 'playwright-core';
import { afterAll, beforeAll } from 'vitest';
import { createApp } from '../../server/app.ts';
import type { Context } from '../../server/context.ts';
import { type Workers, startWorkers } from '../../server/jobs/worker.ts';
import { useTestContext } from './test-context.ts';

export interface Site {
  context: Context;
  address: string;
  /** A fresh browser context at a page size, with what it must never do watched. */
  open(options?: { width?: number; height?: number; dark?: boolean }): Promise<Page>;
}

const browserFlags = [
  '--no-sandbox',
  '--disable-gpu',
  '--disable-quic',
  '--no-first-run',
  '--disable-background-networking',
  '--disable-component-update',
  '--disable-sync',
];

/** The whole product for the calling file: server, workers, built client and Chromium, on a database of its own. */
export function useSite(
  prepare: (context: Context) => Promise<void> = async () => {},
  clock: () => Date = () => new Date(),
): Site {
  const site = {} as Site;
  let server: Server;
  let workers: Workers;
  let browser: Browser;
  const opened: BrowserContext[] = [];
  const complaints: string[] = [];

  useTestContext(clock, async (context) => {
    site.context = context;
    await prepare(context);
  });
  beforeAll(async () => {
    server = createServer(
      createApp(site.context, { clientFolder: path.resolve('dist/client'), signInAttempts: 500 }),
    );
    await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
    site.address = `http://127.0.0.1:${(server.address() as { port: number }).port}`;
    workers = await startWorkers(site.context);
    browser = await chromium.launch({
      executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium',
      headless: true,
      args: browserFlags,
    });
  });
  afterAll(async () => {
    for (const context of opened) await context.close();
    await browser?.close();
    await workers?.stop();
    server?.closeAllConnections();
    server?.close();
    if (complaints.length > 0) throw new Error(`The pages misbehaved:\n${complaints.join('\n')}`);
  });

  site.open = async ({ width = 1440, height = 940, dark = false } = {}) => {
    const context = await browser.newContext({
      viewport: { width, height },
      colorScheme: dark ? 'dark' : 'light',
      timezoneId: 'Europe/Copenhagen',
      acceptDownloads: true,
    });
    opened.push(context);
    const page = await context.newPage();
    page.on('request', (request) => {
      const url = new URL(request.url());
      if (!['blob:', 'data:'].includes(url.protocol) && url.origin !== site.address)
        complaints.push(`request to ${request.url()}`);
    });
    page.on('pageerror', (error) => complaints.push(`error on ${page.url()}: ${error.message}`));
    page.on('console', (message) => {
      if (message.type() === 'error' && /Content Security Policy|Unhandled/.test(message.text()))
        complaints.push(message.text());
    });
    page.setDefaultTimeout(15_000);
    return page;
  };
  return site;
}

/** Signs in through the page. */
export async function signInAs(site: Site, page: Page, email: string, password: string): Promise<void> {
  await page.goto(`${site.address}/sign-in`);
  await page.getByLabel('E-mail address').fill(email);
  await page.getByLabel('Password').fill(password);
  await page.getByRole('button', { name: 'Sign in', exact: true }).click();
  await page.waitForURL((url) => url.pathname !== '/sign-in');
}
