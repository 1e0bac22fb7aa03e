import type { Page } from 'playwright-core';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import {
  expectAccessible,
  expectFits,
  signInOnPage,
  startTestBrowser,
  type TestBrowser,
} from '../support/browser.ts';
import { makeSite, type TestSite } from '../support/site.ts';

let product: TestBrowser;
let site: TestSite;
beforeAll(async () => {
  product = await startTestBrowser();
});
afterAll(() => product.close());

/** The export wrote the bench otherwise from the second week on. */
const log = ['job,area,started,finished']
  .concat(
    Array.from({ length: 12 }, (_, index) => {
      const day = String(index + 1).padStart(2, '0');
      const bench = index < 6 ? 'Repair bench' : 'Repair-bench';
      return [
        `J${index},Receiving,2026-10-${day}T08:00Z,2026-10-${day}T09:00Z`,
        `J${index},${bench},2026-10-${day}T10:00Z,2026-10-${day}T12:00Z`,
        `J${index},Dispatch,2026-10-${day}T13:00Z,2026-10-${day}T14:00Z`,
      ].join('\n');
    }),
  )
  .concat('')
  .join('\n');

beforeEach(async () => {
  site = await makeSite(product.test, { timeZone: 'Europe/Dublin' });
  await site.upload(log);
});

async function open(role = 'analyst') {
  const visit = await product.visit(`/sites/${site.id}/areas`);
  await signInOnPage(visit.page, `${role}@lowmoor.example`);
  await visit.page.getByRole('heading', { name: 'Areas', level: 1 }).waitFor();
  return visit;
}

const namesIn = (page: Page) =>
  page.getByRole('table', { name: 'Areas' }).locator('tbody').getByRole('link').allTextContents();

