import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Site } from '../../shared/contracts/sites.ts';
import type { Zone } from '../../shared/contracts/zones.ts';
import { startTestApp, type Agent, type TestApp } from '../support/app.ts';
import { auditOf } from '../support/audit.ts';
import { addMember } from '../support/people.ts';
import { fieldsOf } from '../support/problem.ts';
import { makeSite } from '../support/site.ts';

let test: TestApp;
let analyst: Agent;
beforeAll(async () => {
  test = await startTestApp();
  analyst = await test.signIn('analyst@lowmoor.example');
});
afterAll(() => test.close());

const siteOf = (response: request.Response) => response.body as Site;
const namesOf = (response: request.Response) => (response.body as Site[]).map((site) => site.name);
const make = (body: object, agent = analyst) => agent.post('/api/sites').send(body);

describe('the list of sites', () => {
  it('holds those of the own organisations, by organisation', async () => {
    const guest = await test.signIn('consultant@lowmoor.example');
    const other = await test.signIn('analyst@fellgate.example');
    expect(namesOf(await guest.get('/api/sites').expect(200))).toEqual(['Works', 'Main depot']);
    expect(namesOf(await other.get('/api/sites').expect(200))).toEqual(['Works']);
  });

  it('is refused to strangers', () => request(test.app).get('/api/sites').expect(401));
});

describe('making a site', () => {
  it('gives it a site zone of its name and enters the audit trail', async () => {
    const response = await make({ name: ' Annex ', timeZone: 'Asia/Kolkata' }).expect(201);
    const site = siteOf(response);
    expect(site).toMatchObject({
      organisationName: 'Lowmoor Instrument Works',
      name: 'Annex',
      timeZone: 'Asia/Kolkata',
      lostFinish: 'infer',
      dataFrom: null,
      dataUntil: null,
      busy: false,
    });
    const zones = await analyst.get(`/api/sites/${site.id}/zones`).expect(200);
    expect(zones.body).toMatchObject([{ kind: 'site', name: 'Annex', areaIds: [] }]);
    const [entry, ...more] = await auditOf(test, 'site.create', site.id);
    expect(more).toEqual([]);
    expect(entry).toMatchObject({
      organisationId: site.organisationId,
      siteId: site.id,
      requestId: response.headers['x-request-id'],
      before: null,
      after: { name: 'Annex', timeZone: 'Asia/Kolkata', lostFinish: 'infer' },
    });
    expect(entry?.personId).toBeGreaterThan(0);
  });

  it('names every field that is wrong, at once', async () => {
    const response = await make({ name: ' ', timeZone: 'Mars/Olympus', lostFinish: 'no' });
    expect(response.status).toBe(400);
    expect(fieldsOf(response)).toEqual(['lostFinish', 'name', 'timeZone']);
  });

  it('refuses names with line breaks and characters that no database holds', async () => {
    for (const name of ['two\nlines', 'a\u0000b', 'x'.repeat(121)])
      expect(fieldsOf(await make({ name, timeZone: 'UTC' }).expect(400))).toEqual(['name']);
  });

  it('refuses a name that the organisation has, and lets another organisation have it', async () => {
    await make({ name: 'Main depot', timeZone: 'UTC' }).expect(409);
    const other = await test.signIn('analyst@fellgate.example');
    await make({ name: 'Main depot', timeZone: 'UTC' }, other).expect(201);
  });

  it('of many at once under one name, makes one', async () => {
    const made = await Promise.all(
      Array.from({ length: 6 }, () => make({ name: 'Only once', timeZone: 'UTC' })),
    );
    expect(made.map((each) => each.status).sort()).toEqual([201, 409, 409, 409, 409, 409]);
  });

  it('asks who belongs to several organisations in which', async () => {
    const both = await addMember(test, 1, 'analyst');
    await addMember(test, 2, 'admin', null, both);
    const agent = await test.signIn(both.email, both.password);
    const unsaid = await make({ name: 'Somewhere', timeZone: 'UTC' }, agent).expect(400);
    expect(fieldsOf(unsaid)).toEqual(['organisationId']);
    const said = await make({ name: 'There', timeZone: 'UTC', organisationId: 2 }, agent);
    expect(siteOf(said)).toMatchObject({
      organisationId: 2,
      organisationName: 'Fellgate Finishing',
    });
  });

  it('is refused in an organisation that is not theirs, and to roles that may not', async () => {
    const body = { name: 'Slipped in', timeZone: 'UTC' };
    await make({ ...body, organisationId: 2 }).expect(403);
    await make({ ...body, organisationId: 999 }).expect(403);
    await make(body, await test.signIn('supervisor@lowmoor.example')).expect(403);
    await make(body, await test.signIn('consultant@lowmoor.example')).expect(403);
    await request(test.app).post('/api/sites').send(body).expect(401);
  });
});

