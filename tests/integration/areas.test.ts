import request from 'supertest';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import type { AreaMove, Areas } from '../../shared/contracts/areas.ts';
import type { SetUp } from '../../shared/contracts/set-up.ts';
import type { Zone } from '../../shared/contracts/zones.ts';
import { withTenant } from '../../server/db/tenant.ts';
import { cap } from '../../server/db/schema/zones.ts';
import { startTestApp, testNow, type TestApp } from '../support/app.ts';
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

const header = 'job,area,started,finished\n';
/** Jobs pass the bench, under its first name and, later, under its second; then the oven. */
const first = `${header}J1,Repair bench,2026-10-01T01:00Z,2026-10-01T03:00Z
J1,Oven,2026-10-01T04:00Z,2026-10-01T05:00Z
J2,repair BENCH,2026-10-02T01:00Z,2026-10-02T03:00Z
`;
const second = `${header}J3,Repair benches,2026-10-05T01:00Z,2026-10-05T03:00Z
J3,Oven,2026-10-05T04:00Z,2026-10-05T05:00Z
`;

const areasOf = () => site.get<Areas>('/areas');
const idOf = async (name: string) => {
  const found = (await areasOf()).areas.find((area) => area.name === name);
  if (!found) throw new Error(`There is no area named ${name}.`);
  return found.id;
};
const ask = async (name: string, target: string, from: string | null = null) =>
  site.agent
    .post(`/api/sites/${site.id}/area-moves`)
    .send({ areaId: await idOf(name), targetAreaId: await idOf(target), from });
const move = async (name: string, target: string, from: string | null = null) => {
  const response = await ask(name, target, from);
  expect([response.status, response.body]).toEqual([201, expect.anything()]);
  await test.settled();
  return response.body as AreaMove;
};
const undo = (moveId: number) => site.agent.delete(`/api/sites/${site.id}/area-moves/${moveId}`);
const detailOf = (response: request.Response) => (response.body as { detail: string }).detail;
const namesOf = (zones: { name: string }[]) => zones.map((zone) => zone.name);

describe('the areas of a site', () => {
  it('are told with their spellings, their rows and the time over which they are told of', async () => {
    await site.upload(first);
    await site.upload(second);
    const { areas, moves } = await areasOf();
    expect(moves).toEqual([]);
    expect(areas).toEqual([
      expect.objectContaining({
        name: 'Repair bench',
        position: 1,
        servers: null,
        spellings: ['Repair bench'],
        toldRows: 2,
        rows: 2,
        firstAt: '2026-10-01T01:00:00.000Z',
        latestAt: '2026-10-02T03:00:00.000Z',
        mergedInto: null,
      }),
      expect.objectContaining({ name: 'Oven', position: 2, rows: 2 }),
      expect.objectContaining({ name: 'Repair benches', position: 3, rows: 1 }),
    ]);
  });

  it('are none where nothing was uploaded', async () => {
    expect(await areasOf()).toEqual({ areas: [], moves: [], likelyPairs: [] });
  });

  it('bear the latest number of servers and the date from which it holds', async () => {
    await site.upload(first);
    const id = await idOf('Oven');
    const change = (body: object) =>
      site.agent.patch(`/api/sites/${site.id}/zones/${id}`).send(body).expect(200);
    await change({ servers: 2 });
    expect((await areasOf()).areas[1]).toMatchObject({ servers: 2, serversFrom: null });
    await change({ servers: 3, serversFrom: '2026-10-02T00:00:00Z' });
    expect((await areasOf()).areas[1]).toMatchObject({
      servers: 3,
      serversFrom: '2026-10-02T00:00:00.000Z',
    });
  });
});

