import { readFileSync } from 'node:fs';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  expectAccessible,
  expectFits,
  signInOnPage,
  startTestBrowser,
  type TestBrowser,
} from '../support/browser.ts';
import { plantExport } from '../support/plant-export.ts';
import { roundedSvg } from '../support/rounded-svg.ts';
import { makeSite, type TestSite } from '../support/site.ts';

let product: TestBrowser;
let site: TestSite;
beforeAll(async () => {
  product = await startTestBrowser();
  site = await makeSite(product.test, { timeZone: 'Europe/Dublin' });
  await site.upload(plantExport(60));
});
afterAll(() => product.close());

async function open(screen: string, role = 'analyst') {
  const visit = await product.visit(`/sites/${site.id}${screen}`);
  await signInOnPage(visit.page, `${role}@lowmoor.example`);
  await visit.page.getByRole('heading', { level: 1 }).waitFor();
  return visit;
}

const period = (page: Page) => {
  const search = new URL(page.url()).searchParams;
  return [search.get('from'), search.get('to')];
};

describe('the time ruler', () => {
  it('steps the period by keyboard, and the address holds it', async () => {
    const { page, complaints } = await open('/floor');
    const last = page.getByRole('slider', { name: 'Last day' });
    await last.focus();
    await page.keyboard.press('ArrowLeft');
    await page.getByText('28 Sep to 3 Oct 2026').first().waitFor();
    expect(await last.getAttribute('aria-valuetext')).toBe('3 Oct 2026');
    await page.getByRole('slider', { name: 'First day' }).focus();
    await page.keyboard.press('ArrowRight');
    await page.getByText('29 Sep to 3 Oct 2026').first().waitFor();
    expect(period(page)).toEqual(['2026-09-28T23:00:00.000Z', '2026-10-03T23:00:00.000Z']);
    await page.getByRole('slider', { name: 'Period in view' }).focus();
    await page.keyboard.press('Home');
    await page.getByText('28 Sep to 2 Oct 2026').first().waitFor();
    // The period goes along to the next screen, and stands after a reload.
    await page.getByRole('table', { name: 'Areas' }).getByRole('link', { name: 'Turning' }).click();
    await page.getByRole('heading', { name: 'Turning', level: 1 }).waitFor();
    await page.reload();
    await page.getByText('28 Sep to 2 Oct 2026').first().waitFor();
    expect(complaints).toEqual([]);
  });

  it('is dragged by its end, and drawn anew', async () => {
    const { page } = await open('/floor');
    const box = await page.getByRole('slider', { name: 'Last day' }).boundingBox();
    const whole = await page.getByRole('slider', { name: 'Period in view' }).boundingBox();
    if (!box || !whole) throw new Error('The bracket is not drawn.');
    const y = box.y + 30;
    const to = whole.x + whole.width / 2;
    await page.mouse.move(box.x + box.width / 2, y);
    await page.mouse.down();
    await page.mouse.move(to + 40, y, { steps: 5 });
    await page.mouse.move(to, y, { steps: 5 });
    await page.mouse.up();
    await page.waitForURL(/to=/);
    const [from = '', end = ''] = period(page).map(String);
    expect(Date.parse(end) - Date.parse(from)).toBeGreaterThan(2 * 86_400_000);
    expect(Date.parse(end)).toBeLessThan(Date.parse('2026-10-03T00:00:00Z'));
    // Beside the bracket a new one begins.
    await page.mouse.move(to + 60, y);
    await page.mouse.down();
    await page.mouse.move(whole.x + whole.width - 4, y, { steps: 5 });
    await page.mouse.up();
    await page.waitForURL((url) => (url.searchParams.get('from') ?? '') > from);
  });

  it('takes its days typed, and says when they are in the wrong order', async () => {
    const { page } = await open('/floor');
    await page.getByRole('button', { name: 'dates' }).click();
    await page.getByLabel('From', { exact: true }).fill('2026-10-03');
    await page.getByLabel('To the end of').fill('2026-10-01');
    await page.getByText('The last day must not lie before the first.').waitFor();
    expect(await page.getByRole('button', { name: 'Show these days' }).isDisabled()).toBe(true);
    await expectAccessible(page);
    await page.getByLabel('From', { exact: true }).fill('2026-09-30');
    await page.getByRole('button', { name: 'Show these days' }).click();
    await page.getByText('30 Sep to 1 Oct 2026').first().waitFor();
  });
});

describe('the section of the Floor', () => {
  it('opens an area from its basin, by keyboard', async () => {
    const { page, complaints } = await open('/floor');
    const basin = page.getByRole('link', { name: /^Turning: \d+ jobs? inside/ });
    await basin.focus();
    await page.keyboard.press('Enter');
    await page.getByRole('heading', { name: 'Turning', level: 1 }).waitFor();
    expect(complaints).toEqual([]);
  });

  it('gives each basin its own scale at a click, and the address says so', async () => {
    const { page } = await open('/floor');
    await page.getByRole('button', { name: /give each its own/ }).click();
    await page.getByRole('button', { name: /use one for all/ }).waitFor();
    expect(page.url()).toContain('scale=own');
    await expectAccessible(page);
  });
});

