import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startTestApp, testNow, type TestApp } from '../support/app.ts';
import { addMember } from '../support/people.ts';

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

const signIn = (body: object) => request(test.app).post('/api/auth/sign-in').send(body);
const cookieOf = (response: request.Response) =>
  (response.headers['set-cookie'] as unknown as string[] | undefined)?.[0] ?? '';
const valueOf = (cookie: string) => cookie.split(';')[0] ?? '';
const readSites = (cookie: string) =>
  request(test.app).get('/api/sites').set('Cookie', valueOf(cookie));
const minutes = (count: number) => new Date(testNow.getTime() + count * 60_000);

describe('signing in', () => {
  it('answers with the person and their organisations and sets a guarded cookie', async () => {
    const response = await signIn({
      email: ' Consultant@Lowmoor.example ',
      password: 'lowmoor-demo',
    }).expect(200);
    expect(response.body).toMatchObject({
      user: { email: 'consultant@lowmoor.example' },
      organisations: [
        { name: 'Fellgate Finishing', role: 'consultant' },
        { name: 'Lowmoor Instrument Works', role: 'consultant' },
      ],
    });
    expect(cookieOf(response)).toMatch(/HttpOnly/);
    expect(cookieOf(response)).toMatch(/SameSite=Lax/);
    await readSites(cookieOf(response)).expect(200);
  });

  it('does not tell which part was wrong', async () => {
    const unknown = await signIn({ email: 'nobody@lowmoor.example', password: 'lowmoor-demo' });
    const wrong = await signIn({ email: 'analyst@lowmoor.example', password: 'guess' });
    expect([unknown.status, wrong.status]).toEqual([401, 401]);
    const told = ({ body }: request.Response) => ({ ...(body as object), requestId: '' });
    expect(told(unknown)).toEqual(told(wrong));
  });

  it('names every field that is missing, at once', async () => {
    const response = await signIn({}).expect(400);
    expect(
      (response.body as { errors: { field: string }[] }).errors.map((error) => error.field).sort(),
    ).toEqual(['email', 'password']);
  });

  it('refuses a body that is no JSON with a problem', async () => {
    await request(test.app)
      .post('/api/auth/sign-in')
      .set('Content-Type', 'application/json')
      .send('{')
      .expect(400)
      .expect('Content-Type', /problem\+json/);
  });

  it('makes an address wait after failures, and no other', async () => {
    const { email, password } = await addMember(test, 1, 'analyst');
    const statuses = [];
    for (let attempt = 0; attempt < 10; attempt++)
      statuses.push((await signIn({ email, password: 'guess' })).status);
    expect(statuses.slice(0, 8)).toEqual(Array(8).fill(401));
    expect(statuses[9]).toBe(429);
    const waiting = await signIn({ email, password }).expect(429);
    expect(Number(waiting.headers['retry-after'])).toBeGreaterThan(0);
    await signIn({ email: 'analyst@lowmoor.example', password: 'lowmoor-demo' }).expect(200);
  });

  it('forgets the failures of an address that then succeeds', async () => {
    const { email, password } = await addMember(test, 1, 'analyst');
    for (let round = 0; round < 3; round++) {
      for (let attempt = 0; attempt < 4; attempt++)
        await signIn({ email, password: 'guess' }).expect(401);
      await signIn({ email, password }).expect(200);
    }
  });
});

