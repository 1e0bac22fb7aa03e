import type { Summary } from '../../shared/contracts/figures.ts';
import type { Upload } from '../../shared/contracts/uploads.ts';
import type { Zone } from '../../shared/contracts/zones.ts';
import type { Agent, TestApp } from './app.ts';

/** A site of its own for one test, used through the API as an analyst would. */
export interface TestSite {
  id: number;
  agent: Agent;
  /** Uploads a file and waits until it is loaded or has failed. */
  upload(content: string | Buffer, plan?: object, fileName?: string): Promise<Upload>;
  withdraw(uploadId: number): Promise<void>;
  zones(): Promise<Zone[]>;
  zone(name: string): Promise<Zone>;
  summary(zoneId: number, from: string, to: string, more?: object): Promise<Summary>;
  get<Body = unknown>(path: string, query?: object): Promise<Body>;
}

let made = 0;

export async function makeSite(
  test: TestApp,
  given: { timeZone?: string; lostFinish?: string; email?: string } = {},
): Promise<TestSite> {
  const agent = await test.signIn(given.email ?? 'analyst@lowmoor.example');
  made += 1;
  const created = await agent
    .post('/api/sites')
    .send({
      name: `Site ${made}`,
      timeZone: given.timeZone ?? 'UTC',
      ...(given.lostFinish ? { lostFinish: given.lostFinish } : {}),
    })
    .expect(201);
  const { id } = created.body as { id: number };
  const path = `/api/sites/${id}`;
  const get = async <Body>(below: string, query: object = {}) =>
    (await agent.get(`${path}${below}`).query(query).expect(200)).body as Body;
  const site: TestSite = {
    id,
    agent,
    get,
    async upload(content, plan, fileName = 'export.csv') {
      const sent = agent.post(`${path}/uploads`).attach('file', Buffer.from(content), fileName);
      if (plan) void sent.field('plan', JSON.stringify(plan));
      const accepted = (await sent.expect(202)).body as { id: number };
      await test.settled();
      return get(`/uploads/${accepted.id}`);
    },
    async withdraw(uploadId) {
      await agent.delete(`${path}/uploads/${uploadId}`).expect(202);
      await test.settled();
    },
    zones: () => get('/zones'),
    async zone(name) {
      const found = (await site.zones()).find((zone) => zone.name === name);
      if (!found) throw new Error(`There is no zone named ${name}.`);
      return found;
    },
    summary: (zoneId, from, to, more = {}) =>
      get(`/zones/${zoneId}/summary`, { from, to, ...more }),
  };
  return site;
}
