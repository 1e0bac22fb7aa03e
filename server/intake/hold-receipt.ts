import type { PoolClient } from 'pg';
import { z } from 'zod';
import type { Database } from '../db/client.ts';
import { noticeDeath } from '../db/notice-death.ts';
import { ApiError } from '../errors.ts';

/** First half of the lock of every file that is arriving; the other is the upload's id. */
export const receiptLock = 7_261_909;

/** A file that is arriving, under the id of its upload. */
export interface HeldReceipt {
  uploadId: number;
  /** Aborted when the lock is lost with its connection: anyone may then discard what has arrived. */
  lost: AbortSignal;
}

/**
 * Takes the id of a new upload and holds its lock while the file arrives. The lock tells all servers that
 * somebody is receiving it; it ends with the server's process, and what is left unlocked is discarded.
 *
 * @throws ApiError unavailable where the lock was lost on the way; else what `work` throws
 */
export async function holdReceipt<Result>(
  db: Database,
  work: (held: HeldReceipt) => Promise<Result>,
): Promise<Result> {
  const session = await enterSession(db);
  try {
    const uploadId = await session.lockNext();
    try {
      return await work({ uploadId, lost: session.lost });
    } finally {
      await session.unlock(uploadId);
    }
  } catch (error) {
    if (!session.lost.aborted) throw error;
    throw new ApiError(
      'unavailable',
      'The database was lost while the file arrived. Nothing of it was kept. Send it again in a moment.',
      { cause: error },
    );
  } finally {
    session.leave();
  }
}

/** Of each pool, the session that holds its locks while any file arrives. */
const sessions = new WeakMap<Database, LockSession>();

async function enterSession(db: Database): Promise<LockSession> {
  let session = sessions.get(db);
  if (!session) {
    session = new LockSession(db);
    sessions.set(db, session);
  }
  await session.enter();
  return session;
}

const idRow = z.object({ id: z.number() });

/**
 * One connection for the locks of all files that arrive at this server, so that slow senders do not use up
 * the pool: taken with the first file, given back with the last.
 */
class LockSession {
  readonly #db: Database;
  readonly #lost = new AbortController();
  #opening: Promise<PoolClient> | null = null;
  #users = 0;
  /** Statements take turns on the connection. */
  #turn: Promise<unknown> = Promise.resolve();

  constructor(db: Database) {
    this.#db = db;
  }

  get lost(): AbortSignal {
    return this.#lost.signal;
  }

  async enter(): Promise<void> {
    this.#users += 1;
    try {
      await (this.#opening ??= this.#open());
    } catch (error) {
      this.#retire();
      throw error;
    }
  }

  leave(): void {
    this.#users -= 1;
    if (this.#users > 0 || this.lost.aborted) return;
    this.#retire();
    void this.#giveBack();
  }

  async lockNext(): Promise<number> {
    const [row] = await this.#query(
      `/* hold a receipt */
      with next as materialized (
        select nextval(pg_get_serial_sequence('upload', 'id'))::integer as id
      )
      select id, pg_advisory_lock($1, id) from next`,
      [receiptLock],
    );
    return idRow.parse(row).id;
  }

  async unlock(uploadId: number): Promise<void> {
    const statement = '/* let go of a receipt */ select pg_advisory_unlock($1, $2)';
    // Where it fails, the connection is lost and the lock with it; what was received is no worse for it.
    await this.#query(statement, [receiptLock, uploadId]).catch(() => undefined);
  }

  async #open(): Promise<PoolClient> {
    const client = await this.#db.$client.connect();
    client.on('error', this.#onError);
    try {
      await noticeDeath(client);
      return client;
    } catch (error) {
      client.off('error', this.#onError);
      client.release(true);
      throw error;
    }
  }

  #query(statement: string, values: number[]): Promise<unknown[]> {
    const answer = this.#turn.then(async () => {
      const client = await this.#opening;
      return (await client?.query<object>(statement, values))?.rows ?? [];
    });
    this.#turn = answer.catch(() => undefined);
    return answer;
  }

  readonly #onError = (error: Error): void => {
    this.#lost.abort();
    this.#retire();
    // One that breaks while it is being opened is given back there.
    this.#giveBack(error).catch(() => undefined);
  };

  async #giveBack(broken?: Error): Promise<void> {
    const client = await this.#opening;
    client?.off('error', this.#onError);
    client?.release(broken);
  }

  /** The next file opens a session of its own. */
  #retire(): void {
    if (sessions.get(this.#db) === this) sessions.delete(this.#db);
  }
}