describe('a merge', () => {
  it('moves all rows, hides the area, and is undone', async () => {
    await site.upload(first);
    await site.upload(second);
    const before = await areasOf();
    const zonesBefore = await site.zones();
    const made = await move('Repair benches', 'Repair bench');
    expect(made).toMatchObject({
      areaName: 'Repair benches',
      targetAreaName: 'Repair bench',
      from: null,
      rows: 1,
      movedBy: 'Ivo Quill',
      movedAt: testNow.toISOString(),
    });
    const { areas, moves } = await areasOf();
    expect(moves).toEqual([made]);
    expect(areas.find((area) => area.name === 'Repair bench')).toMatchObject({
      toldRows: 2,
      rows: 3,
      latestAt: '2026-10-05T03:00:00.000Z',
    });
    expect(areas.find((area) => area.name === 'Repair benches')).toMatchObject({
      toldRows: 1,
      rows: 0,
      firstAt: null,
      mergedInto: made.targetAreaId,
    });
    const zones = await site.zones();
    expect(namesOf(zones).slice(0, -1)).toEqual(['Repair bench', 'Oven']);
    expect(zones.at(-1)?.areaIds).toHaveLength(2);
    const bench = await site.summary(
      made.targetAreaId,
      '2026-10-01T00:00:00Z',
      '2026-10-06T00:00:00Z',
    );
    expect(bench.arrivals).toBe(3);
    const period = { from: '2026-10-01T00:00:00Z', to: '2026-10-06T00:00:00Z' };
    const floor = await site.get<{ rows: { zone: Zone }[] }>('/floor', period);
    expect(namesOf(floor.rows.map((row) => row.zone))).not.toContain('Repair benches');
    const setUp = await site.get<SetUp>('/set-up');
    expect(namesOf(setUp.areas)).toEqual(['Repair bench', 'Oven']);
    await undo(made.id).expect(204);
    await test.settled();
    expect(await areasOf()).toEqual(before);
    expect(await site.zones()).toEqual(zonesBefore);
  });

  it('is of a row that was loaded before and of one that comes later', async () => {
    await site.upload(first);
    await site.upload(second);
    await move('Repair benches', 'Repair bench');
    await site.upload(second.replaceAll('J3', 'J4'));
    expect((await areasOf()).moves).toMatchObject([{ rows: 2 }]);
    // The same record under either name is one.
    const again = await site.upload(second.replaceAll('benches', 'bench'));
    expect(again.account).toMatchObject({ new: 0, same: 2 });
  });

  it('keeps the site busy until figures agree, and stands in the audit trail, as its undoing does', async () => {
    await site.upload(first);
    const response = await ask('Repair bench', 'Oven');
    const made = response.body as AreaMove;
    expect(await site.get('')).toMatchObject({ busy: true });
    await test.settled();
    expect(await site.get('')).toMatchObject({ busy: false });
    await undo(made.id).expect(204);
    expect(await site.get('')).toMatchObject({ busy: true });
    await test.settled();
    const [done, undone] = await auditOf(test, 'area.move', made.id);
    expect(done).toMatchObject({
      siteId: site.id,
      subjectKind: 'area move',
      requestId: response.headers['x-request-id'],
      before: null,
      after: { areaName: 'Repair bench', targetAreaName: 'Oven' },
    });
    expect(undone).toMatchObject({ before: { areaName: 'Repair bench' }, after: null });
    await undo(made.id).expect(404);
  });

  it('leads on where its target is merged in turn, and each is undone by itself', async () => {
    await site.upload(first);
    await site.upload(second);
    const one = await move('Repair benches', 'Repair bench');
    const other = await move('Repair bench', 'Oven');
    expect((await areasOf()).areas.map((area) => [area.name, area.rows])).toEqual([
      ['Repair bench', 0],
      ['Oven', 5],
      ['Repair benches', 0],
    ]);
    await undo(one.id).expect(204);
    await test.settled();
    expect((await areasOf()).areas.map((area) => area.rows)).toEqual([0, 4, 1]);
    await undo(other.id).expect(204);
    await test.settled();
    expect((await areasOf()).areas.map((area) => area.rows)).toEqual([2, 2, 1]);
  });

  it('leaves a confirmed order as it is, and its area unconfirmed', async () => {
    await site.upload(first);
    const two = await site.upload(second);
    await move('Repair benches', 'Repair bench');
    const { areas } = await site.get<SetUp>('/set-up');
    await site.agent
      .post(`/api/sites/${site.id}/set-up`)
      .send({
        areas: areas.map(({ zoneId, position, servers }) => ({ zoneId, position, servers })),
      })
      .expect(200);
    expect(await site.get('/set-up')).toMatchObject({ confirmed: true });
    // Nobody has said that there is such an area: it goes with the upload that brought it.
    await site.withdraw(two.id);
    expect(namesOf((await areasOf()).areas)).toEqual(['Repair bench', 'Oven']);
  });
});

