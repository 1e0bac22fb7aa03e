import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { SetUp } from '../../shared/contracts/set-up.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { auditOf } from '../support/audit.ts';
import { fieldsOf } from '../support/problem.ts';
import { makeSite, type TestSite } from '../support/site.ts';

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

const hour = (at: number) => new Date(Date.UTC(2026, 9, 5) + at * 3_600_000).toISOString();

/**
 * Forty jobs go from Sawing to one of two lathes, then to Washing, which takes two at once; every tenth comes
 * back to Sawing. The rows come in an order that tells nothing.
 */
function log(): string {
  const rows = Array.from({ length: 40 }, (_, index) => {
    const from = index;
    const lathe = index % 2 === 0 ? 'Lathe A' : 'Lathe B';
    const way = [
      [`J${index}`, 'Sawing', hour(from), hour(from + 1)],
      [`J${index}`, lathe, hour(from + 1), hour(from + 2.5)],
      [`J${index}`, 'Washing', hour(from + 3), hour(from + 5)],
      ...(index % 10 === 0 ? [[`J${index}`, 'Sawing', hour(from + 5), hour(from + 5.5)]] : []),
    ];
    return way.map((row) => row.join(','));
  }).flat();
  const mixed = rows
    .map((row, index) => ({ row, rank: (index * 7919) % rows.length }))
    .sort((one, other) => one.rank - other.rank)
    .map(({ row }) => row);
  return ['job,area,started,finished', ...mixed, ''].join('\n');
}

async function loadedSite(): Promise<TestSite> {
  const site = await makeSite(test);
  await site.upload(log());
  return site;
}

const confirm = (site: TestSite, body: object) =>
  site.agent.post(`/api/sites/${site.id}/set-up`).send(body);

describe('the set-up of a site with data', () => {
  it('guesses the order of areas, which of them work side by side, and their servers', async () => {
    const site = await loadedSite();
    const setUp = await site.get<SetUp>('/set-up');
    expect(setUp.confirmed).toBe(false);
    const byName = new Map(setUp.areas.map((area) => [area.name, area]));
    expect(byName.get('Sawing')?.guessedPosition).toBe(1);
    expect(byName.get('Lathe A')?.guessedPosition).toBe(2);
    expect(byName.get('Lathe B')?.guessedPosition).toBe(2);
    expect(byName.get('Washing')).toMatchObject({ guessedPosition: 3, guessedServers: 2 });
    expect(byName.get('Lathe A')).toMatchObject({ servers: null, guessedServers: 1 });
  });

  it('is as a person confirms it, from then on, and stands in the audit trail', async () => {
    const site = await loadedSite();
    const setUp = await site.get<SetUp>('/set-up');
    const areas = setUp.areas.map(({ zoneId, guessedPosition, guessedServers }) => ({
      zoneId,
      position: guessedPosition,
      servers: guessedServers,
    }));
    const confirmed = await confirm(site, { areas }).expect(200);
    expect(confirmed.body).toMatchObject({ confirmed: true });
    const zones = await site.zones();
    expect(zones.map((zone) => [zone.name, zone.position]).slice(0, 4)).toEqual([
      ['Sawing', 1],
      ['Lathe A', 2],
      ['Lathe B', 2],
      ['Washing', 3],
    ]);
    expect((await site.zone('Washing')).servers).toBe(2);
    const entries = await auditOf(test, 'zone.change', site.id);
    expect(entries).toContainEqual(
      expect.objectContaining({
        subjectKind: 'set-up',
        siteId: site.id,
        after: expect.objectContaining({ confirmed: true }) as unknown,
      }),
    );
  });

  it('is empty and confirmed where there are no areas', async () => {
    const site = await makeSite(test);
    expect(await site.get('/set-up')).toEqual({ confirmed: true, areas: [] });
  });

  it('is not taken by halves: all that is wrong is told at once, and nothing is changed', async () => {
    const site = await loadedSite();
    const before = await site.zones();
    const [first] = before;
    const incomplete = await confirm(site, {
      areas: [
        { zoneId: first?.id, position: 3, servers: null },
        { zoneId: first?.id, position: 1, servers: null },
        { zoneId: 999_999, position: 1, servers: null },
      ],
    }).expect(400);
    expect(fieldsOf(incomplete)).toEqual(['areas', 'areas.1.zoneId', 'areas.2.zoneId']);
    const wrong = await confirm(site, {
      areas: [{ zoneId: first?.id, position: 0, servers: 1.5 }],
    }).expect(400);
    expect(fieldsOf(wrong)).toEqual(['areas.0.position', 'areas.0.servers']);
    expect(await site.zones()).toEqual(before);
  });

  it('is read by members only, and confirmed by analysts and admins only', async () => {
    const site = await loadedSite();
    const path = `/api/sites/${site.id}/set-up`;
    await request(test.app).get(path).expect(401);
    for (const email of ['supervisor@lowmoor.example', 'consultant@lowmoor.example']) {
      const agent = await test.signIn(email);
      await agent.get(path).expect(200);
      await agent.post(path).send({ areas: [] }).expect(403);
    }
    const other = await test.signIn('analyst@fellgate.example');
    await other.get(path).expect(404);
    await other.post(path).send({ areas: [] }).expect(404);
  });
});
