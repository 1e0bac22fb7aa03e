import type { SignInThrottle } from './auth/throttle.ts';
import type { Clock } from './clock.ts';
import type { Database } from './db/client.ts';
import type { Env } from './env.ts';
import type { SiteQueue } from './jobs/queues.ts';
import type { Logger } from './log.ts';

/** Everything that answering requests needs, handed in, so that tests can hand in their own. */
export interface Dependencies {
  db: Database;
  clock: Clock;
  log: Logger;
  env: Env;
  /** Signs session cookies; the same for all server processes. */
  sessionKey: Uint8Array;
  throttle: SignInThrottle;
  queue: SiteQueue;
  /** The one-time token of the first-admin page; null once there is an organisation. */
  firstAdmin: FirstAdminGate;
  /** Whether answers are checked against their contracts: in tests. */
  checkAnswers: boolean;
}

/** Guards the making of the first admin. */
export interface FirstAdminGate {
  isOpen(): Promise<boolean>;
  matches(token: string): Promise<boolean>;
}
