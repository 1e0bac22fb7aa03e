import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import ExcelJS from 'exceljs';
import type { Locator, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  expectAccessible,
  signInOnPage,
  startTestBrowser,
  type TestBrowser,
} from '../support/browser.ts';

let product: TestBrowser;
let folder: string;
beforeAll(async () => {
  folder = mkdtempSync(path.join(os.tmpdir(), 'weirmark-exports-'));
  product = await startTestBrowser({ env: { WEIRMARK_UPLOAD_LIMIT_MB: '64' } });
});
afterAll(async () => {
  await product.close();
  rmSync(folder, { recursive: true });
});

const write = (name: string, text: string): string => {
  const file = path.join(folder, name);
  writeFileSync(file, text);
  return file;
};

/** Goes on by the Tab key until something has the focus, as a person without a mouse does. */
async function tabTo(page: Page, target: Locator): Promise<void> {
  for (let pressed = 0; pressed < 250; pressed++) {
    if (await target.evaluate((element) => element === document.activeElement)) return;
    await page.keyboard.press('Tab');
  }
  throw new Error('The Tab key does not lead there.');
}

async function press(page: Page, target: Locator, key = 'Enter'): Promise<void> {
  await target.waitFor();
  await tabTo(page, target);
  await page.keyboard.press(key);
}

async function choose(page: Page, file: string): Promise<void> {
  const chooser = page.waitForEvent('filechooser');
  await press(page, page.getByRole('button', { name: 'Choose a file' }));
  await (await chooser).setFiles(file);
  await page.getByText('How it is read').waitFor();
}

/** Chooses in a list by typing what it shows. */
async function pick(page: Page, label: string, shown: string): Promise<void> {
  const list = page.getByLabel(label, { exact: true });
  await tabTo(page, list);
  await page.keyboard.type(shown);
  expect(await list.locator('option:checked').textContent()).toBe(shown);
}

const button = (page: Page, name: string) => page.getByRole('button', { name, exact: true });

async function openOwnSite(name: string) {
  const visited = await product.visit();
  const { page } = visited;
  await signInOnPage(page, 'analyst@lowmoor.example');
  await page.getByLabel('Name of the site').fill(name);
  await page.keyboard.press('Enter');
  await page.getByRole('heading', { name: 'Intake', level: 1 }).waitFor();
  return visited;
}