describe('the table of the Floor', () => {
  it('is sorted and filtered, and its CSV holds what is shown', async () => {
    const { page } = await open('/floor');
    const table = page.getByRole('table', { name: 'Areas' });
    await page.getByLabel('Rows with').fill('settling');
    await page.getByText('3 of 4 rows').waitFor();
    await table.getByRole('button', { name: 'mean' }).click();
    const [download] = await Promise.all([
      page.waitForEvent('download'),
      page.getByRole('button', { name: 'Save these rows as CSV' }).click(),
    ]);
    const lines = readFileSync(await download.path(), 'utf8')
      .trim()
      .split('\r\n');
    const names = lines.slice(1).map((line) => line.split(',')[0]);
    expect(names).toEqual(await table.locator('tbody').getByRole('link').allTextContents());
    expect(names.toSorted()).toEqual(['Grinding', 'Turning', 'Whole site']);
    await page.getByLabel('Rows with').fill('none such');
    await page.getByText('0 of 4 rows').waitFor();
    await expectAccessible(page);
  });
});

describe('the job page', () => {
  it('leads from a bar to its record and to the row of the file', async () => {
    const { page, complaints } = await open('/jobs/PX-0010');
    await page.getByText(/^It left Grinding/).waitFor();
    await page.getByRole('link', { name: /^Turning: .* in process/ }).focus();
    await page
      .getByText(/^Turning: /)
      .first()
      .waitFor();
    await page.keyboard.press('Enter');
    await page.waitForURL(/#record-/);
    await expectAccessible(page);
    await page
      .getByRole('table', { name: 'Records of the job, in order' })
      .getByRole('link')
      .first()
      .click();
    await page.getByText('This is the row as it came, cell by cell.').waitFor();
    expect(complaints).toEqual([]);
  });
});

describe('an area', () => {
  it('lists the jobs where too few left for percentiles', async () => {
    const turning = await site.zone('Turning');
    const days = 'from=2026-09-28T23:00:00.000Z&to=2026-09-29T23:00:00.000Z';
    const { page } = await open(`/zones/${turning.id}?${days}`);
    await page.getByText(/too few for percentiles: the jobs are listed/).waitFor();
    const listed = page.getByRole('heading', { name: 'Left in this period' }).locator('..');
    await listed.getByRole('link').first().waitFor();
    const { departures } = await site.summary(
      turning.id,
      '2026-09-28T23:00:00.000Z',
      '2026-09-29T23:00:00.000Z',
    );
    expect(await listed.getByRole('link').count()).toBe(departures);
  });

  it('draws its charts as in the golden pictures', async () => {
    const turning = await site.zone('Turning');
    const { page } = await open(`/zones/${turning.id}`);
    for (const name of ['WIP level', 'Arrivals and departures', 'Flow time', 'L against']) {
      const chart = page.getByRole('img', { name: new RegExp(`^${name}`) });
      await chart.waitFor();
      const svg = await chart.evaluate((element) => element.outerHTML);
      const file = name.toLowerCase().replaceAll(' ', '-');
      await expect(roundedSvg(svg)).toMatchFileSnapshot(`./golden/${file}.svg`);
    }
  });
});

describe('every screen', () => {
  const screens = async (): Promise<Record<string, string>> => ({
    Floor: '/floor',
    Area: `/zones/${(await site.zone('Turning')).id}`,
    Job: '/jobs/PX-0010',
    Intake: '/intake',
  });

  it.each([1440, 1024, 768, 720, 600])(
    'fits a width of %d pixels (720 is 1440 at twice the size)',
    async (width) => {
      const { page } = await open('/floor');
      for (const screen of Object.values(await screens())) {
        await page.goto(`${product.origin}/sites/${site.id}${screen}`);
        await page.getByRole('heading', { level: 1 }).waitFor();
        await page.waitForLoadState('networkidle');
        await expectFits(page, width);
      }
    },
  );

  it('of Floor and Area is printed on one page', async () => {
    const { page } = await open('/floor');
    for (const name of ['Floor', 'Area']) {
      await page.goto(`${product.origin}/sites/${site.id}${(await screens())[name] ?? ''}`);
      await page.getByRole('heading', { level: 1 }).waitFor();
      await page.waitForLoadState('networkidle');
      const pdf = (await page.pdf({ preferCSSPageSize: true })).toString('latin1');
      expect([name, pdf.match(/\/Type\s*\/Page\b/g)?.length]).toEqual([name, 1]);
    }
  });
});
