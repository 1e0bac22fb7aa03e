import { mkdirSync, writeFileSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  expectAccessible,
  signInOnPage,
  startTestBrowser,
  type TestBrowser,
} from '../support/browser.ts';
import { plantExport } from '../support/plant-export.ts';

let product: TestBrowser;
beforeAll(async () => {
  product = await startTestBrowser();
});
afterAll(() => product.close());

const exportFile = () => {
  const folder = path.join(os.tmpdir(), `plant-export-${process.pid}`);
  mkdirSync(folder, { recursive: true });
  const file = path.join(folder, 'week-40.csv');
  writeFileSync(file, plantExport(60));
  return file;
};

async function choose(page: Page, file: string) {
  const [chooser] = await Promise.all([
    page.waitForEvent('filechooser'),
    page.getByRole('button', { name: 'Choose a file' }).click(),
  ]);
  await chooser.setFiles(file);
}

const heading = (page: Page, name: string) =>
  page.getByRole('heading', { name, exact: true, level: 1 }).waitFor();

describe('an analyst', () => {
  it('signs in, uploads a fresh export, and comes from the Floor to the row of the file', async () => {
    const { page, complaints } = await product.visit();
    await heading(page, 'Sign in');
    await expectAccessible(page);
    await signInOnPage(page, 'analyst@lowmoor.example');
    await heading(page, 'Sites');
    await expectAccessible(page);

    // A site of their own, to begin with nothing.
    await page.getByLabel('Name of the site').fill('Annex');
    await page.getByRole('button', { name: 'Make the site' }).click();
    await heading(page, 'Intake');
    await expectAccessible(page);

    // What is in the file is shown before it is read; the guess is made, and can be changed.
    await choose(page, exportFile());
    await page.getByText('Which column holds what').waitFor();
    expect(await page.getByLabel('Job', { exact: true }).inputValue()).toBe('Order');
    expect(await page.getByLabel('Area', { exact: true }).inputValue()).toBe('Work centre');
    await page.getByRole('cell', { name: 'PX-0000' }).first().waitFor();
    await expectAccessible(page);
    await page.getByLabel('Finish', { exact: true }).selectOption('not in this file');
    await page.getByRole('cell', { name: '—' }).nth(20).waitFor();
    await page.getByLabel('Finish', { exact: true }).selectOption('End');
    await page.getByRole('button', { name: 'Read this file' }).click();

    // The row account, in words; the refused rows as a file.
    await page.getByText('182 rows read: 180 new and 2 refused.').waitFor();
    await page.getByText('The row names no job.').waitFor();
    const [download] = await Promise.all([
      page.waitForEvent('download'),
      page.getByRole('link', { name: 'Download the refused rows' }).click(),
    ]);
    expect(download.suggestedFilename()).toMatch(/^refused-rows-\d+\.csv$/);
    await expectAccessible(page);

    // The Floor: a sentence first, then every area with its books.
    await page.getByRole('link', { name: 'Floor', exact: true }).first().click();
    await heading(page, 'Floor');
    await page.getByRole('link', { name: 'Turning' }).first().waitFor();
    await page.getByText(/On the whole site/).waitFor();
    expect(await page.getByText('balance', { exact: true }).count()).toBe(4);
    await expectAccessible(page);

    // The area: charts, Little's Law, and who was inside.
    await page.getByRole('link', { name: 'Grinding' }).last().click();
    await heading(page, 'Grinding');
    await page.getByText('Little’s Law,').waitFor();
    await page.getByRole('img', { name: /^WIP level/ }).waitFor();
    await page.getByRole('link', { name: 'PX-0059' }).waitFor();
    await expectAccessible(page);

    // By keyboard alone: the cursor, a moment, and those inside then.
    await page.getByRole('application').focus();
    await page.keyboard.press('Home');
    for (let step = 0; step < 3; step++) await page.keyboard.press('ArrowRight');
    await page.keyboard.press('Enter');
    await page.getByRole('heading', { name: /^Inside on .*longest first$/ }).waitFor();
    expect(page.url()).toContain('at=');
    await page
      .getByRole('table', { name: 'Inside then, longest first' })
      .getByRole('link')
      .first()
      .click();

    // The job, and the row of the file that told of it.
    await page.getByRole('heading', { name: 'Its way' }).waitFor();
    await expectAccessible(page);
    await page
      .getByRole('link', { name: /week-40\.csv, line/ })
      .first()
      .click();
    await page.getByText('This is the row as it came, cell by cell.').waitFor();
    await page.getByText('Sawing', { exact: true }).waitFor();
    await expectAccessible(page);
    expect(complaints).toEqual([]);
  });

  it('withdraws an upload after saying so twice, and the Floor is empty again', async () => {
    const { page, complaints } = await product.visit();
    await signInOnPage(page, 'analyst@lowmoor.example');
    await page.getByRole('link', { name: 'Annex' }).click();
    await heading(page, 'Floor');
    await page.getByRole('link', { name: 'Intake', exact: true }).click();
    await page.getByRole('button', { name: 'Withdraw this upload' }).click();
    const dialog = page.getByRole('alertdialog');
    await dialog.getByText(/as if this file had never come/).waitFor();
    await expectAccessible(page);
    await dialog.getByRole('button', { name: 'Withdraw this upload' }).click();
    await page.getByText('withdrawn', { exact: true }).waitFor();
    await page.getByRole('link', { name: 'Floor', exact: true }).first().click();
    await page.getByText('There are no data yet.').waitFor();
    expect(complaints).toEqual([]);
  });

  it('is told what is wrong with a file that is no export', async () => {
    const { page } = await product.visit();
    await signInOnPage(page, 'analyst@lowmoor.example');
    await page.getByRole('link', { name: 'Annex' }).click();
    await page.getByRole('link', { name: 'Intake', exact: true }).click();
    const file = path.join(os.tmpdir(), `picture-${process.pid}.csv`);
    writeFileSync(file, Buffer.from([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a]));
    await choose(page, file);
    await page
      .getByRole('alert')
      .getByText(/PNG|picture/i)
      .waitFor();
    await expectAccessible(page);
  });
});
