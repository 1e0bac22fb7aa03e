import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { pino } from 'pino';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import type { Planted } from '../../shared/contracts/demo.ts';
import type { InsideStay, Summary } from '../../shared/contracts/figures.ts';
import type { Upload } from '../../shared/contracts/uploads.ts';
import type { Zone } from '../../shared/contracts/zones.ts';
import { loadPlant } from '../../server/demo/load-plant.ts';
import { plantExports } from '../../server/demo/plant/exports.ts';
import { agreedCap, chamberSlots, span } from '../../server/demo/plant/plan.ts';
import { simulatePlant } from '../../server/demo/plant/simulate.ts';
import { startTestApp, type Agent, type TestApp } from '../support/app.ts';
import { auditOf } from '../support/audit.ts';

/** Ten seconds on a machine that does nothing else. */
const wholeLoadMs = 180_000;

let test: TestApp;
let agent: Agent;
let depot: number;

async function start() {
  test = await startTestApp();
  agent = await test.signIn('analyst@lowmoor.example');
  const sites = (await agent.get('/api/sites').expect(200)).body as { id: number; name: string }[];
  depot = sites.find(({ name }) => name === 'Main depot')?.id ?? 0;
}

const get = async <Body>(below: string, query: object = {}) =>
  (await agent.get(`/api/sites/${depot}${below}`).query(query).expect(200)).body as Body;

/** Loads, and answers what was said. */
async function load(folder?: string, stopping = new AbortController()): Promise<string[]> {
  const said: string[] = [];
  const work = { db: test.db, clock: test.clock, log: pino({ level: 'silent' }) };
  await loadPlant(work, (line) => said.push(line), stopping.signal, folder);
  return said;
}

const uploads = async () =>
  (await get<Upload[]>('/uploads')).map(({ fileName, status }) => `${fileName} ${status}`).sort();
const zoneOf = async (name: string) => {
  const found = (await get<Zone[]>('/zones')).find((zone) => zone.name === name);
  if (!found) throw new Error(`There is no zone named ${name}.`);
  return found;
};

describe('the demo plant, loaded through the intake', () => {
  const period = {
    from: new Date(span.from).toISOString(),
    to: new Date(span.until).toISOString(),
  };
  let said: string[];
  beforeAll(async () => {
    await start();
    said = await load();
  }, wholeLoadMs);
  afterAll(() => test.close());

  it('is told of line by line, and every row of its six files is taken', async () => {
    expect(said).toEqual(
      Array.from({ length: 6 }, (_, index) => `Loading the demo plant, file ${index + 1} of 6 …`),
    );
    const loaded = await get<Upload[]>('/uploads');
    expect(loaded.map(({ status }) => status)).toEqual(Array(6).fill('loaded'));
    for (const { account, receivedBy } of loaded) {
      expect(account).toMatchObject({ refused: 0, correcting: 0, skipped: 0 });
      expect(receivedBy).toBe('Ivo Quill');
    }
    const rows = loaded.reduce((sum, { account }) => sum + account.new, 0);
    const { length } = simulatePlant().filter(
      ({ arrived, finished, started }) =>
        (finished ?? started) > span.from && arrived <= span.until,
    );
    expect(rows).toBe(length);
    expect(loaded.at(-2)?.account.completing).toBeGreaterThan(20);
    expect(await auditOf(test, 'upload.create', loaded[0]?.id ?? 0)).toHaveLength(1);
  });

  it('shows what was planted in its figures', async () => {
    const summary = async (name: string) =>
      get<Summary>(`/zones/${(await zoneOf(name)).id}/summary`, period);
    expect((await summary('Burn-in')).wipPeak).toBe(chamberSlots);
    expect((await summary(agreedCap.name)).wipPeak).toBeGreaterThan(agreedCap.limit);
    const bench = await summary('Repair bench');
    expect((bench.wipEnd ?? 0) - (bench.wipStart ?? 0)).toBeGreaterThan(60);
    const lost = simulatePlant().filter(({ finished }) => finished === null);
    const { id } = await zoneOf('Dispatch');
    const inside = await get<{ stays: InsideStay[] }>(`/zones/${id}/inside`, {
      at: new Date(span.until - 1).toISOString(),
      limit: lost.length,
    });
    expect(inside.stays.map(({ jobKey }) => jobKey).sort()).toEqual(
      lost.map(({ job }) => job).sort(),
    );
  });

  it('has the loop whose cap was agreed, with the cap from the first day on', async () => {
    const loop = await zoneOf(agreedCap.name);
    expect(loop).toMatchObject({
      kind: 'loop',
      state: 'ready',
      cap: { limit: agreedCap.limit, unit: 'jobs', from: period.from },
    });
    expect(loop.areaIds).toEqual([
      (await zoneOf('Calibration')).id,
      (await zoneOf('Final check')).id,
    ]);
    for (const action of ['zone.create', 'cap.declare'])
      expect(await auditOf(test, action, loop.id)).toHaveLength(1);
  });

  it('tells at its depot what is planted, with where and when, and nowhere else', async () => {
    const { planted } = await get<{ planted: Planted[] }>('/planted');
    expect(planted.map(({ kind, zones }) => [kind, zones.map(({ name }) => name)])).toEqual([
      ['rising', ['Repair bench']],
      ['held', ['Burn-in']],
      ['overrun', [agreedCap.name]],
      ['lost-finishes', ['Dispatch']],
    ]);
    const made = await agent.post('/api/sites').send({ name: 'Annex', timeZone: 'UTC' });
    const annex = made.body as { id: number };
    const other = await agent.get(`/api/sites/${annex.id}/planted`).expect(200);
    expect(other.body).toEqual({ planted: null });
  });

  it('is not loaded again at the next start', async () => {
    expect(await load()).toEqual([]);
    expect(await uploads()).toHaveLength(6);
    expect((await get<Zone[]>('/zones')).filter(({ kind }) => kind === 'loop')).toHaveLength(1);
  });
});

