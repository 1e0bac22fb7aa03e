import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startTestApp, type TestApp } from '../support/app.ts';
import { auditOf } from '../support/audit.ts';
import { fieldsOf } from '../support/problem.ts';
import { makeSite, type TestSite } from '../support/site.ts';

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

const header = ['Serial', 'Where', 'A', 'B'];
const plan = {
  shape: 'stay',
  columns: { job: 'Serial', area: 'Where', started: 'A', finished: 'B' },
  timeZone: 'America/New_York',
  timeFormat: 'dd/MM/yyyy HH:mm',
};
const file = 'Serial,Where,A,B\nJ1,Bench,03/11/2026 08:00,03/11/2026 09:00\n';

const pathOf = (site: TestSite) => `/api/sites/${site.id}/column-plans`;
const save = async (site: TestSite, body: object = {}) =>
  (
    await site.agent
      .post(pathOf(site))
      .send({ name: 'Bench export', plan, header, ...body })
      .expect(201)
  ).body as { id: number; name: string; plan: object; savedBy: string };
const list = (site: TestSite) => site.get<{ id: number; name: string }[]>('/column-plans');

describe('a saved column plan', () => {
  it('is listed with who saved it, and is in the audit trail', async () => {
    const site = await makeSite(test);
    const saved = await save(site);
    expect(saved).toMatchObject({
      name: 'Bench export',
      plan: { ...plan, unknownAreas: 'add', mode: 'merge' },
      savedBy: 'Ivo Quill',
    });
    expect(await list(site)).toEqual([saved]);
    const [entry] = await auditOf(test, 'column-plan.save', saved.id);
    expect(entry).toMatchObject({ siteId: site.id, after: { name: 'Bench export' } });
  });

  it('is recognised by its header, whatever the case and the blanks, by whoever uploads', async () => {
    const site = await makeSite(test);
    const { id } = await save(site);
    const respelled = file.replace('Serial,Where', ' SERIAL,where ');
    const answer = await site.agent
      .post(`/api/sites/${site.id}/upload-preview`)
      .attach('file', Buffer.from(respelled), 'export.csv')
      .expect(200);
    expect(answer.body).toMatchObject({
      recognised: { id, name: 'Bench export' },
      rows: [{ started: '2026-11-03T13:00:00.000Z' }],
    });
    const upload = await site.upload(respelled);
    expect(upload).toMatchObject({ status: 'loaded', plan: { timeZone: 'America/New_York' } });
    const other = await site.upload('Serial,Where,A\nJ2,Bench,2026-11-03\n');
    expect(other).toMatchObject({ status: 'failed', error: 'column-not-found' });
  });

  it('reads a file that names it by its id', async () => {
    const site = await makeSite(test);
    const { id } = await save(site);
    const sent = await site.agent
      .post(`/api/sites/${site.id}/uploads`)
      .field('plan', String(id))
      .attach('file', Buffer.from(file), 'export.csv')
      .expect(202);
    await test.settled();
    const uploadId = (sent.body as { id: number }).id;
    expect(await site.get(`/uploads/${uploadId}`)).toMatchObject({ status: 'loaded' });
  });

  it('can be renamed and changed; uploads keep the plan that read them', async () => {
    const site = await makeSite(test);
    const { id } = await save(site);
    const before = await site.upload(file);
    await site.agent
      .patch(`${pathOf(site)}/${id}`)
      .send({ name: 'Bench, local', plan: { ...plan, timeZone: 'UTC' } })
      .expect(200);
    expect(await list(site)).toMatchObject([{ id, name: 'Bench, local' }]);
    expect((await site.upload(file)).plan?.timeZone).toBe('UTC');
    expect(await site.get(`/uploads/${before.id}`)).toMatchObject({
      plan: { timeZone: 'America/New_York' },
    });
  });

  it('that is taken out of use recognises nothing, and its name is free', async () => {
    const site = await makeSite(test);
    const { id } = await save(site);
    await site.agent.delete(`${pathOf(site)}/${id}`).expect(204);
    expect(await list(site)).toEqual([]);
    await site.agent.delete(`${pathOf(site)}/${id}`).expect(404);
    await site.agent
      .patch(`${pathOf(site)}/${id}`)
      .send({ name: 'Again' })
      .expect(404);
    expect((await site.upload(file)).status).toBe('failed');
    await save(site);
  });

  it('has a name of its own, without regard to case', async () => {
    const site = await makeSite(test);
    await save(site);
    const second = { name: 'BENCH EXPORT', plan, header };
    const taken = await site.agent.post(pathOf(site)).send(second).expect(409);
    expect((taken.body as { detail: string }).detail).toMatch(/Choose another name/);
    const { id } = await save(site, { name: 'Other' });
    await site.agent
      .patch(`${pathOf(site)}/${id}`)
      .send({ name: 'bench export' })
      .expect(409);
  });

  it('is refused with every field that is wrong', async () => {
    const site = await makeSite(test);
    const send = async (body: object) =>
      fieldsOf(await site.agent.post(pathOf(site)).send(body).expect(400));
    expect(await send({ name: '', plan, header: [] })).toEqual(['header', 'name']);
    const patterned = { ...plan, timeFormat: 'no pattern at all' };
    expect(await send({ name: 'X', plan: patterned, header })).toEqual(['plan.timeFormat']);
    const eventless = { ...plan, shape: 'event' };
    expect(await send({ name: 'X', plan: eventless, header })).toContain('plan.columns.event');
  });

  it('is of its own site', async () => {
    const [site, other] = [await makeSite(test), await makeSite(test)];
    const { id } = await save(site);
    expect(await list(other)).toEqual([]);
    await other.agent
      .patch(`${pathOf(other)}/${id}`)
      .send({ name: 'Mine' })
      .expect(404);
    expect((await other.upload(file)).status).toBe('failed');
  });
});

