import type { Express } from 'express';
import { pino } from 'pino';
import request from 'supertest';
import { buildApp, serveClient } from '../../server/app.ts';
import { createFirstAdminGate } from '../../server/auth/first-admin.ts';
import { createSignInThrottle } from '../../server/auth/throttle.ts';
import type { Clock } from '../../server/clock.ts';
import { connect, type Database } from '../../server/db/client.ts';
import { demoPassword } from '../../server/demo/accounts.ts';
import { loadDemo } from '../../server/demo/load-demo.ts';
import { readEnv } from '../../server/env.ts';
import { workOnSite } from '../../server/jobs/site-work.ts';
import { cloneDatabase } from './database.ts';

export type Agent = ReturnType<typeof request.agent>;

/** The whole application over a database of its own, with work on sites done in this process. */
export interface TestApp {
  app: Express;
  db: Database;
  /** Under the role that owns the schema: sees everything. */
  migrating: Database;
  clock: TestClock;
  firstAdminToken: string;
  /** Signs in, by the demo's password unless another is given. */
  signIn(email: string, password?: string): Promise<Agent>;
  /** Resolves when all work that was asked for is done. */
  settled(): Promise<void>;
  close(): Promise<void>;
}

export interface TestClock extends Clock {
  set(now: Date): void;
}

function testClock(start: Date): TestClock {
  let now = start;
  return { now: () => now, set: (next) => (now = next) };
}

/** Fixed, so that what depends on the day of the run shows. */
export const testNow = new Date('2026-11-30T12:00:00Z');

export async function startTestApp(
  options: { demo?: boolean; clientFolder?: string; env?: Record<string, string> } = {},
): Promise<TestApp> {
  const database = await cloneDatabase();
  const db = connect(database.applicationUrl, { max: 8 });
  const migrating = connect(database.migratingUrl, { max: 2 });
  const clock = testClock(testNow);
  const log = pino({ level: process.env.TEST_LOG ?? 'silent' });
  if (options.demo !== false) await loadDemo(db, clock);
  const { gate, token } = await createFirstAdminGate(migrating, db);
  let work: Promise<unknown> = Promise.resolve();
  const dependencies = {
    db,
    clock,
    log,
    env: readEnv({ WEIRMARK_UPLOAD_LIMIT_MB: '8', ...options.env }),
    sessionKey: Buffer.alloc(32, 7),
    throttle: createSignInThrottle(db),
    queue: {
      wake: (organisationId: number, siteId: number) => {
        work = work.then(() => workOnSite({ db, clock, log }, organisationId, siteId));
        return Promise.resolve();
      },
    },
    firstAdmin: gate,
    checkAnswers: true,
  };
  const client = options.clientFolder === undefined ? undefined : serveClient(options.clientFolder);
  const app = buildApp(dependencies, client);
  return {
    app,
    db,
    migrating,
    clock,
    firstAdminToken: token,
    async signIn(email, password = demoPassword) {
      const agent = request.agent(app);
      await agent.post('/api/auth/sign-in').send({ email, password }).expect(200);
      return agent;
    },
    async settled() {
      for (let seen; seen !== work;) {
        seen = work;
        await work;
      }
    },
    async close() {
      await work.catch(() => undefined);
      await db.$client.end();
      await migrating.$client.end();
      await database.drop();
    },
  };
}