describe('by keyboard alone, an analyst', () => {
  it('reads an event file with semicolons, day first, explains a word, and mends the refused rows', async () => {
    const { page, complaints } = await openOwnSite('Events');
    const lines = [
      'Bookings of the bench;;;;',
      'Auftrag;Arbeitsplatz;Ereignis;Zeit;Menge',
      'L-1;Prüfstand;Beginn;03.11.2026 08:15;2,5',
      'L-1;Prüfstand;Ende;03.11.2026 09:45;2,5',
      'L-2;Prüfstand;Umgelagert;03.11.2026 10:30;1',
      'L-2;Prüfstand;Ende;13.11.2026 11:00;1',
      'L-3;Prüfstand;Beginn;14.11.2026 07:00;viel',
      '',
    ];
    await choose(page, write('bookings.csv', lines.join('\r\n')));
    await page.getByText('The header stands on line 2; what is above it is passed over.').waitFor();
    await page.getByText('Dates are read day first.').waitFor();
    await page.getByText(/does not say what the event “Umgelagert” means/).waitFor();
    await expectAccessible(page);
    await pick(page, '“Umgelagert”', 'start');
    await page.getByText(/does not say what the event/).waitFor({ state: 'detached' });
    await tabTo(page, page.getByLabel('Name of this plan'));
    await page.keyboard.type('Bench bookings');
    await page.keyboard.press('Enter');
    await page.getByText(/“Bench bookings” is saved/).waitFor();
    await press(page, button(page, 'Read this file'));
    await page.getByText('6 rows read: 4 new, 1 skipped and 1 refused.').waitFor();

    // Downloaded, mended, and uploaded again with the header: the saved plan recognises it.
    const downloading = page.waitForEvent('download');
    await press(page, page.getByRole('link', { name: 'Download the refused rows' }));
    const refused = readFileSync(await (await downloading).path(), 'utf8');
    expect(refused).toContain('7,unreadable-number,');
    const row = /"(L-3;[^"]*)"/.exec(refused)?.[1] ?? '';
    const mended = [lines[1], row.replace('viel', '4'), ''].join('\r\n');
    await choose(page, write('mended.csv', mended));
    await page.getByText('The header is that of the column plan “Bench bookings”.').waitFor();
    await press(page, button(page, 'Read this file'));
    await page.getByText('1 row read: 1 new.').waitFor();
    await expectAccessible(page);
    expect(complaints).toEqual([]);
  });

  it('reads a workbook, and reads it again from its other sheet', async () => {
    const { page, complaints } = await openOwnSite('Workbook');
    const workbook = new ExcelJS.Workbook();
    const sheet = (name: string, jobs: string[]) => {
      const made = workbook.addWorksheet(name);
      made.addRow(['Serial', 'Station', 'Start', 'Finish']);
      jobs.forEach((job, index) => {
        const start = new Date(Date.UTC(2026, 10, 3 + index, 8, 15));
        made.addRow([job, 'Calibration', start, new Date(start.getTime() + 5_400_000)]);
      });
    };
    sheet('November', ['S-1', 'S-2', 'S-3']);
    sheet('Rework', ['S-4', 'S-5']);
    const file = path.join(folder, 'stations.xlsx');
    await workbook.xlsx.writeFile(file);
    await choose(page, file);
    await page.getByText('The workbook has 2 sheets; “November” is read.').waitFor();
    await page.getByRole('cell', { name: '3 Nov 2026, 08:15' }).waitFor();
    await expectAccessible(page);
    await press(page, button(page, 'Read this file'));
    await page.getByText('3 rows read: 3 new.').waitFor();

    await press(page, button(page, 'Read it again another way'));
    await press(page, page.getByText('The file itself'), 'Space');
    await pick(page, 'Sheet', 'Rework');
    await page.getByRole('cell', { name: 'S-5', exact: true }).waitFor();
    await press(page, button(page, 'Read this upload again'));
    await page.getByText('2 rows read: 2 new.').waitFor();
    expect(complaints).toEqual([]);
  });

  it('reads a file with a row per job, area by area', async () => {
    const { page, complaints } = await openOwnSite('Jobs');
    const text = [
      'Job|Wash start|Wash finish|Bench start|Bench finish',
      'P-1|2026-11-03 08:00|2026-11-03 09:00|2026-11-03 10:00|',
      'P-2|2026-11-03 08:30|2026-11-03 09:30||',
      '',
    ].join('\n');
    await choose(page, write('jobs.txt', text));
    await page.getByText(/has columns of times for “Wash”, “Bench”, so a row is a job/).waitFor();
    expect(await page.getByLabel('Area 2', { exact: true }).inputValue()).toBe('Bench');
    await expectAccessible(page);
    await tabTo(page, page.getByLabel('Area 2', { exact: true }));
    await page.keyboard.press('End');
    await page.keyboard.type(' north');
    await page.getByRole('cell', { name: 'Bench north' }).waitFor();
    await press(page, button(page, 'Read this file'));
    await page.getByText('3 rows read: 3 new.').waitFor();
    await press(page, page.getByRole('link', { name: 'Floor', exact: true }));
    await page.getByRole('link', { name: 'Bench north' }).first().waitFor();
    expect(complaints).toEqual([]);
  });

  it('sees a large upload move on, and stops it', async () => {
    const { page, complaints } = await openOwnSite('Large');
    const row = (index: number) =>
      `LM-${index},Cleaning,2026-10-${String(1 + (index % 28)).padStart(2, '0')}T08:00:00Z,2026-10-29T09:00:00Z\n`;
    const rows = Array.from({ length: 700_000 }, (_, index) => row(index));
    await choose(page, write('large.csv', `job,area,start,finish\n${rows.join('')}`));
    await press(page, button(page, 'Read this file'));
    const progress = page.getByText(/^[\d,]+ rows, .* of .*$/);
    const seen = new Set<string>();
    while (seen.size < 3) {
      await progress.waitFor();
      seen.add((await progress.textContent()) ?? '');
      await page.waitForResponse((response) => response.url().endsWith('/uploads'));
    }
    await press(page, button(page, 'Stop this upload'));
    await page.getByText('The upload was stopped. Nothing of it was kept.').waitFor();
    expect(complaints).toEqual([]);
  });
});
