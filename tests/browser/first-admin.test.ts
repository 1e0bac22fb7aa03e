import { afterAll, beforeAll, expect, it } from 'vitest';
import { expectAccessible, startTestBrowser, type TestBrowser } from '../support/browser.ts';

let product: TestBrowser;
beforeAll(async () => {
  product = await startTestBrowser({ demo: false });
});
afterAll(() => product.close());

it('an empty server asks for its first admin, who then makes the first site', async () => {
  const { page, complaints } = await product.visit(
    `/first-admin?token=${product.test.firstAdminToken}`,
  );
  await page.getByLabel('Organisation').fill('Northgate Labs');
  await page.getByLabel('Your name').fill('Ada Holm');
  await page.getByLabel('E-mail').fill('ada@northgate.example');
  await page.getByLabel('Password').fill('long enough word');
  await expectAccessible(page);
  await page.getByRole('button', { name: 'Make the organisation and its admin' }).click();
  await page.getByText('There is no site yet.').waitFor();
  await page.getByLabel('Name of the site').fill('Lab 1');
  await page.getByRole('button', { name: 'Make the site' }).click();
  await page.getByText('Northgate Labs').waitFor();
  expect(complaints).toEqual([]);
});
