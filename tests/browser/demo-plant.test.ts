import { pino } from 'pino';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { loadPlant } from '../../server/demo/load-plant.ts';
import {
  expectAccessible,
  signInOnPage,
  startTestBrowser,
  type TestBrowser,
} from '../support/browser.ts';

let product: TestBrowser;
beforeAll(async () => {
  product = await startTestBrowser();
  const { db, clock } = product.test;
  const work = { db, clock, log: pino({ level: 'silent' }) };
  await loadPlant(work, () => undefined, new AbortController().signal);
});
afterAll(() => product.close());

const heading = (page: Page, name: string, level: number) =>
  page.getByRole('heading', { name, level }).waitFor();

it('the demo’s depot tells what is planted in it, and leads to each place', async () => {
  const { page, complaints } = await product.visit();
  await signInOnPage(page, 'supervisor@lowmoor.example');
  await page.getByRole('link', { name: 'Main depot' }).click();
  await heading(page, 'Floor', 1);
  await page.getByText('Repair bench').first().waitFor();
  await expectAccessible(page);

  await page.getByRole('link', { name: 'What is planted' }).click();
  await heading(page, 'What is planted here', 1);
  await page.getByText('A good reader finds 4 things in them').waitFor();
  for (const title of [
    'Repair bench rises',
    'Burn-in is held at 24',
    'The cap of Calibration + Final check is overrun',
    'Dispatch lost finishes',
  ])
    await heading(page, title, 2);
  await expectAccessible(page);

  for (const place of ['Repair bench', 'Burn-in', 'Calibration + Final check', 'Dispatch']) {
    await page.getByRole('link', { name: `${place}, ` }).click();
    await heading(page, place, 1);
    expect(page.url()).toMatch(/\/zones\/\d+\?from=2026-.*&to=2026-/);
    await page.getByRole('img', { name: /^WIP level/ }).waitFor();
    // Where a cap is shown, the caution stands beside it, and nowhere else.
    expect(await page.getByText(/^A cap decides who waits/).count()).toBe(
      place.includes('+') ? 1 : 0,
    );
    await page.goBack();
    await heading(page, 'What is planted here', 1);
  }
  await page.getByRole('link', { name: 'the Floor in that period' }).first().click();
  await heading(page, 'Floor', 1);
  expect(page.url()).toContain('from=2026-');
  expect(complaints).toEqual([]);
});

it('another site has nothing planted, and no such screen to choose', async () => {
  const { page } = await product.visit();
  await signInOnPage(page, 'analyst@fellgate.example');
  await page.getByRole('link', { name: 'Works', exact: true }).click();
  await heading(page, 'Floor', 1);
  await page.getByRole('link', { name: 'Intake', exact: true }).waitFor();
  expect(await page.getByRole('link', { name: 'What is planted' }).count()).toBe(0);
  await page.goto(page.url().replace(/floor.*/, 'planted'));
  await page.getByText('Nothing is planted here.').waitFor();
  await expectAccessible(page);
});

it('the demo’s data are trusted from the first day to the last, which ends before its time', async () => {
  const { page } = await product.visit();
  await signInOnPage(page, 'analyst@lowmoor.example');
  await page.getByRole('link', { name: 'Main depot' }).click();
  await heading(page, 'Floor', 1);
  await page.getByRole('link', { name: 'Trust map' }).click();
  await heading(page, 'Trust map', 1);
  await page.getByRole('button', { name: 'all', exact: true }).click();
  await page.getByText('Every area is settling on 29 Nov 2026. ').waitFor();
  await page.getByText('99 % of the areas’ days are covered.').waitFor();
  expect(await page.getByText('About the data as a whole').count()).toBe(0);
  await page
    .getByRole('link', { name: 'Dispatch: of 183 days 1 settling and 182 covered' })
    .waitFor();
  await expectAccessible(page);
});
