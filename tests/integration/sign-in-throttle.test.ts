import request from 'supertest';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { startTestApp, type TestApp } from '../support/app.ts';
import { addMember } from '../support/people.ts';

let test: TestApp;
beforeEach(async () => {
  test = await startTestApp();
});
afterEach(() => test.close());

const signIn = (body: object) => request(test.app).post('/api/auth/sign-in').send(body);

describe('the sign-in throttle', () => {
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

  it('counts many failures at once like many in a row', async () => {
    const { email, password } = await addMember(test, 1, 'analyst');
    const made = await Promise.all(
      Array.from({ length: 14 }, () => signIn({ email, password: 'guess' })),
    );
    const statuses = made.map((response) => response.status).sort();
    expect(statuses).toEqual([...Array<number>(8).fill(401), ...Array<number>(6).fill(429)]);
    await signIn({ email, password }).expect(429);
  });

  it('lets many at once who know the password in', async () => {
    const { email, password } = await addMember(test, 1, 'analyst');
    const made = await Promise.all(Array.from({ length: 14 }, () => signIn({ email, password })));
    expect(made.map((response) => response.status)).toEqual(Array(14).fill(200));
  });

  it('makes an origin wait that fails on many addresses', async () => {
    const statuses = [];
    for (let guess = 0; guess < 101; guess++)
      statuses.push(
        (await signIn({ email: `guess${guess}@lowmoor.example`, password: 'guess' })).status,
      );
    expect(statuses).toEqual([...Array<number>(100).fill(401), 429]);
    await signIn({ email: 'analyst@lowmoor.example', password: 'lowmoor-demo' }).expect(429);
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
