import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  expectAccessible,
  expectFits,
  signInOnPage,
  startTestBrowser,
  type TestBrowser,
} from '../support/browser.ts';
import { makeSite, type TestSite } from '../support/site.ts';
import { steadyLog, toCsv, type LogRow } from '../support/steady-log.ts';

let product: TestBrowser;
let site: TestSite;
beforeAll(async () => {
  product = await startTestBrowser();
  site = await makeSite(product.test);
  await site.upload(toCsv(poorLog()));
});
afterAll(() => product.close());

/** Bench misses a day, Wash has inferred finishes on two, Ship posts a day at its end, late by its clock. */
function poorLog(): LogRow[] {
  const log = steadyLog().filter(
    (row) => !(row.area === 'Bench' && row.started.startsWith('2026-10-06')),
  );
  return log.map((row, index) => {
    const { area, started } = row;
    if (area === 'Wash' && /^2026-10-0[12]/.test(started) && index % 2 === 0)
      return { ...row, finished: '' };
    if (area === 'Ship' && started.startsWith('2026-10-05'))
      return { ...row, finished: '2026-10-05T22:00:00Z' };
    return row;
  });
}

const lastWeeks = '?from=2026-09-14T00:00:00.000Z&to=2026-10-12T00:00:00.000Z';

async function open(screen: string, of = site) {
  const visit = await product.visit(`/sites/${of.id}${screen}`);
  await signInOnPage(visit.page, 'analyst@lowmoor.example');
  await visit.page.getByRole('heading', { level: 1 }).waitFor();
  return visit;
}

describe('the trust map', () => {
  it('tells the worst first, and each piece leads to its evidence', async () => {
    const { page, complaints } = await open(`/trust${lastWeeks}`);
    const sentence = page.getByRole('link', { name: /^Bench misses data on 6 Oct 2026/ });
    await sentence.waitFor();
    expect(await page.getByRole('main').locator('p').first().textContent()).toBe(
      'Bench misses data on 6 Oct 2026. Wash rests on inferred times on 2 days, the last of them 2 Oct 2026. ' +
        'Ship has coarse times on 5 Oct 2026. Every area is settling on 9 Oct 2026. 91 % of the areas’ days are covered.',
    );
    await expectAccessible(page);
    await sentence.click();
    await page.getByRole('heading', { name: 'Bench', level: 1 }).waitFor();
    expect(page.url()).toContain('from=2026-09-14');
    expect(complaints).toEqual([]);
  });

  it('tells why by keyboard, field by field', async () => {
    const { page } = await open(`/trust${lastWeeks}`);
    const row = page.getByRole('link', {
      name: 'Bench: of 26 days 1 missing, 1 settling and 24 covered',
    });
    await row.focus();
    await page.keyboard.press('ArrowLeft');
    await page.getByText(/^Bench, 9 Oct 2026: settling\. The data end within this day/).waitFor();
    for (let day = 8; day >= 6; day--) await page.keyboard.press('ArrowLeft');
    await page.getByText(/^Bench, 6 Oct 2026: missing\. Nothing was recorded here/).waitFor();
    await expectAccessible(page);
    await page.keyboard.press('Enter');
    await page.getByRole('heading', { name: 'Bench', level: 1 }).waitFor();
  });

  it('has a table behind it, to be filtered', async () => {
    const { page } = await open(`/trust${lastWeeks}`);
    await page.getByText('The days behind the picture').click();
    await page.getByLabel('Rows with').fill('missing');
    await page.getByText('1 of 78 rows').waitFor();
    const table = page.getByRole('table', { name: 'Grades of areas by days' });
    await table.getByText('6 Oct 2026').waitFor();
    await expectAccessible(page);
  });

  it('says what to do about a feed that is behind, whatever the period', async () => {
    const behind = await makeSite(product.test);
    await behind.upload(
      toCsv(steadyLog().filter((row) => row.area !== 'Ship' || row.started < '2026-10-07')),
    );
    const { page } = await open(
      '/trust?from=2026-09-14T00:00:00.000Z&to=2026-09-21T00:00:00.000Z',
      behind,
    );
    await page
      .getByRole('link', { name: /^1 thing about the data as a whole needs a look/ })
      .click();
    await page.getByText(/Look whether the feed of Ship has stopped/).waitFor();
    await page.getByRole('link', { name: /^Every day of this period is covered/ }).waitFor();
    await expectAccessible(page);
  });

  it('leads to the intake where there are no data', async () => {
    const { page } = await open('/trust', await makeSite(product.test));
    await page.getByRole('link', { name: 'Load an export' }).click();
    await page.getByRole('heading', { name: 'Intake', level: 1 }).waitFor();
  });

  it('says so where the period lies outside of what is loaded', async () => {
    const { page } = await open('/trust?from=2020-01-01T00:00:00.000Z&to=2020-02-01T00:00:00.000Z');
    await page.getByText('No day of this period lies within the loaded span.').waitFor();
    await expectAccessible(page);
  });

  it('says that it failed, and what to do', async () => {
    const { page } = await open('/floor');
    await page.route('**/api/sites/*/trust?*', (route) =>
      route.fulfill({
        status: 500,
        contentType: 'application/problem+json',
        body: JSON.stringify({
          type: 'about:blank',
          title: 'Something went wrong',
          status: 500,
          detail: 'Try again.',
          code: 'internal',
        }),
      }),
    );
    await page.getByRole('navigation', { name: 'Screens' }).getByText('Trust map').click();
    await page.getByRole('alert').waitFor();
  });

  it.each([1440, 1024, 768, 600])('fits a width of %d pixels', async (width) => {
    const { page } = await open(`/trust${lastWeeks}`);
    await page.getByRole('link', { name: /^Ship: of/ }).waitFor();
    await expectFits(page, width);
  });
});

describe('beside figures', () => {
  it('the Floor says on how many days its figures rest on poor data, and leads there', async () => {
    const { page } = await open(`/floor${lastWeeks}`);
    await page
      .getByText(
        '1 of 26 days is missing, 2 inferred and 1 coarse in some area: see the trust map.',
      )
      .waitFor();
    await expectAccessible(page);
    await page.getByRole('main').getByRole('link', { name: 'trust map' }).click();
    await page.getByRole('heading', { name: 'Trust map', level: 1 }).waitFor();
    expect(page.url()).toContain('from=2026-09-14');
  });

  it('an area speaks of its own days only', async () => {
    const { page } = await open(`/zones/${(await site.zone('Wash')).id}${lastWeeks}`);
    await page.getByText('2 of 26 days are inferred: see the trust map.').waitFor();
  });

  it('nothing is said where all is covered', async () => {
    const { page } = await open('/floor?from=2026-09-14T00:00:00.000Z&to=2026-09-21T00:00:00.000Z');
    await page.getByRole('table', { name: 'Areas' }).waitFor();
    await page.waitForLoadState('networkidle');
    expect(await page.getByText('see the trust map').count()).toBe(0);
  });
});
