import path from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  expectAccessible,
  signInOnPage,
  startTestBrowser,
  type TestBrowser,
} from '../support/browser.ts';
import { plantExport } from '../support/plant-export.ts';
import { makeSite, type TestSite } from '../support/site.ts';

let product: TestBrowser;
let site: TestSite;
beforeAll(async () => {
  product = await startTestBrowser();
  site = await makeSite(product.test, { timeZone: 'Europe/Dublin' });
});
afterAll(() => product.close());

async function openFloor(role: string) {
  const visit = await product.visit(`/sites/${site.id}/floor`);
  await signInOnPage(visit.page, `${role}@lowmoor.example`);
  await visit.page.getByRole('heading', { name: 'Floor', level: 1 }).waitFor();
  return visit;
}

describe('an empty site', () => {
  it('leads an analyst to data in three steps, with a sample to try', async () => {
    const { page, complaints } = await openFloor('analyst');
    await page.getByText('Three steps lead to them.', { exact: false }).waitFor();
    await expectAccessible(page);
    const [download] = await Promise.all([
      page.waitForEvent('download'),
      page.getByRole('link', { name: 'a sample of two weeks' }).click(),
    ]);
    expect(path.basename(download.suggestedFilename())).toBe('depot-two-weeks.csv');
    await page.getByRole('link', { name: 'open Intake' }).click();
    await page.getByRole('heading', { name: 'Intake', level: 1 }).waitFor();
    expect(complaints).toEqual([]);
  });

  it('tells a supervisor who does the second step', async () => {
    const { page } = await openFloor('supervisor');
    await page.getByText('An analyst or an admin of your organisation does this.').waitFor();
    expect(await page.getByRole('link', { name: 'open Intake' }).count()).toBe(0);
  });
});

describe('a site whose areas were found in a file', () => {
  beforeAll(async () => {
    await site.upload(plantExport(60));
  });

  it('asks no supervisor for the order of work', async () => {
    const { page } = await openFloor('supervisor');
    await page.getByRole('table', { name: 'Areas' }).waitFor();
    expect(await page.getByText('Is this the order of work?').count()).toBe(0);
  });

  it('has its order and servers confirmed by an analyst, by keyboard alone', async () => {
    const { page, complaints } = await openFloor('analyst');
    const form = page.getByRole('form', { name: 'Order of work' });
    await form.waitFor();
    await expectAccessible(page);
    await form.getByRole('button', { name: 'Move Grinding earlier' }).focus();
    await page.keyboard.press('Enter');
    await form.getByLabel('servers').first().focus();
    await page.keyboard.press('Control+a');
    await page.keyboard.type('0');
    await form.getByText('Use a whole number of servers', { exact: false }).waitFor();
    await page.keyboard.press('Control+a');
    await page.keyboard.type('3');
    await form.getByRole('button', { name: 'Confirm this order' }).focus();
    await page.keyboard.press('Enter');
    await form.waitFor({ state: 'detached' });
    const zones = await site.zones();
    expect(zones.map(({ name }) => name).slice(0, 3)).toEqual(['Sawing', 'Grinding', 'Turning']);
    expect((await site.zone('Sawing')).servers).toBe(3);
    await page.reload();
    await page.getByRole('table', { name: 'Areas' }).waitFor();
    expect(await page.getByText('Is this the order of work?').count()).toBe(0);
    expect(complaints).toEqual([]);
  });
});
