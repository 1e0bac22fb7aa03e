import { and, eq } from 'drizzle-orm';
import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { contracts } from '../../shared/contracts/all.ts';
import type { Contract } from '../../shared/contracts/contract.ts';
import { keyMay, policy, roleMay, type Role, type Rule } from '../../shared/permissions.ts';
import { revokeSessionsOf } from '../../server/auth/sessions.ts';
import { membership } from '../../server/db/schema/people.ts';
import { startTestApp, testNow, type Agent, type TestApp } from '../support/app.ts';
import { addMember } from '../support/people.ts';

/**
 * Every call of the API against every kind of caller, from the contracts and the policy table alone: a
 * new call without a rule, or with a rule that is not enforced, fails here.
 */
const lowmoor = { organisationId: 1, siteId: 1 };
const fellgateSite = 2;

type Caller =
  | Role
  | 'stranger'
  | 'guest whose access has ended'
  | 'person who was removed, with a live session'
  | 'person whose session was revoked'
  | 'analyst of the other organisation'
  | 'access key of the site'
  | 'access key of another site'
  | 'access key that was revoked';

const callers: readonly Caller[] = [
  'admin',
  'analyst',
  'supervisor',
  'consultant',
  'stranger',
  'guest whose access has ended',
  'person who was removed, with a live session',
  'person whose session was revoked',
  'analyst of the other organisation',
  'access key of the site',
  'access key of another site',
  'access key that was revoked',
];

let test: TestApp;
const agents = new Map<Caller, (method: Contract['method'], path: string) => request.Test>();

beforeAll(async () => {
  test = await startTestApp();
  const byAgent = (agent: Agent) => (method: Contract['method'], path: string) =>
    agent[method](path);
  const byKey = (key: string) => (method: Contract['method'], path: string) =>
    request(test.app)[method](path).set('Authorization', `Bearer ${key}`);
  for (const role of ['admin', 'analyst', 'supervisor', 'consultant'] as const)
    agents.set(role, byAgent(await test.signIn(`${role}@lowmoor.example`)));
  agents.set('stranger', byAgent(request.agent(test.app)));
  const guest = await addMember(
    test,
    lowmoor.organisationId,
    'consultant',
    new Date(testNow.getTime() + 60_000),
  );
  const ended = byAgent(await test.signIn(guest.email, guest.password));
  agents.set('guest whose access has ended', ended);
  const removed = await addMember(test, lowmoor.organisationId, 'admin');
  agents.set(
    'person who was removed, with a live session',
    byAgent(await test.signIn(removed.email, removed.password)),
  );
  await test.db
    .delete(membership)
    .where(
      and(
        eq(membership.personId, removed.id),
        eq(membership.organisationId, lowmoor.organisationId),
      ),
    );
  const revokedOne = await addMember(test, lowmoor.organisationId, 'admin');
  agents.set(
    'person whose session was revoked',
    byAgent(await test.signIn(revokedOne.email, revokedOne.password)),
  );
  await revokeSessionsOf(test.db, revokedOne.id, testNow);
  agents.set(
    'analyst of the other organisation',
    byAgent(await test.signIn('analyst@fellgate.example')),
  );
  const admin = await test.signIn('admin@lowmoor.example');
  const newKey = async (siteId: number, agent = admin) => {
    const made = await agent
      .post(`/api/sites/${siteId}/access-keys`)
      .send({ name: 'nightly' })
      .expect(201);
    return made.body as { id: number; key: string };
  };
  agents.set('access key of the site', byKey((await newKey(lowmoor.siteId)).key));
  const other = await admin
    .post('/api/sites')
    .send({ name: 'Annex', timeZone: 'Europe/Dublin' })
    .expect(201);
  const otherKey = await newKey((other.body as { id: number }).id);
  agents.set('access key of another site', byKey(otherKey.key));
  const revoked = await newKey(lowmoor.siteId);
  await admin.delete(`/api/sites/${lowmoor.siteId}/access-keys/${revoked.id}`).expect(200);
  agents.set('access key that was revoked', byKey(revoked.key));
  // The guest's access ends to the minute, with the session still alive.
  test.clock.set(new Date(testNow.getTime() + 61_000));
});
afterAll(() => test.close());

