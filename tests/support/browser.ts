import { readFileSync } from 'node:fs';
import { createServer } from 'node:http';
import { createRequire } from 'node:module';
import type { AddressInfo } from 'node:net';
import { fileURLToPath } from 'node:url';
import { chromium, type Browser, type Page } from 'playwright-core';
import { expect } from 'vitest';
import { findChromium } from '../../server/setup/chromium.mjs';
import { demoPassword } from '../../server/demo/accounts.ts';
import { startTestApp, type TestApp } from './app.ts';

/** The product as served, over a database of its own, and a browser to use it with. */
export interface TestBrowser {
  test: TestApp;
  origin: string;
  /** A page of a fresh visitor. What it logs as an error or a warning is kept in `complaints`. */
  visit(path?: string): Promise<{ page: Page; complaints: string[] }>;
  close(): Promise<void>;
}

const clientFolder = fileURLToPath(new URL('../../dist', import.meta.url));
const axeSource = readFileSync(
  createRequire(import.meta.url).resolve('axe-core/axe.min.js'),
  'utf8',
);

export async function startTestBrowser(
  options: { demo?: boolean; env?: Record<string, string> } = {},
): Promise<TestBrowser> {
  const test = await startTestApp({ ...options, clientFolder });
  const server = createServer(test.app);
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const origin = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
  const browser = await launch();
  return {
    test,
    origin,
    async visit(path = '/') {
      const context = await browser.newContext({ viewport: { width: 1440, height: 960 } });
      const page = await context.newPage();
      const complaints: string[] = [];
      page.on('console', (message) => {
        if (['error', 'warning'].includes(message.type())) complaints.push(message.text());
      });
      page.on('pageerror', (error) => complaints.push(error.message));
      await page.goto(origin + path);
      return { page, complaints };
    },
    async close() {
      await browser.close();
      server.closeAllConnections();
      await new Promise<void>((resolve) => server.close(() => resolve()));
      await test.close();
    },
  };
}

/** Without a window, and without looking anything up by itself. */
export const chromiumArguments = [
  '--headless',
  '--no-sandbox',
  '--disable-gpu',
  '--disable-quic',
  '--no-first-run',
  '--disable-background-networking',
  '--disable-component-update',
  '--disable-sync',
];

async function launch(): Promise<Browser> {
  const executablePath = findChromium();
  if (executablePath === null)
    throw new Error('There is no Chromium. Run npm test, which gets it.');
  return chromium.launch({
    executablePath,
    args: chromiumArguments,
  });
}

export async function signInOnPage(page: Page, email: string, password = demoPassword) {
  await page.getByLabel('E-mail').fill(email);
  await page.getByLabel('Password').fill(password);
  await page.getByRole('button', { name: 'Sign in', exact: true }).click();
}

/** Nothing of the page lies beyond its right edge at this width, once pictures have taken it up. */
export async function expectFits(page: Page, width: number): Promise<void> {
  await page.setViewportSize({ width, height: 900 });
  const beyondEdge = () =>
    page.evaluate(
      () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
    );
  await expect.poll(beyondEdge, { timeout: 5000 }).toBe(0);
}

interface AxeResult {
  violations: { id: string; nodes: { html: string; failureSummary?: string }[] }[];
}

/** axe finds nothing on the page as it stands, in the light and in the dark theme. */
export async function expectAccessible(page: Page): Promise<void> {
  for (const colorScheme of ['light', 'dark'] as const) {
    await page.emulateMedia({ colorScheme });
    await page.evaluate(axeSource);
    const { violations } = await page.evaluate<AxeResult>('window.axe.run()');
    const found = violations.map(({ id, nodes }) => ({
      id,
      where: nodes.slice(0, 3).map((node) => node.html.slice(0, 160)),
      why: nodes[0]?.failureSummary,
    }));
    expect({ colorScheme, found }).toEqual({ colorScheme, found: [] });
  }
  await page.emulateMedia({ colorScheme: 'light' });
}
