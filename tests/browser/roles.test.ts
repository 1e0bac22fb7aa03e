import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  expectAccessible,
  signInOnPage,
  startTestBrowser,
  type TestBrowser,
} from '../support/browser.ts';

let product: TestBrowser;
beforeAll(async () => {
  product = await startTestBrowser();
});
afterAll(() => product.close());

describe('each role sees what it may do, and no more', () => {
  it.each([
    ['admin', { upload: true, keys: true, site: true }],
    ['analyst', { upload: true, keys: false, site: true }],
    ['supervisor', { upload: false, keys: false, site: false }],
    ['consultant', { upload: false, keys: false, site: false }],
  ])('%s', async (role, may) => {
    const { page, complaints } = await product.visit();
    await signInOnPage(page, `${role}@lowmoor.example`);
    await page.getByRole('link', { name: 'Main depot' }).waitFor();
    expect(await page.getByRole('button', { name: 'Make the site' }).count()).toBe(
      may.site ? 1 : 0,
    );
    await page.getByRole('link', { name: 'Main depot' }).click();
    await page.getByText('There are no data yet.').waitFor();
    await page.getByText(role, { exact: false }).first().waitFor();
    expect(await page.getByRole('link', { name: 'Access keys' }).count()).toBe(may.keys ? 1 : 0);
    await page.getByRole('link', { name: 'Intake', exact: true }).click();
    await page.getByText('Nothing was uploaded yet.').waitFor();
    expect(await page.getByRole('button', { name: 'Choose a file' }).count()).toBe(
      may.upload ? 1 : 0,
    );
    await expectAccessible(page);
    expect(complaints).toEqual([]);
  });

  it('a guest of two organisations sees the sites of both, an analyst only their own', async () => {
    const guest = await product.visit();
    await signInOnPage(guest.page, 'consultant@lowmoor.example');
    await guest.page.getByText('You see 2 sites of 2 organisations.').waitFor();
    const analyst = await product.visit();
    await signInOnPage(analyst.page, 'analyst@fellgate.example');
    await analyst.page.getByText('You see 1 site of 1 organisation.').waitFor();
    expect(await analyst.page.getByText('Main depot').count()).toBe(0);
  });

  it('an admin makes an access key, sees it once, and revokes it', async () => {
    const { page, complaints } = await product.visit();
    await signInOnPage(page, 'admin@lowmoor.example');
    await page.getByRole('link', { name: 'Main depot' }).click();
    await page.getByRole('link', { name: 'Access keys' }).click();
    await page.getByLabel('What the key is for').fill('nightly export');
    await page.getByRole('button', { name: 'Make an access key' }).click();
    await page.getByText(/^wmk_/).waitFor();
    await expectAccessible(page);
    await page.getByRole('button', { name: 'Revoke this key' }).click();
    await page.getByRole('alertdialog').getByRole('button', { name: 'Revoke this key' }).click();
    await page.getByText(/, revoked /).waitFor();
    expect(complaints).toEqual([]);
  });
});

describe('whoever is signed out', () => {
  it('is told that e-mail or password is wrong, not which', async () => {
    const { page } = await product.visit();
    await signInOnPage(page, 'analyst@lowmoor.example', 'not it');
    await page
      .getByRole('alert')
      .getByText('The e-mail address or the password is wrong.')
      .waitFor();
    await expectAccessible(page);
  });

  it('comes back to where they were going', async () => {
    const { page } = await product.visit('/sites/1/intake');
    await signInOnPage(page, 'analyst@lowmoor.example');
    await page.getByRole('heading', { name: 'Intake', level: 1 }).waitFor();
  });

  it('signs out, and is asked to sign in again', async () => {
    const { page } = await product.visit();
    await signInOnPage(page, 'analyst@lowmoor.example');
    await page.getByText('Ivo Quill').click();
    await page.getByRole('button', { name: 'Sign out', exact: true }).click();
    await page.getByRole('heading', { name: 'Sign in' }).waitFor();
    await page.goto(`${product.origin}/sites`);
    await page.getByRole('heading', { name: 'Sign in' }).waitFor();
  });

  it('is told that an address leads nowhere', async () => {
    const { page } = await product.visit('/nowhere/at/all');
    await page.getByText('There is nothing at this address').waitFor();
    await expectAccessible(page);
  });
});

describe('a site that is not theirs', () => {
  it('is not found, in words', async () => {
    const { page } = await product.visit();
    await signInOnPage(page, 'analyst@fellgate.example');
    await page.getByRole('heading', { name: 'Sites' }).waitFor();
    await page.goto(`${product.origin}/sites/1/floor`);
    await page.getByText('This screen cannot be shown').waitFor();
    await page.getByText(/was not found, or is not yours to see/).waitFor();
  });
});

describe('the themes', () => {
  it('follow the choice, also after a reload', async () => {
    const { page } = await product.visit();
    await signInOnPage(page, 'analyst@lowmoor.example');
    await page.getByText('Ivo Quill').click();
    await page.getByLabel('Theme').selectOption('dark');
    const ground = () => page.evaluate('getComputedStyle(document.body).backgroundColor');
    const dark = await ground();
    await page.reload();
    await page.getByRole('heading', { name: 'Sites' }).waitFor();
    expect(await ground()).toBe(dark);
    await page.getByText('Ivo Quill').click();
    await page.getByLabel('Theme').selectOption('light');
    expect(await ground()).not.toBe(dark);
  });
});