const signedOut: readonly Caller[] = [
  'stranger',
  'person whose session was revoked',
  'access key that was revoked',
];

/** What the policy says of a call: let through, or refused with this status. */
function expected(contract: Contract, caller: Caller): 'through' | 401 | 403 | 404 {
  const rule: Rule = policy[contract.action];
  const ofSite = contract.path.includes(':siteId');
  if (rule.open === 'anyone') return 'through';
  if (signedOut.includes(caller)) return 401;
  if (caller.startsWith('access key')) {
    if (!keyMay(contract.action)) return 403;
    return caller === 'access key of the site' || !ofSite ? 'through' : 404;
  }
  if (!ofSite) return 'through';
  if (
    caller === 'admin' ||
    caller === 'analyst' ||
    caller === 'supervisor' ||
    caller === 'consultant'
  )
    return roleMay(caller, contract.action, true) ? 'through' : 403;
  return 404;
}

/** An address with ids that name nothing but the site: what is let through finds nothing, or wrong input. */
const addressOf = (contract: Contract, siteId: number) =>
  contract.path
    .replace(':siteId', String(siteId))
    .replace(/:(\w+)/g, (_, name: string) => (name === 'jobKey' ? 'NONE' : '999999'));

/** Answers of a call that was let through, with input that is empty or names nothing. */
const throughStatuses = [200, 201, 202, 204, 400, 404, 415];

/** Ending the sessions of those who call would end the test. */
const leftOut = ['signOut', 'signOutEverywhere'];

describe.each(callers)('%s', (caller) => {
  it.each(
    contracts
      .filter((contract) => !leftOut.includes(contract.name))
      .map((each) => [each.name, each] as const),
  )('calls %s as the policy says', async (_, contract) => {
    const make = agents.get(caller);
    if (!make) throw new Error(`There is no ${caller}.`);
    const response = await make(contract.method, addressOf(contract, lowmoor.siteId));
    const wanted = expected(contract, caller);
    if (wanted === 'through') {
      expect(throughStatuses).toContain(response.status);
      // Making a site is open by role, judged in the organisation that it is made in.
      if (response.status === 404)
        expect((response.body as { detail: string }).detail).not.toMatch(/^The site/);
    } else {
      expect(response.status).toBe(wanted);
      expect(response.headers['content-type']).toContain('application/problem+json');
    }
  });
});

describe('a site of another organisation', () => {
  it.each(
    contracts
      .filter((each) => each.path.includes(':siteId'))
      .map((each) => [each.name, each] as const),
  )('answers %s exactly as one that does not exist', async (_, contract) => {
    const make = agents.get('admin');
    if (!make) throw new Error('There is no admin.');
    const foreign = await make(contract.method, addressOf(contract, fellgateSite));
    const none = await make(contract.method, addressOf(contract, 424_242));
    expect(foreign.status).toBe(404);
    const told = ({ body }: request.Response) => ({ ...(body as object), requestId: '' });
    expect(told(foreign)).toEqual(told(none));
  });
});

it('somebody who belongs nowhere any more sees no site', async () => {
  const response = await agents.get('person who was removed, with a live session')?.(
    'get',
    '/api/sites',
  );
  expect([response?.status, response?.body]).toEqual([200, []]);
});

it('signing out everywhere is for signed-in persons', async () => {
  const path = '/api/auth/sign-out-everywhere';
  for (const caller of signedOut)
    expect([caller, (await agents.get(caller)?.('post', path))?.status]).toEqual([caller, 401]);
  const byKey = await agents.get('access key of the site')?.('post', path);
  expect(byKey?.status).toBe(403);
});

it('every call has a rule', () => {
  for (const contract of contracts) expect(policy).toHaveProperty([contract.action]);
});

it('making a site is refused to roles that may not', async () => {
  const body = { name: 'Shed', timeZone: 'Europe/Dublin' };
  for (const caller of ['supervisor', 'consultant'] as const) {
    const response = await agents.get(caller)?.('post', '/api/sites').send(body);
    expect(response?.status).toBe(403);
  }
});