describe('a move from a date', () => {
  it('moves the rows that start then or later, and leaves both areas in place', async () => {
    await site.upload(first);
    const made = await move('Repair bench', 'Oven', '2026-10-02T02:00:00+01:00');
    expect(made).toMatchObject({ from: '2026-10-02T01:00:00.000Z', rows: 1 });
    const { areas } = await areasOf();
    expect(areas).toMatchObject([
      { name: 'Repair bench', toldRows: 2, rows: 1, latestAt: '2026-10-01T03:00:00.000Z' },
      { name: 'Oven', toldRows: 1, rows: 2, latestAt: '2026-10-02T03:00:00.000Z' },
    ]);
    expect(areas.map((area) => area.mergedInto)).toEqual([null, null]);
    expect(namesOf(await site.zones()).slice(0, -1)).toEqual(['Repair bench', 'Oven']);
    const job = await site.get<{ records: { areaName: string }[] }>('/jobs/J2');
    expect(job.records).toMatchObject([{ areaName: 'Oven' }]);
  });

  it('stands beside a merge, and each takes its own rows', async () => {
    await site.upload(first);
    await site.upload(second);
    await move('Repair bench', 'Oven', '2026-10-02T00:00:00Z');
    await move('Repair bench', 'Repair benches');
    expect((await areasOf()).moves.map((each) => [each.from, each.rows])).toEqual([
      ['2026-10-02T00:00:00.000Z', 1],
      [null, 1],
    ]);
  });
});

