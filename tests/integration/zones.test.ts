import request from 'supertest';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import type { Zone } from '../../shared/contracts/zones.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { auditOf } from '../support/audit.ts';
import { fieldsOf } from '../support/problem.ts';
import { makeSite, type TestSite } from '../support/site.ts';

let test: TestApp;
let site: TestSite;
beforeAll(async () => {
  test = await startTestApp();
});
beforeEach(async () => {
  site = await makeSite(test);
});
afterAll(() => test.close());

const make = (body: object) => site.agent.post(`/api/sites/${site.id}/zones`).send(body);
const change = (zoneId: number, body: object) =>
  site.agent.patch(`/api/sites/${site.id}/zones/${zoneId}`).send(body);
const zoneOf = (response: request.Response) => response.body as Zone;
const makeArea = async (name: string) => zoneOf(await make({ kind: 'area', name }).expect(201));
const log =
  'job,area,arrived,start,finish\n' +
  'J1,Bench,2026-10-24T00:00Z,2026-10-24T02:00Z,2026-10-24T04:00Z\n' +
  'J1,Oven,2026-10-24T04:00Z,2026-10-24T05:00Z,2026-10-24T06:00Z\n';

describe('the zones of a site', () => {
  it('are its areas in order of flow, its loops, and the site itself', async () => {
    await site.upload(log);
    const [bench, oven] = [await site.zone('Bench'), await site.zone('Oven')];
    await make({ kind: 'loop', name: 'Heat', areaIds: [oven.id] }).expect(201);
    await change(bench.id, { position: 9 }).expect(200);
    await test.settled();
    const zones = await site.zones();
    expect(zones.map((zone) => [zone.kind, zone.name])).toEqual([
      ['area', 'Oven'],
      ['area', 'Bench'],
      ['loop', 'Heat'],
      ['site', expect.stringMatching(/^Site \d+$/)],
    ]);
    expect(zones.map((zone) => zone.areaIds)).toEqual([
      [oven.id],
      [bench.id],
      [oven.id],
      [oven.id, bench.id],
    ]);
    expect(zones.every((zone) => zone.state === 'ready' && zone.cap === null)).toBe(true);
    expect(await site.get(`/zones/${bench.id}`)).toEqual(zones[1]);
  });

  it('are those of the demo depot, in order', async () => {
    const response = await site.agent.get('/api/sites/1/zones').expect(200);
    expect((response.body as Zone[]).map((zone) => zone.name)).toEqual([
      'Receiving',
      'Strip-down',
      'Cleaning',
      'Repair bench',
      'Burn-in',
      'Calibration',
      'Final check',
      'Dispatch',
      'Main depot',
    ]);
  });
});

describe('an area', () => {
  it('that was declared takes the rows that name it, however they write it', async () => {
    const bench = await makeArea('Bench');
    expect(bench).toMatchObject({ kind: 'area', areaIds: [bench.id], position: 1, state: 'ready' });
    await site.upload(log.replaceAll('Bench', ' BENCH '));
    expect((await site.zones()).map((zone) => zone.name)).toEqual([
      'Bench',
      'Oven',
      expect.anything(),
    ]);
    const [entry] = await auditOf(test, 'zone.create', bench.id);
    expect(entry).toMatchObject({ siteId: site.id, before: null, after: { name: 'Bench' } });
  });

  it('is refused where another is written so', async () => {
    await makeArea('Repair bench');
    const response = await make({ kind: 'area', name: 'repair  BENCH' }).expect(409);
    expect((response.body as { detail: string }).detail).toContain('“Repair bench”');
  });

  it('of many made at once under one name, is one', async () => {
    const made = await Promise.all(
      Array.from({ length: 6 }, () => make({ kind: 'area', name: 'Twin' })),
    );
    expect(made.map((each) => each.status).sort()).toEqual([201, 409, 409, 409, 409, 409]);
  });

  it('that is renamed is found under its old name and its new one', async () => {
    const bench = await makeArea('Bench');
    const oven = await makeArea('Oven');
    expect(zoneOf(await change(bench.id, { name: 'Repair' }).expect(200)).name).toBe('Repair');
    await site.upload(log);
    await site.upload(log.replaceAll('J1', 'J2').replaceAll('Bench', 'Repair'));
    expect((await site.zones()).map((zone) => zone.name)).toEqual([
      'Repair',
      'Oven',
      expect.anything(),
    ]);
    await change(oven.id, { name: 'repair' }).expect(409);
    await change(oven.id, { name: 'bench' }).expect(409);
    await change(oven.id, { name: 'OVEN' }).expect(200);
  });
});

describe('a loop', () => {
  it('is derived in the background and then has its figures', async () => {
    await site.upload(log);
    const [bench, oven] = [await site.zone('Bench'), await site.zone('Oven')];
    const loop = zoneOf(
      await make({ kind: 'loop', name: 'Both', areaIds: [oven.id, bench.id, oven.id] }).expect(201),
    );
    expect(loop).toMatchObject({ state: 'deriving', areaIds: [bench.id, oven.id] });
    await test.settled();
    expect(await site.zone('Both')).toMatchObject({ state: 'ready' });
    const both = await site.summary(loop.id, '2026-10-24T00:00:00Z', '2026-10-24T06:00:00Z');
    // By hand: J1 is inside from 0 to 6 without a gap.
    expect(both).toMatchObject({ wipMean: 1, arrivals: 1, departures: 0 });
  });

  it('spans areas of its site only', async () => {
    const bench = await makeArea('Bench');
    const foreign = await site.agent.get('/api/sites/1/zones').expect(200);
    const [receiving] = foreign.body as Zone[];
    const refused = await make({
      kind: 'loop',
      name: 'Mixed',
      areaIds: [bench.id, receiving?.id, 999_999],
    }).expect(400);
    expect(fieldsOf(refused)).toEqual(['areaIds']);
    await make({ kind: 'loop', name: 'None', areaIds: [] }).expect(400);
    expect((await site.zones()).some((zone) => zone.kind === 'loop')).toBe(false);
  });

  it('has a name of its own, also against many at once', async () => {
    const { id } = await makeArea('Bench');
    const made = await Promise.all(
      Array.from({ length: 6 }, () => make({ kind: 'loop', name: 'Twin', areaIds: [id] })),
    );
    expect(made.map((each) => each.status).sort()).toEqual([201, 409, 409, 409, 409, 409]);
    // Areas and loops may share one.
    const loop = zoneOf(await make({ kind: 'loop', name: 'Bench', areaIds: [id] }).expect(201));
    await change(loop.id, { name: 'twin' }).expect(409);
    await test.settled();
  });
});

