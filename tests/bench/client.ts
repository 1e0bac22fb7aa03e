import { gzipSync } from 'node:zlib';
import { chromium, type Page } from 'playwright-core';
import { demoPassword } from '../../server/demo/accounts.ts';
import { findChromium } from '../../server/setup/chromium.mjs';
import { chromiumArguments } from '../support/browser.ts';
import { median } from './measure.ts';

/** What the client weighs and how it moves, in a browser of its own. */
export interface ClientFigures {
  /** Script and style that the Floor's first load takes, compressed, in kB. */
  firstLoadKilobytes: number;
  /** Longest task while the ruler is dragged over the Area, in milliseconds. */
  longestTaskMs: number;
  /** Frames a second in the middle, while it is dragged. */
  framesPerSecond: number;
}

/** Opens the Floor, then an area over all that is loaded, and drags the ruler to and fro. */
export async function measureClient(
  origin: string,
  siteId: number,
  zoneId: number,
): Promise<ClientFigures | null> {
  const executablePath = findChromium();
  if (executablePath === null) return null;
  const browser = await chromium.launch({ executablePath, args: chromiumArguments });
  try {
    const page = await browser.newPage({ viewport: { width: 1440, height: 960 } });
    await signIn(page, origin);
    const firstLoadKilobytes = await weighFloor(page, `${origin}/sites/${siteId}/floor`);
    const whole = new URLSearchParams({
      from: '2023-01-02T00:00:00Z',
      to: '2026-01-05T00:00:00Z',
      step: 'day',
    }).toString();
    await page.goto(`${origin}/sites/${siteId}/zones/${zoneId}?${whole}`);
    await page.getByRole('img', { name: /^L against/ }).waitFor();
    await page.waitForLoadState('networkidle');
    return { firstLoadKilobytes, ...(await dragRuler(page)) };
  } finally {
    await browser.close();
  }
}

async function signIn(page: Page, origin: string): Promise<void> {
  await page.goto(`${origin}/sign-in`);
  await page.getByLabel('E-mail').fill('analyst@lowmoor.example');
  await page.getByLabel('Password').fill(demoPassword);
  await page.getByRole('button', { name: 'Sign in', exact: true }).click();
  await page.getByRole('heading', { name: 'Sites', level: 1 }).waitFor();
}

async function weighFloor(page: Page, address: string): Promise<number> {
  const bodies: Promise<Buffer>[] = [];
  page.on('response', (response) => {
    if (/\.(js|css)$/.test(new URL(response.url()).pathname)) bodies.push(response.body());
  });
  await page.goto(address);
  await page.getByRole('heading', { name: 'Floor', level: 1 }).waitFor();
  await page.waitForLoadState('networkidle');
  const loaded = await Promise.all(bodies);
  page.removeAllListeners('response');
  return loaded.reduce((sum, body) => sum + gzipSync(body).length, 0) / 1000;
}

async function dragRuler(page: Page) {
  const box = await page.getByRole('slider', { name: 'Last day' }).boundingBox();
  if (!box) throw new Error('The ruler is not drawn.');
  await page.evaluate(`
    window.tasks = []; window.frames = [];
    new PerformanceObserver((list) => {
      for (const entry of list.getEntries()) window.tasks.push(entry.duration);
    }).observe({ type: 'longtask' });
    window.frame = (at) => { window.frames.push(at); window.next = requestAnimationFrame(window.frame); };
    window.next = requestAnimationFrame(window.frame);
  `);
  const y = box.y + 30;
  await page.mouse.move(box.x + box.width / 2, y);
  await page.mouse.down();
  for (const to of [-600, -100, -700, -50, -500])
    await page.mouse.move(box.x + to, y, { steps: 40 });
  const { tasks, frames } = await page.evaluate<{ tasks: number[]; frames: number[] }>(
    `(cancelAnimationFrame(window.next), { tasks: window.tasks, frames: window.frames })`,
  );
  await page.mouse.up();
  const between = frames.slice(1).map((at, index) => at - (frames[index] ?? at));
  return {
    // Tasks of less than 50 ms are not told apart.
    longestTaskMs: Math.max(0, ...tasks),
    framesPerSecond: 1000 / median(between),
  };
}