describe('the loading of the demo plant', () => {
  let folder: string;
  beforeAll(() => {
    folder = mkdtempSync(path.join(os.tmpdir(), 'plant-'));
    for (const { fileName, text } of plantExports().slice(0, 3))
      writeFileSync(path.join(folder, fileName), `${text.split('\n').slice(0, 200).join('\n')}\n`);
  });
  afterAll(() => {
    rmSync(folder, { recursive: true });
  });
  beforeEach(start);
  afterEach(() => test.close());

  const three = ['06', '07', '08'].map((month) => `lowmoor-2026-${month}.csv loaded`);
  const line = (number: number) => `Loading the demo plant, file ${number} of 3 …`;

  it('that was broken off goes on with what is missing', async () => {
    const stopping = new AbortController();
    const said: string[] = [];
    const work = { db: test.db, clock: test.clock, log: pino({ level: 'silent' }) };
    const broken = loadPlant(
      work,
      (told) => {
        said.push(told);
        if (said.length === 2) stopping.abort();
      },
      stopping.signal,
      folder,
    );
    await expect(broken).rejects.toThrow('aborted');
    expect(await uploads()).toEqual([
      'lowmoor-2026-06.csv loaded',
      expect.stringMatching(/^lowmoor-2026-07\.csv (waiting|reading|loading)$/),
    ]);
    expect(await load(folder)).toEqual([line(2), line(3)]);
    expect(await uploads()).toEqual(three);
  });

  it('is done once where several servers start together', async () => {
    const said = await Promise.all([load(folder), load(folder), load(folder)]);
    expect(said.flat()).toEqual([line(1), line(2), line(3)]);
    expect(await uploads()).toEqual(three);
  });

  it('leaves a depot alone that has an upload of a person', async () => {
    await agent
      .post(`/api/sites/${depot}/uploads`)
      .attach('file', Buffer.from('job,area,start\nJ1,Receiving,2026-06-01 08:00\n'), 'own.csv')
      .expect(202);
    await test.settled();
    expect(await load(folder)).toEqual([]);
    expect(await uploads()).toEqual(['own.csv loaded']);
    expect((await get<Zone[]>('/zones')).some(({ kind }) => kind === 'loop')).toBe(false);
  });

  it('does not bring back what a person withdrew', async () => {
    await load(folder);
    const [latest] = await get<Upload[]>('/uploads');
    await agent.delete(`/api/sites/${depot}/uploads/${latest?.id}`).expect(202);
    await test.settled();
    expect(await load(folder)).toEqual([]);
    expect(await uploads()).toEqual([...three.slice(0, 2), 'lowmoor-2026-08.csv withdrawn']);
  });
});