describe('changing a zone', () => {
  it('to count from the start turns it to deriving until figures agree', async () => {
    await site.upload(log);
    const { id } = await site.zone('Bench');
    const wip = async () =>
      (await site.summary(id, '2026-10-24T00:00:00Z', '2026-10-24T04:00:00Z')).wipMean;
    expect(await wip()).toBe(1);
    const changed = await change(id, { countsFrom: 'start' }).expect(200);
    expect(zoneOf(changed)).toMatchObject({ state: 'deriving', countsFrom: 'start' });
    expect(await site.get('')).toMatchObject({ busy: true });
    await test.settled();
    expect(await site.zone('Bench')).toMatchObject({ state: 'ready' });
    // By hand: from its start at 2 to its finish at 4, of four hours.
    expect(await wip()).toBe(0.5);
    const [entry] = await auditOf(test, 'zone.change', id);
    expect(entry).toMatchObject({
      requestId: changed.headers['x-request-id'],
      before: { countsFrom: 'arrival' },
      after: { countsFrom: 'start' },
    });
    expect(zoneOf(await change(id, { countsFrom: 'start' })).state).toBe('ready');
  });

  it('keeps the number of servers with the date from which it holds', async () => {
    const { id } = await makeArea('Bench');
    expect(zoneOf(await change(id, { servers: 2 }).expect(200)).servers).toBe(2);
    const later = { servers: 3, serversFrom: '2026-10-01T00:00:00+01:00' };
    expect(zoneOf(await change(id, later).expect(200)).servers).toBe(3);
    const { rows } = await test.migrating.$client.query(
      `select amount::float, valid_from from zone_fact where zone_id = $1 order by valid_from`,
      [id],
    );
    expect(rows).toEqual([
      { amount: 2, valid_from: new Date('1950-01-01T00:00:00Z') },
      { amount: 3, valid_from: new Date('2026-09-30T23:00:00Z') },
    ]);
    expect(zoneOf(await change(id, { servers: null }).expect(200)).servers).toBe(null);
  });

  it('refuses what does not go with such a zone, all at once', async () => {
    const { id } = await makeArea('Bench');
    const whole = (await site.zones()).find((zone) => zone.kind === 'site');
    const ofSite = await change(whole?.id ?? 0, {
      name: 'Other',
      position: 1,
      areaIds: [id],
      serversFrom: '2026-10-01T00:00:00Z',
    }).expect(400);
    expect(fieldsOf(ofSite)).toEqual(['areaIds', 'name', 'position', 'serversFrom']);
    const ofArea = await change(id, { servers: 0, countsFrom: 'finish', name: '' }).expect(400);
    expect(fieldsOf(ofArea)).toEqual(['countsFrom', 'name', 'servers']);
    expect(await auditOf(test, 'zone.change', id)).toEqual([]);
  });

  it('refuses a date that no database holds', async () => {
    const { id } = await makeArea('Bench');
    for (const serversFrom of [
      '0000-01-01T00:00:00Z',
      '9999-12-31T23:59:59-14:00',
      '2026-02-30T00:00:00Z',
      'yesterday',
    ])
      expect(fieldsOf(await change(id, { servers: 2, serversFrom }).expect(400))).toEqual([
        'serversFrom',
      ]);
  });

  it('stays as it is where nothing is asked for', async () => {
    const { id } = await makeArea('Bench');
    await change(id, {}).expect(200);
    expect(await auditOf(test, 'zone.change', id)).toEqual([]);
  });
});

describe('zones', () => {
  it('are kept from strangers, from roles that may not change them, and from other sites', async () => {
    const { id } = await makeArea('Bench');
    const path = `/api/sites/${site.id}/zones`;
    await request(test.app).get(path).expect(401);
    await request(test.app).patch(`${path}/${id}`).send({ name: 'X' }).expect(401);
    for (const role of ['supervisor', 'consultant']) {
      const agent = await test.signIn(`${role}@lowmoor.example`);
      await agent.get(path).expect(200);
      await agent.post(path).send({ kind: 'area', name: 'Y' }).expect(403);
      await agent.patch(`${path}/${id}`).send({ servers: 1 }).expect(403);
    }
    const other = await test.signIn('analyst@fellgate.example');
    await other.get(path).expect(404);
    await other.post(path).send({ kind: 'area', name: 'Y' }).expect(404);
    // The zone exists, under another site.
    await site.agent.get(`/api/sites/1/zones/${id}`).expect(404);
    await site.agent.patch(`/api/sites/1/zones/${id}`).send({ servers: 1 }).expect(404);
    await other.get(`/api/sites/2/zones/${id}`).expect(404);
  });
});
