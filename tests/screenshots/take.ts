import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { chromium, type Page } from 'playwright-core';
import type { Site } from '../../shared/contracts/sites.ts';
import type { Zone } from '../../shared/contracts/zones.ts';
import { demoPassword } from '../../server/demo/accounts.ts';
import { mainDepot } from '../../server/demo/load-demo.ts';
import { findChromium } from '../../server/setup/chromium.mjs';
import { chromiumArguments } from '../support/browser.ts';

/**
 * `npm run screenshots`: takes the pictures of README from the running demo, at ORIGIN or where `npm start`
 * serves it.
 */
const origin = process.env.ORIGIN ?? 'http://127.0.0.1:5180';
const folder = fileURLToPath(new URL('.', import.meta.url));
const say = (line: string) => process.stdout.write(`${line}\n`);

const executablePath = findChromium();
if (executablePath === null) throw new Error('There is no Chromium. Run npm test, which gets it.');
const browser = await chromium.launch({ executablePath, args: chromiumArguments });
try {
  const page = await browser.newPage({ viewport: { width: 1440, height: 940 } });
  await signIn(page);
  const answer = async <Answer>(address: string) =>
    (await (await page.request.get(origin + address)).json()) as Answer;
  const sites = await answer<Site[]>('/api/sites');
  const depot = sites.find((site) => site.name === mainDepot);
  if (!depot) throw new Error('The demo is not there. Start it with npm start.');
  const zones = await answer<Zone[]>(`/api/sites/${depot.id}/zones`);
  const bench = zones.find((zone) => zone.name === 'Repair bench');
  const below = `/sites/${depot.id}`;
  const half = new URLSearchParams({
    from: '2026-08-02T23:00:00.000Z',
    to: '2026-11-30T00:00:00.000Z',
  }).toString();
  await take(page, 'floor', `${below}/floor`);
  await take(page, 'area', `${below}/zones/${bench?.id ?? 0}?${half}`);
  await take(page, 'job', `${below}/jobs/LW-18668`);
  await take(page, 'trust', `${below}/trust?${half}`);
  await take(page, 'intake', `${below}/intake`);
  await page.emulateMedia({ colorScheme: 'dark' });
  await take(page, 'floor-dark', `${below}/floor`);
} finally {
  await browser.close();
}

async function signIn(page: Page): Promise<void> {
  await page.goto(`${origin}/sign-in`);
  await page.getByLabel('E-mail').fill('analyst@lowmoor.example');
  await page.getByLabel('Password').fill(demoPassword);
  await page.getByRole('button', { name: 'Sign in', exact: true }).click();
  await page.getByRole('heading', { name: 'Sites', level: 1 }).waitFor();
}

async function take(page: Page, name: string, address: string): Promise<void> {
  await page.goto(origin + address);
  await page.getByRole('heading', { level: 1 }).waitFor();
  await page.waitForLoadState('networkidle');
  await page.screenshot({ path: path.join(folder, `${name}.png`) });
  say(`${name}.png`);
}