describe('the original of an upload', () => {
  it('is handed out as it came', async () => {
    const site = await makeSite(test);
    const bytes = Buffer.from('\uFEFFjob;area;start\r\nJ1;Prüfstand;2026-11-03\r\n', 'utf16le');
    const { id } = await site.upload(bytes, undefined, 'Prüfstand Öfen.csv');
    const answer = await site.agent
      .get(`/api/sites/${site.id}/uploads/${id}/original`)
      .buffer()
      .parse((response, done) => {
        const blocks: Buffer[] = [];
        response.on('data', (block: Buffer) => blocks.push(block));
        response.on('end', () => done(null, Buffer.concat(blocks)));
      })
      .expect(200);
    expect(answer.body).toEqual(bytes);
    expect(answer.headers['content-disposition']).toContain("filename*=UTF-8''Pr%C3%BCfstand");
  });

  it('of a reading that failed can be read again, once a person has answered what it asked', async () => {
    const site = await makeSite(test);
    const failed = await site.upload('job;area;start\nJ1;A;02/03/2026\n');
    expect(failed).toMatchObject({ status: 'failed', error: 'date-order-unknown' });
    const path = `/api/sites/${site.id}/uploads/${failed.id}`;
    const columns = { job: 'job', area: 'area', started: 'start' };
    const answered = { shape: 'stay', columns, timeZone: 'UTC', dateOrder: 'month-first' };
    const shown = await site.agent.post(`${path}/preview`).send({ plan: answered }).expect(200);
    expect(shown.body).toMatchObject({ rows: [{ started: '2026-02-03T00:00:00.000Z' }] });
    await site.agent.post(`${path}/read-again`).send({ plan: answered }).expect(202);
    await test.settled();
    expect(await site.get(`/uploads/${failed.id}`)).toMatchObject({
      ...{ status: 'loaded', error: null },
      account: { new: 1 },
    });
  });

  it('that was withdrawn is not read again', async () => {
    const site = await makeSite(test);
    const { id } = await site.upload('job,area,start\nJ1,A,2026-11-03\n');
    await site.withdraw(id);
    const path = `/api/sites/${site.id}/uploads/${id}/read-again`;
    await site.agent.post(path).send({}).expect(409);
    await site.agent
      .post(path)
      .send({ plan: { shape: 'weird' } })
      .expect(400);
  });
});