describe('a session', () => {
  it('is refused with a forged or torn cookie', async () => {
    const cookie = valueOf(
      cookieOf(await signIn({ email: 'analyst@lowmoor.example', password: 'lowmoor-demo' })),
    );
    await readSites(cookie.slice(0, -3)).expect(401);
    await readSites('weirmark_session=eyJhbGciOiJub25lIn0.eyJzaWQiOiIxIn0.').expect(401);
  });

  it('ends at once with signing out, although the cookie lives', async () => {
    const cookie = cookieOf(
      await signIn({ email: 'analyst@lowmoor.example', password: 'lowmoor-demo' }),
    );
    await request(test.app).post('/api/auth/sign-out').set('Cookie', valueOf(cookie)).expect(204);
    await readSites(cookie).expect(401);
  });

  it('ends everywhere at once', async () => {
    const { email, password } = await addMember(test, 1, 'analyst');
    const [one, other] = [
      cookieOf(await signIn({ email, password })),
      cookieOf(await signIn({ email, password })),
    ];
    await request(test.app)
      .post('/api/auth/sign-out-everywhere')
      .set('Cookie', valueOf(one))
      .expect(204);
    await readSites(one).expect(401);
    await readSites(other).expect(401);
  });

  it('is renewed as time goes by; the cookie before holds for a minute, and no longer', async () => {
    const { email, password } = await addMember(test, 1, 'analyst');
    const first = cookieOf(await signIn({ email, password }));
    test.clock.set(minutes(16));
    const renewed = cookieOf(await readSites(first).expect(200));
    expect(valueOf(renewed)).not.toBe(valueOf(first));
    await readSites(first).expect(200);
    test.clock.set(minutes(18));
    await readSites(first).expect(401);
    await readSites(renewed).expect(200);
    test.clock.set(minutes(15 * 24 * 60));
    await readSites(renewed).expect(401);
    test.clock.set(testNow);
  });
});

describe('a write', () => {
  const write = (headers: Record<string, string>, cookie: string) =>
    request(test.app)
      .post('/api/sites')
      .set({ Cookie: valueOf(cookie), Host: 'flow.example', ...headers })
      .send({});

  it('from a page of another origin is refused', async () => {
    const cookie = cookieOf(
      await signIn({ email: 'analyst@lowmoor.example', password: 'lowmoor-demo' }),
    );
    await write({ Origin: 'https://elsewhere.example' }, cookie).expect(403);
    await write({ Origin: 'null' }, cookie).expect(403);
    await write({ Referer: 'https://elsewhere.example/page' }, cookie).expect(403);
    await write({ Origin: 'http://flow.example' }, cookie).expect(400);
  });
});

describe('headers', () => {
  it('allow no inline script and no framing', async () => {
    const { headers } = await request(test.app).get('/api/health').expect(200);
    const csp = headers['content-security-policy'] ?? '';
    expect(csp).toMatch(/script-src 'self'(;|$)/);
    expect(csp).toMatch(/frame-ancestors 'none'/);
    expect(headers['x-powered-by']).toBeUndefined();
    expect(headers['x-request-id']).toMatch(/^[0-9a-f-]{36}$/);
  });

  it('a call that does not exist is a problem', async () => {
    const response = await request(test.app).get('/api/nothing').expect(404);
    expect(response.body).toMatchObject({ status: 404, code: 'not-found' });
  });
});

describe('the first admin', () => {
  it('is made once, with the token, in an empty database', async () => {
    const empty = await startTestApp({ demo: false });
    const given = {
      organisation: 'Northgate Labs',
      name: 'Ada Holm',
      email: 'ada@northgate.example',
      password: 'long enough word',
    };
    const make = (body: object) => request(empty.app).post('/api/auth/first-admin').send(body);
    const state = await request(empty.app).get('/api/auth/session').expect(200);
    expect(state.body).toMatchObject({ session: null, awaitsFirstAdmin: true });
    await make({ ...given, token: 'guess' }).expect(401);
    await make({ ...given, token: empty.firstAdminToken, password: 'short' }).expect(400);
    const made = await make({ ...given, token: empty.firstAdminToken }).expect(201);
    expect(made.body).toMatchObject({
      user: { email: 'ada@northgate.example' },
      organisations: [{ name: 'Northgate Labs', role: 'admin' }],
    });
    await make({ ...given, token: empty.firstAdminToken, email: 'b@northgate.example' }).expect(
      401,
    );
    await empty.close();
  });

  it('is not made where there is an organisation', async () => {
    await request(test.app)
      .post('/api/auth/first-admin')
      .send({
        token: test.firstAdminToken,
        organisation: 'Other',
        name: 'Eve',
        email: 'eve@other.example',
        password: 'long enough word',
      })
      .expect(401);
  });
});