describe('a site', () => {
  it('says of what time its data speak, and whether figures have caught up', async () => {
    const site = await makeSite(test);
    await site.upload(
      'job,area,start,finish\nJ1,Bench,2026-10-24T01:00Z,2026-10-24T05:00Z\nJ2,Bench,2026-10-25T01:00Z,\n',
    );
    expect(await site.get('')).toMatchObject({
      dataFrom: '2026-10-24T01:00:00.000Z',
      dataUntil: '2026-10-25T01:00:00.000Z',
      busy: false,
    });
  });

  it('is changed, with its site zone, and the audit trail keeps both states', async () => {
    const { id, zones } = await makeSite(test);
    const changed = await analyst
      .patch(`/api/sites/${id}`)
      .send({ name: 'New name', currency: 'GBP', valuePerJob: 120.5 })
      .expect(200);
    expect(siteOf(changed)).toMatchObject({
      name: 'New name',
      currency: 'GBP',
      valuePerJob: 120.5,
    });
    expect((await zones()).map((zone: Zone) => zone.name)).toEqual(['New name']);
    const [entry] = await auditOf(test, 'site.change', id);
    expect(entry).toMatchObject({
      before: { currency: 'EUR', valuePerJob: null },
      after: { name: 'New name', currency: 'GBP', valuePerJob: 120.5 },
    });
    const taken = await analyst.patch(`/api/sites/${id}`).send({ name: 'Main depot' });
    expect(taken.status).toBe(409);
  });

  it('derives its figures again when a setting asks for it, and not otherwise', async () => {
    const site = await makeSite(test);
    await site.upload(
      'job,area,start,finish\nJ1,Bench,2026-10-24T01:00Z,\nJ1,Oven,2026-10-24T06:00Z,2026-10-24T07:00Z\n',
    );
    const bench = await site.zone('Bench');
    const departures = async () =>
      (await site.summary(bench.id, '2026-10-24T00:00:00Z', '2026-10-24T08:00:00Z')).departures;
    expect(await departures()).toBe(1);
    const change = (body: object) => analyst.patch(`/api/sites/${site.id}`).send(body).expect(200);
    expect(siteOf(await change({ lostFinish: 'infer' })).busy).toBe(false);
    expect(siteOf(await change({ lostFinish: 'leave-open' })).busy).toBe(true);
    await test.settled();
    expect(await departures()).toBe(0);
    expect(await site.get('')).toMatchObject({ busy: false, lostFinish: 'leave-open' });
  });

  it('stays as it is where nothing is asked for, and enters no audit trail', async () => {
    const { id } = await makeSite(test);
    await analyst.patch(`/api/sites/${id}`).send({}).expect(200);
    expect(await auditOf(test, 'site.change', id)).toEqual([]);
  });

  it('refuses settings out of range, all at once', async () => {
    const response = await analyst
      .patch('/api/sites/1')
      .send({ currency: 'euro', valuePerJob: -1, newPassAfterDays: 0 })
      .expect(400);
    expect(fieldsOf(response)).toEqual(['currency', 'newPassAfterDays', 'valuePerJob']);
  });

  it('is kept from strangers, from roles that may not change it, and from other organisations', async () => {
    await request(test.app).get('/api/sites/1').expect(401);
    await request(test.app).get('/api/sites/first').expect(401);
    const supervisor = await test.signIn('supervisor@lowmoor.example');
    await supervisor.get('/api/sites/1').expect(200);
    await supervisor.patch('/api/sites/1').send({ name: 'Mine' }).expect(403);
    const other = await test.signIn('analyst@fellgate.example');
    await other.get('/api/sites/1').expect(404);
    await other.patch('/api/sites/1').send({ name: 'Mine' }).expect(404);
    await other.get('/api/sites/first').expect(404);
  });
});
