import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Planted } from '../../shared/contracts/demo.ts';
import type { SiteSpan } from '../../shared/contracts/figures.ts';
import type { Site } from '../../shared/contracts/sites.ts';
import type { Upload } from '../../shared/contracts/uploads.ts';
import { loadPlant } from '../../server/demo/load-plant.ts';
import { createLog } from '../../server/log.ts';
import { startTestApp, type Agent, type TestApp } from '../support/app.ts';

let test: TestApp;
let analyst: Agent;
let depot: string;
const folder = `${mkdtempSync(path.join(os.tmpdir(), 'weirmark-plant-'))}/`;
const row = (job: string, from: string, to: string) => `${job},Repair bench,${from},${to}\n`;
const header = 'job,area,started,finished\n';

beforeAll(async () => {
  test = await startTestApp();
  analyst = await test.signIn('analyst@lowmoor.example');
  const sites = (await analyst.get('/api/sites')).body as Site[];
  depot = `/api/sites/${sites.find((site) => site.name === 'Main depot')?.id ?? 0}`;
  writeFileSync(
    `${folder}lowmoor-2026-06.csv`,
    header + row('A', '2026-06-01T06:00Z', '2026-06-01T09:00Z'),
  );
  writeFileSync(
    `${folder}lowmoor-2026-07.csv`,
    header + row('B', '2026-07-01T06:00Z', '2026-07-01T09:00Z'),
  );
});
afterAll(async () => {
  rmSync(folder, { recursive: true });
  await test.close();
});

async function load(stopping = new AbortController().signal): Promise<string[]> {
  const lines: string[] = [];
  const work = { db: test.db, clock: { now: () => new Date() }, log: createLog('silent') };
  await loadPlant(work, (line) => lines.push(line), stopping, folder);
  return lines;
}

const uploads = async () => (await analyst.get(`${depot}/uploads`)).body as Upload[];

describe('the demo plant', () => {
  it('is not there before it is loaded', async () => {
    expect((await analyst.get(`${depot}/planted`)).body).toEqual({ planted: null });
  });

  it('goes on with what is missing, where loading was broken off', async () => {
    const stopped = new AbortController();
    stopped.abort();
    await expect(load(stopped.signal)).rejects.toThrow();
    expect((await uploads()).map(({ status }) => status)).toEqual(['waiting']);
    expect(await load()).toEqual([
      'Loading the demo plant, file 1 of 2 …',
      'Loading the demo plant, file 2 of 2 …',
    ]);
    expect((await uploads()).map(({ fileName, status }) => [fileName, status])).toEqual([
      ['lowmoor-2026-07.csv', 'loaded'],
      ['lowmoor-2026-06.csv', 'loaded'],
    ]);
  });

  it('is loaded once, by servers that start together too', async () => {
    expect(await Promise.all([load(), load()])).toEqual([[], []]);
    expect(await uploads()).toHaveLength(2);
  });

  it('says what is planted, to members of its organisation', async () => {
    const { planted } = (await analyst.get(`${depot}/planted`)).body as { planted: Planted[] };
    expect(planted.map(({ kind, zones }) => [kind, zones.map(({ name }) => name)])).toEqual([
      ['rising', ['Repair bench']],
      ['held', ['Burn-in']],
      ['overrun', ['Calibration + Final check']],
      ['lost-finishes', ['Dispatch']],
    ]);
  });

  it('has a span with the gap between its exports', async () => {
    const span = (await analyst.get(`${depot}/span`)).body as SiteSpan;
    expect(span).toMatchObject({
      from: '2026-06-01T06:00:00.000Z',
      until: '2026-07-01T09:00:00.000Z',
      gaps: [{ from: '2026-06-01T23:00:00.000Z', to: '2026-06-30T23:00:00.000Z' }],
    });
  });

  it('is left alone where somebody else has uploaded to the depot', async () => {
    await analyst
      .post(`${depot}/uploads`)
      .attach('file', Buffer.from(header + row('C', '2026-07-02T06:00Z', '')), 'own.csv')
      .expect(202);
    await test.settled();
    writeFileSync(
      `${folder}lowmoor-2026-08.csv`,
      header + row('D', '2026-08-01T06:00Z', '2026-08-01T09:00Z'),
    );
    expect(await load()).toEqual([]);
  });
});
