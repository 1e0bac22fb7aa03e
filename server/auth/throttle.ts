import { RateLimiterPostgres, RateLimiterRes } from 'rate-limiter-flexible';
import { ApiError } from '../errors.ts';
import type { Database } from '../db/client.ts';

/** Failed sign-ins that are let through before waiting begins, and how long it lasts. */
const byAddress = { points: 8, duration: 15 * 60 };
const byOrigin = { points: 40, duration: 15 * 60 };

export interface SignInThrottle {
  /** @throws ApiError too-many-attempts while the address or the origin has to wait */
  check(email: string, origin: string): Promise<void>;
  noteFailure(email: string, origin: string): Promise<void>;
  /** A success clears the failures of the address. */
  noteSuccess(email: string): Promise<void>;
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
  return {
    async check(email, origin) {
      const found = await Promise.all([
        addresses.get(email).then((state) => waits(state, byAddress.points)),
        origins.get(origin).then((state) => waits(state, byOrigin.points)),
      ]);
      const seconds = Math.max(...found);
      if (seconds > 0) throw tooMany(seconds);
    },
    async noteFailure(email, origin) {
      await Promise.all([addresses.consume(email), origins.consume(origin)].map(ignoreBlocked));
    },
    async noteSuccess(email) {
      await addresses.delete(email);
    },
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
