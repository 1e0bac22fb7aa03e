import { sql } from 'drizzle-orm';
import express from 'express';
import { pino } from 'pino';
import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { answerErrors } from '../../server/http/middleware/errors.ts';
import { requestId } from '../../server/http/middleware/request-id.ts';
import type { Problem } from '../../shared/errors.ts';
import { startTestApp, type Agent, type TestApp } from '../support/app.ts';

/** What any request meets, whatever call it is for. */
let test: TestApp;
let analyst: Agent;
beforeAll(async () => {
  test = await startTestApp();
  analyst = await test.signIn('analyst@lowmoor.example');
});
afterAll(() => test.close());

const problemOf = (response: request.Response) => response.body as Problem;

describe('a problem', () => {
  it('is a problem document with the id of the request', async () => {
    const response = await analyst.get('/api/sites/999').expect(404);
    expect(response.headers['content-type']).toContain('application/problem+json');
    expect(problemOf(response)).toEqual({
      type: 'urn:weirmark:error:not-found',
      title: 'Not found',
      status: 404,
      detail: 'The site was not found, or is not yours to see.',
      code: 'not-found',
      requestId: response.headers['x-request-id'],
    });
  });

  it('names the call that does not exist', async () => {
    const response = await analyst.put('/api/sites/1').expect(404);
    expect(problemOf(response).detail).toContain('PUT /api/sites/1');
  });

  it('is answered for addresses that cannot be read', async () => {
    await analyst.get('/api/sites/%E0%A4%A').expect(400);
    await analyst.get('/api/sites/1/jobs/a%00b').expect(400);
    await analyst.get('/api/sites/1/jobs?begins=a%00b').expect(400);
  });

  it('hides what went wrong inside, and logs it under the same id', async () => {
    const lines: string[] = [];
    const app = express();
    app.use(requestId);
    app.get('/', () => {
      throw new Error('the inner working');
    });
    app.use(answerErrors(pino({}, { write: (line) => lines.push(line) })));
    const response = await request(app).get('/').expect(500);
    expect(JSON.stringify(response.body)).not.toContain('inner');
    expect(lines.join()).toContain('the inner working');
    expect(lines.join()).toContain(problemOf(response).requestId);
  });

  it('says that the database cannot be reached', async () => {
    const away = await startTestApp();
    const agent = await away.signIn('analyst@lowmoor.example');
    // As if its server had gone: connections that stand are cut, new ones meet a closed port.
    away.db.$client.options.connectionString = 'postgres://nobody@127.0.0.1:1/none';
    await away.migrating.execute(sql`select pg_terminate_backend(pid) from pg_stat_activity
      where datname = current_database() and pid <> pg_backend_pid()`);
    const response = await agent.get('/api/sites').expect(503);
    expect(problemOf(response)).toMatchObject({ code: 'unavailable' });
    await request(away.app).get('/api/health').expect(503);
    await away.close();
  });
});

describe('a body', () => {
  it('that is no JSON is refused and not taken as empty', async () => {
    const patch = () => analyst.patch('/api/sites/1');
    await patch().type('json').send('{').expect(400);
    await patch().type('form').send({ name: 'Shed' }).expect(415);
    await patch().type('text').send('{"name":"Shed"}').expect(415);
    await patch().type('application/json; charset=ebcdic').send('{}').expect(415);
    await patch().send([]).expect(400);
    await patch().set('Content-Encoding', 'gzip').type('json').send('{}').expect(400);
    const after = await analyst.get('/api/sites/1').expect(200);
    expect(after.body).toMatchObject({ name: 'Main depot' });
  });

  it('that is too large is refused', async () => {
    const name = 'x'.repeat(1_100_000);
    await analyst.patch('/api/sites/1').send({ name }).expect(413);
  });

  it('is read after the policy: who may not call hears nothing of it', async () => {
    await request(test.app).patch('/api/sites/1').type('json').send('{').expect(401);
    const supervisor = await test.signIn('supervisor@lowmoor.example');
    await supervisor.patch('/api/sites/1').type('json').send('{').expect(403);
  });
});

describe('a write', () => {
  const write = (headers: Record<string, string>) =>
    analyst
      .patch('/api/sites/1')
      .set({ Host: 'flow.example:5180', ...headers })
      .send({ currency: 'EUR' });

  it('from a page of the same host is done, whatever a proxy made of its scheme', async () => {
    await write({ Origin: 'http://flow.example:5180' }).expect(200);
    await write({ Origin: 'https://flow.example:5180' }).expect(200);
    await write({ Referer: 'http://flow.example:5180/sites/1?a=b' }).expect(200);
    await write({}).expect(200);
  });

  it.each<Record<string, string>>([
    { Origin: 'https://elsewhere.example' },
    { Origin: 'http://flow.example' },
    { Origin: 'http://flow.example:5180.elsewhere.example' },
    { Origin: 'null' },
    { Referer: 'https://elsewhere.example/flow.example:5180' },
    { Referer: 'nonsense' },
    { Origin: 'https://elsewhere.example', Referer: 'http://flow.example:5180/' },
  ])('from elsewhere is refused: %o', async (headers) => {
    const response = await write(headers).expect(403);
    expect(problemOf(response).code).toBe('foreign-origin');
  });

  it('from elsewhere is refused also where nobody is signed in yet', async () => {
    await request(test.app)
      .post('/api/auth/sign-in')
      .set('Origin', 'https://elsewhere.example')
      .send({ email: 'analyst@lowmoor.example', password: 'lowmoor-demo' })
      .expect(403);
  });

  it('reading from elsewhere is left to the browser, which keeps the answer to itself', async () => {
    const response = await analyst
      .get('/api/sites/1')
      .set('Origin', 'https://elsewhere.example')
      .expect(200);
    expect(response.headers['access-control-allow-origin']).toBeUndefined();
  });
});