describe('a move is refused', () => {
  beforeEach(() => site.upload(first).then(() => site.upload(second)));

  it('of or to what is no area of the site, to itself, and from what is no date', async () => {
    const path = `/api/sites/${site.id}/area-moves`;
    const send = (body: object) => site.agent.post(path).send(body).expect(400);
    const whole = (await site.zones()).at(-1)?.id;
    expect(fieldsOf(await send({ areaId: whole, targetAreaId: 999_999, from: null }))).toEqual([
      'areaId',
      'targetAreaId',
    ]);
    const id = await idOf('Oven');
    expect(fieldsOf(await send({ areaId: id, targetAreaId: id, from: null }))).toEqual([
      'targetAreaId',
    ]);
    expect(fieldsOf(await send({ areaId: id, targetAreaId: 1, from: '3 August' }))).toContain(
      'from',
    );
    expect(fieldsOf(await send({}))).toEqual(['areaId', 'from', 'targetAreaId']);
    expect(await site.get('')).toMatchObject({ busy: false });
  });

  it('where there is one already, in either direction, or from the same moment', async () => {
    await move('Repair benches', 'Repair bench');
    const again = await ask('Repair benches', 'Oven');
    expect([again.status, detailOf(again)]).toEqual([
      409,
      '“Repair benches” is merged into “Repair bench” already. Take that back first.',
    ]);
    const back = await ask('Repair bench', 'Repair benches');
    expect([back.status, detailOf(back)]).toEqual([
      409,
      '“Repair benches” is itself merged into “Repair bench”. Choose that one, or take the merge back first.',
    ]);
    const august = '2026-08-01T00:00:00Z';
    await move('Oven', 'Repair bench', august);
    expect((await ask('Oven', 'Repair bench', august)).status).toBe(409);
    const circle = await ask('Repair bench', 'Oven');
    expect([circle.status, detailOf(circle)]).toEqual([
      409,
      'Rows of “Oven” count as “Repair bench” already, so it cannot be the other way round too. Take that back first.',
    ]);
  });

  it('where a loop would lose the rows, until the loop names both', async () => {
    const loop = await site.agent
      .post(`/api/sites/${site.id}/zones`)
      .send({ kind: 'loop', name: 'Front', areaIds: [await idOf('Repair benches')] })
      .expect(201);
    await test.settled();
    const refused = await ask('Repair benches', 'Repair bench');
    expect([refused.status, detailOf(refused)]).toEqual([
      409,
      'The loop “Front” names “Repair benches” and not “Repair bench”, so it would lose these rows. Put “Repair bench” into the loop first, or take “Repair benches” out of it.',
    ]);
    const path = `/api/sites/${site.id}/zones/${(loop.body as Zone).id}`;
    const both = [await idOf('Repair benches'), await idOf('Repair bench')];
    await site.agent.patch(path).send({ areaIds: both }).expect(200);
    const { id } = await move('Repair benches', 'Repair bench');
    // Changed in between, the loop has the merged area again when the merge is taken back.
    expect(fieldsOf(await site.agent.patch(path).send({ areaIds: both }).expect(400))).toEqual([
      'areaIds',
    ]);
    const changed = [await idOf('Repair bench'), await idOf('Oven')];
    await site.agent.patch(path).send({ areaIds: changed }).expect(200);
    await test.settled();
    expect((await site.zone('Front')).areaIds).toHaveLength(2);
    await undo(id).expect(204);
    await test.settled();
    expect((await site.zone('Front')).areaIds).toHaveLength(3);
  });

  it('where the area has a cap, which would hold for nothing', async () => {
    const zoneId = await idOf('Repair benches');
    const declare = (limit: string | null, validFrom: string) =>
      withTenant(test.db, 1, (tx) =>
        tx.insert(cap).values({
          organisationId: 1,
          siteId: site.id,
          zoneId,
          limit,
          unit: 'jobs',
          validFrom: new Date(validFrom),
          declaredAt: testNow,
        }),
      );
    await declare('12', '2026-10-01T00:00:00Z');
    const refused = await ask('Repair benches', 'Repair bench');
    expect([refused.status, detailOf(refused)]).toEqual([
      409,
      '“Repair benches” has a cap of 12 jobs, which would hold for no area that is shown. Lift it first, or merge “Repair bench” into “Repair benches” instead.',
    ]);
    await move('Repair bench', 'Oven');
    await declare(null, '2026-11-01T00:00:00Z');
    await move('Repair benches', 'Oven');
  });

  it('back where what is left would lead in a circle', async () => {
    const august = '2026-08-01T00:00:00Z';
    const middle = await move('Oven', 'Repair benches', august);
    await move('Repair bench', 'Oven', august);
    await move('Oven', 'Repair bench');
    const refused = await undo(middle.id).expect(409);
    expect(detailOf(refused)).toContain('led in a circle');
    expect((await areasOf()).moves).toHaveLength(3);
  });
});