describe('the screen of areas', () => {
  it('offers to merge what may be one area, says what will happen, and takes it back', async () => {
    const { page, complaints } = await open();
    await page
      .getByText(/^“Repair-bench” and “Repair bench” may be one area, written in two ways\./)
      .waitFor();
    expect(await namesIn(page)).toEqual(['Receiving', 'Repair bench', 'Dispatch', 'Repair-bench']);
    await expectAccessible(page);
    const offered = page.getByRole('heading', { name: 'Are these one area?' }).locator('..');
    await offered.getByRole('button', { name: 'Merge Repair-bench' }).click();
    const dialog = page.getByRole('dialog');
    await dialog.getByText(/^6 rows of “Repair-bench” will count as “Repair bench”/).waitFor();
    await dialog.getByText('Nothing is lost: you can undo it.').waitFor();
    await expectAccessible(page);
    await dialog.getByRole('button', { name: 'Merge them' }).click();
    await page.getByText(/; “Repair-bench” counts as “Repair bench”\.$/).waitFor();
    expect(await namesIn(page)).toEqual(['Receiving', 'Repair bench', 'Dispatch']);
    await page.getByText('“Repair bench”; merged: “Repair-bench”').waitFor();
    await expectAccessible(page);
    await page.getByRole('button', { name: 'Take this back' }).click();
    await page
      .getByRole('alertdialog')
      .getByText(/^6 rows will count for “Repair-bench” again/)
      .waitFor();
    await page.getByRole('alertdialog').getByRole('button', { name: 'Take this back' }).click();
    await page.getByText('None: every row counts for the area that its file names.').waitFor();
    expect(await namesIn(page)).toEqual(['Receiving', 'Repair bench', 'Dispatch', 'Repair-bench']);
    expect(complaints).toEqual([]);
  });

  it('moves rows from a day on, by keyboard alone', async () => {
    const { page, complaints } = await open();
    await page.getByRole('button', { name: 'Merge Dispatch' }).focus();
    await page.keyboard.press('Enter');
    const dialog = page.getByRole('dialog');
    const target = dialog.getByLabel('They count as');
    await target.focus();
    await page.keyboard.type('Receiving');
    await page.keyboard.press('Tab');
    await page.keyboard.press('ArrowDown');
    const day = dialog.getByLabel('From the beginning of this day (Europe/Dublin)');
    await day.fill('1900-01-01');
    await dialog.getByText('Use a day from 1950 to 2099.').waitFor();
    expect(await dialog.getByRole('button', { name: 'Merge them' }).count()).toBe(0);
    await expectAccessible(page);
    await day.fill('2026-10-09');
    await dialog.getByText(/^Rows of “Dispatch” that start on 9 Oct 2026 or later/).waitFor();
    await dialog.getByRole('button', { name: 'Move them from 9 Oct 2026' }).focus();
    await page.keyboard.press('Enter');
    await page.getByText('“Dispatch” counts as “Receiving” from 9 Oct 2026 on').first().waitFor();
    await page.getByText(/^4 rows so far · Ivo Quill/).waitFor();
    expect(await dialog.count()).toBe(0);
    expect(complaints).toEqual([]);
  });

  it('says why a move is refused, and keeps what was entered', async () => {
    const [receiving] = await site.zones();
    await site.agent
      .post(`/api/sites/${site.id}/zones`)
      .send({ kind: 'loop', name: 'Front', areaIds: [receiving?.id] })
      .expect(201);
    await product.test.settled();
    const { page } = await open();
    await page.getByRole('button', { name: 'Merge Receiving' }).click();
    const dialog = page.getByRole('dialog');
    await dialog.getByLabel('They count as').selectOption({ label: 'Dispatch' });
    await dialog.getByRole('button', { name: 'Merge them' }).click();
    await dialog.getByText(/The loop “Front” names “Receiving” and not “Dispatch”/).waitFor();
    expect(await dialog.getByLabel('They count as').inputValue()).not.toBe('');
    await page.keyboard.press('Escape');
    await dialog.waitFor({ state: 'detached' });
    await page.getByText('None: every row counts for the area that its file names.').waitFor();
  });

  it('renames an area, says since when it has how many servers, and adds one', async () => {
    const { page, complaints } = await open();
    await page.getByRole('button', { name: 'Change Dispatch' }).click();
    const dialog = page.getByRole('dialog');
    await dialog.getByLabel('Name').fill('Shipping');
    await dialog.getByLabel('Servers', { exact: true }).fill('none');
    await dialog.getByText('Use a whole number from 1 on, or leave it empty.').waitFor();
    await dialog.getByLabel('Servers', { exact: true }).fill('3');
    await dialog.getByLabel(/^Servers since this day/).fill('2026-10-05');
    await expectAccessible(page);
    await dialog.getByRole('button', { name: 'Keep these changes' }).click();
    await page.getByText('3 since 5 Oct 2026').waitFor();
    expect(await namesIn(page)).toContain('Shipping');
    await page.getByLabel('Name of a new area').fill('Paint shop');
    await page.getByRole('button', { name: 'Add this area' }).click();
    await page.getByRole('link', { name: 'Paint shop' }).waitFor();
    expect(complaints).toEqual([]);
  });

  it('puts areas in order', async () => {
    const { page, complaints } = await open();
    await page.getByRole('button', { name: 'Change the order of work' }).click();
    const form = page.getByRole('form', { name: 'Order of work' });
    await form.getByRole('button', { name: 'Move Dispatch earlier' }).click();
    await expectAccessible(page);
    await form.getByRole('button', { name: 'Keep this order' }).click();
    await form.waitFor({ state: 'detached' });
    await expect
      .poll(() => namesIn(page))
      .toEqual(['Receiving', 'Dispatch', 'Repair bench', 'Repair-bench']);
    expect(complaints).toEqual([]);
  });

  it.each(['supervisor', 'consultant'])('is read by a %s, and not changed', async (role) => {
    const { page, complaints } = await open(role);
    await page.getByText(/may be one area, written in two ways\./).waitFor();
    expect(await namesIn(page)).toHaveLength(4);
    const main = page.getByRole('main');
    for (const name of [/^Merge/, /^Change/, /^Add/, /^Take/])
      expect([name, await main.getByRole('button', { name }).count()]).toEqual([name, 0]);
    await expectAccessible(page);
    expect(complaints).toEqual([]);
  });

  it('says that there is nothing yet', async () => {
    site = await makeSite(product.test);
    const { page } = await open();
    await page.getByText('No file has named an area.').waitFor();
    await expectAccessible(page);
  });

  it.each([1440, 1024, 768, 720, 600])('fits a width of %d pixels', async (width) => {
    const { page } = await open();
    await page.getByRole('table', { name: 'Areas' }).waitFor();
    await expectFits(page, width);
  });
});
