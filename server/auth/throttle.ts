import { sql } from 'drizzle-orm';
import { RateLimiterPostgres, RateLimiterRes } from 'rate-limiter-flexible';
import { ApiError } from '../errors.ts';
import type { Database } from '../db/client.ts';

/**
 * Failed sign-ins that are let through before waiting begins, and how long it lasts. A whole plant may share
 * one origin.
 */
const byAddress = { points: 8, duration: 15 * 60 };
const byOrigin = { points: 100, duration: 15 * 60 };

export interface SignInThrottle {
  /**
   * Lets one attempt be made, and counts it where it fails. Attempts on one address, or from one origin,
   * take turns: many at once are counted like many in a row.
   *
   * @param attempt answers null where it failed; a success clears the failures of the address
   * @throws ApiError too-many-attempts while the address or the origin has to wait
   */
  attempt<Result>(
    address: string,
    origin: string,
    attempt: () => Promise<Result | null>,
  ): Promise<Result | null>;
}

/** Slows failed sign-ins down, counted in the database, so for all server processes together. */
export function createSignInThrottle(db: Database): SignInThrottle {
  const limiter = (keyPrefix: string, limits: { points: number; duration: number }) =>
    new RateLimiterPostgres({
      storeClient: db.$client,
      storeType: 'pool',
      tableName: 'sign_in_throttle',
      tableCreated: true,
      clearExpiredByTimeout: false,
      keyPrefix,
      ...limits,
    });
  const addresses = limiter('address', byAddress);
  const origins = limiter('origin', byOrigin);
  const inTurn = createTurns();

  const check = async (address: string, origin: string) => {
    const found = await Promise.all([
      addresses.get(address).then((state) => waits(state, byAddress.points)),
      origins.get(origin).then((state) => waits(state, byOrigin.points)),
    ]);
    const seconds = Math.max(...found);
    if (seconds > 0) throw tooMany(seconds);
  };
  const noteFailure = async (address: string, origin: string) => {
    await forgetExpired(db);
    await Promise.all([addresses.consume(address), origins.consume(origin)].map(ignoreBlocked));
  };

  return {
    attempt: (address, origin, attempt) =>
      inTurn(`origin ${origin}`, () =>
        inTurn(`address ${address}`, async () => {
          await check(address, origin);
          const result = await attempt();
          if (result === null) await noteFailure(address, origin);
          else await addresses.delete(address);
          return result;
        }),
      ),
  };
}

/** Addresses are whatever somebody typed: what no longer counts is not kept. */
async function forgetExpired(db: Database): Promise<void> {
  await db.execute(sql`/* throttles that are over */
    delete from sign_in_throttle where expire < ${Date.now()}::bigint`);
}

/** Runs work of the same key one after another, in the order in which it was asked for. */
function createTurns() {
  const last = new Map<string, Promise<unknown>>();
  return async <Result>(key: string, work: () => Promise<Result>): Promise<Result> => {
    const mine = (last.get(key) ?? Promise.resolve()).then(work);
    const over = mine.catch(() => undefined);
    last.set(key, over);
    try {
      return await mine;
    } finally {
      if (last.get(key) === over) last.delete(key);
    }
  };
}

const waits = (state: RateLimiterRes | null, points: number): number =>
  state && state.consumedPoints >= points ? Math.ceil(state.msBeforeNext / 1000) : 0;

const tooMany = (seconds: number) =>
  new ApiError(
    'too-many-attempts',
    `There were too many failed attempts. Wait ${Math.ceil(seconds / 60)} minutes and try again.`,
    { retryAfterSeconds: seconds },
  );

/** The limiter rejects when the limit is reached; the count is kept all the same. */
async function ignoreBlocked(counted: Promise<unknown>): Promise<void> {
  try {
    await counted;
  } catch (error) {
    if (!(error instanceof RateLimiterRes)) throw error;
  }
}
