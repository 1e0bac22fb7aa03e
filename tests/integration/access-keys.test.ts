import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startTestApp, type Agent, type TestApp } from '../support/app.ts';
import { auditOf } from '../support/audit.ts';
import { fieldsOf } from '../support/problem.ts';

let test: TestApp;
let admin: Agent;
beforeAll(async () => {
  test = await startTestApp();
  admin = await test.signIn('admin@lowmoor.example');
});
afterAll(() => test.close());

const path = '/api/sites/1/access-keys';
const make = async (name = 'nightly export') =>
  (await admin.post(path).send({ name }).expect(201)).body as { id: number; key: string };
const upload = (key: string, siteId = 1) =>
  request(test.app)
    .post(`/api/sites/${siteId}/uploads`)
    .set('Authorization', `Bearer ${key}`)
    .attach('file', Buffer.from('job,area,start\nJ1,Bench,2026-10-24T01:00Z\n'), 'export.csv');

describe('an access key', () => {
  it('is shown once and kept as a hash', async () => {
    const { id, key } = await make('line 3');
    expect(key).toMatch(/^wmk_[\w-]{43}$/);
    const listed = await admin.get(path).expect(200);
    expect(listed.body).toContainEqual({
      id,
      name: 'line 3',
      createdAt: '2026-11-30T12:00:00.000Z',
      expiresAt: null,
      lastUsedAt: null,
      revokedAt: null,
    });
    expect(JSON.stringify(listed.body)).not.toContain(key);
    const { rows } = await test.migrating.$client.query(
      'select row_to_json(access_key)::text as row from access_key where id = $1',
      [id],
    );
    expect(JSON.stringify(rows)).not.toContain(key);
    const [entry] = await auditOf(test, 'access-key.create', id);
    expect(entry).toMatchObject({ siteId: 1, after: { name: 'line 3' } });
    expect(JSON.stringify(entry)).not.toContain(key);
  });

  it('uploads to its own site, without an origin check, and reads its uploads', async () => {
    const { key, id } = await make();
    const sent = await upload(key).set('Origin', 'https://mes.example').expect(202);
    await test.settled();
    const read = await request(test.app)
      .get(`/api/sites/1/uploads/${(sent.body as { id: number }).id}`)
      .set('Authorization', `Bearer ${key}`)
      .expect(200);
    expect(read.body).toMatchObject({ status: 'loaded', account: { new: 1 } });
    const [entry] = await auditOf(test, 'upload.create', (sent.body as { id: number }).id);
    expect(entry).toMatchObject({ accessKeyId: id, personId: null });
  });

  it('tells when it was used last, to the minute', async () => {
    const { key, id } = await make('counted');
    await upload(key).expect(202);
    const listed = (await admin.get(path).expect(200)).body as { id: number; lastUsedAt: string }[];
    expect(listed.find((each) => each.id === id)?.lastUsedAt).toBe('2026-11-30T12:00:00.000Z');
    await test.settled();
  });

  it('opens nothing once it has expired', async () => {
    const expiresAt = '2026-12-30T12:00:00.000Z';
    const made = await admin.post(path).send({ name: 'for a month', expiresAt }).expect(201);
    const { key } = made.body as { key: string };
    await upload(key).expect(202);
    await test.settled();
    const before = test.clock.now();
    test.clock.set(new Date(expiresAt));
    await upload(key).expect(401);
    test.clock.set(before);
    const late = { name: 'too late', expiresAt: '2026-01-01T00:00:00Z' };
    expect(fieldsOf(await admin.post(path).send(late).expect(400))).toEqual(['expiresAt']);
  });

  it('opens no other site, nothing else of its own, and nothing that a cookie beside it would', async () => {
    const { key } = await make();
    await upload(key, 2).expect(404);
    await upload(key, 424_242).expect(404);
    const asKey = (method: 'get' | 'post' | 'patch' | 'delete', to: string) =>
      admin[method](to).set('Authorization', `Bearer ${key}`);
    await asKey('get', '/api/sites/1').expect(403);
    await asKey('get', '/api/sites').expect(403);
    await asKey('get', '/api/sites/1/zones').expect(403);
    await asKey('patch', '/api/sites/1').send({ name: 'X' }).expect(403);
    await asKey('delete', '/api/sites/1/uploads/1').expect(403);
    await asKey('get', path).expect(403);
    await asKey('post', path).send({ name: 'another' }).expect(403);
  });

  it('ends at once when it is revoked, and cannot be revoked twice', async () => {
    const { id, key } = await make();
    await upload(key).expect(202);
    const revoked = await admin.delete(`${path}/${id}`).expect(200);
    expect(revoked.body).toMatchObject({ id, revokedAt: '2026-11-30T12:00:00.000Z' });
    await upload(key).expect(401);
    await admin.delete(`${path}/${id}`).expect(409);
    const entries = await auditOf(test, 'access-key.revoke', id);
    expect(entries).toMatchObject([{ before: { revokedAt: null }, after: { id } }]);
    await test.settled();
  });

  it('is not guessed', async () => {
    const { key } = await make();
    await upload(key.slice(0, -1)).expect(401);
    await upload(`${key}x`).expect(401);
    await upload('').expect(401);
  });
});

describe('access keys', () => {
  it('are named in one line', async () => {
    for (const name of ['', ' ', 'a\u0000b', 'two\nlines'])
      expect(fieldsOf(await admin.post(path).send({ name }).expect(400))).toEqual(['name']);
  });

  it('are for the admins of their organisation alone', async () => {
    const { id } = await make();
    await request(test.app).get(path).expect(401);
    for (const role of ['analyst', 'supervisor', 'consultant']) {
      const agent = await test.signIn(`${role}@lowmoor.example`);
      await agent.get(path).expect(403);
      await agent.post(path).send({ name: 'mine' }).expect(403);
      await agent.delete(`${path}/${id}`).expect(403);
    }
    const other = await test.signIn('analyst@fellgate.example');
    await other.get(path).expect(404);
    await other.delete(`${path}/${id}`).expect(404);
    // The key exists, at another site.
    const annex = await admin.post('/api/sites').send({ name: 'Annex', timeZone: 'UTC' });
    const { id: annexId } = annex.body as { id: number };
    await admin.delete(`/api/sites/${annexId}/access-keys/${id}`).expect(404);
  });
});