describe('withdrawing an upload', () => {
  it('takes an area that only it brought, with its move, as if it had never come', async () => {
    await site.upload(first);
    const before = [await areasOf(), await site.zones()];
    const { id } = await site.upload(second);
    await move('Repair benches', 'Repair bench');
    await site.withdraw(id);
    expect([await areasOf(), await site.zones()]).toEqual(before);
  });

  it('leaves an area that rows of another are moved to, until those are gone too', async () => {
    const one = await site.upload(first);
    const two = await site.upload(second);
    const made = await move('Repair bench', 'Repair benches');
    await site.withdraw(two.id);
    expect((await areasOf()).areas.map((area) => [area.name, area.rows])).toEqual([
      ['Repair bench', 0],
      ['Oven', 1],
      ['Repair benches', 2],
    ]);
    await undo(made.id).expect(204);
    await test.settled();
    await move('Repair bench', 'Repair benches');
    await site.withdraw(one.id);
    expect(await areasOf()).toEqual({ areas: [], moves: [], likelyPairs: [] });
    expect(await site.zones()).toHaveLength(1);
  });

  it('takes two areas that are moved to one another at different times', async () => {
    const { id } = await site.upload(first);
    const august = '2026-08-01T00:00:00Z';
    const made = await site.agent
      .post(`/api/sites/${site.id}/zones`)
      .send({ kind: 'area', name: 'Shed' })
      .expect(201);
    await move('Oven', 'Shed', august);
    await move('Repair bench', 'Oven', august);
    await move('Oven', 'Repair bench');
    await site.withdraw(id);
    expect((await areasOf()).areas).toMatchObject([{ id: (made.body as Zone).id, rows: 0 }]);
    expect((await areasOf()).moves).toEqual([]);
  });
});

describe('likely pairs', () => {
  const pairs = async () => {
    const { areas, likelyPairs } = await areasOf();
    const name = (id: number) => areas.find((area) => area.id === id)?.name;
    return likelyPairs.map((pair) => [name(pair.areaId), name(pair.targetAreaId)]);
  };

  it('are areas of like names that take turns, the one with fewer rows first', async () => {
    await site.upload(first);
    await site.upload(second);
    expect(await pairs()).toEqual([['Repair benches', 'Repair bench']]);
    await move('Repair benches', 'Repair bench');
    expect(await pairs()).toEqual([]);
  });

  it('are none where one upload tells of both over the same time', async () => {
    await site.upload(`${first}J7,Repair-bench,2026-10-01T08:00Z,2026-10-01T09:00Z\n`);
    expect(await pairs()).toEqual([]);
  });

  it('are such in one upload where one name ends before the other begins', async () => {
    await site.upload(`${first}J7,Repair-bench,2026-10-08T08:00Z,2026-10-08T09:00Z\n`);
    expect(await pairs()).toEqual([['Repair-bench', 'Repair bench']]);
  });

  it('are none where a job was in both at once', async () => {
    await site.upload(first);
    await site.upload(`${header}J1,Repair-bench,2026-10-01T02:00Z,2026-10-01T04:00Z\n`);
    expect(await pairs()).toEqual([]);
  });
});

describe('areas and moves', () => {
  it('are read by members, changed by analysts and admins, and kept from all others', async () => {
    await site.upload(first);
    await site.upload(second);
    const { id } = await move('Repair benches', 'Repair bench');
    const path = `/api/sites/${site.id}`;
    const body = {
      areaId: await idOf('Oven'),
      targetAreaId: await idOf('Repair bench'),
      from: null,
    };
    await request(test.app).get(`${path}/areas`).expect(401);
    await request(test.app).post(`${path}/area-moves`).send(body).expect(401);
    await request(test.app).delete(`${path}/area-moves/${id}`).expect(401);
    for (const role of ['supervisor', 'consultant']) {
      const agent = await test.signIn(`${role}@lowmoor.example`);
      await agent.get(`${path}/areas`).expect(200);
      await agent.post(`${path}/area-moves`).send(body).expect(403);
      await agent.delete(`${path}/area-moves/${id}`).expect(403);
    }
    const other = await test.signIn('analyst@fellgate.example');
    await other.get(`${path}/areas`).expect(404);
    await other.post(`${path}/area-moves`).send(body).expect(404);
    await other.delete(`${path}/area-moves/${id}`).expect(404);
    // The move exists, under another site.
    await other.delete(`/api/sites/2/area-moves/${id}`).expect(404);
    await site.agent.delete(`/api/sites/1/area-moves/${id}`).expect(404);
    const admin = await test.signIn('admin@lowmoor.example');
    await admin.delete(`${path}/area-moves/${id}`).expect(204);
    await test.settled();
  });
});
