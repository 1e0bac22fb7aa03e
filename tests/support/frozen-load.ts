import { Client } from 'pg';

/** A point in the taking in of an upload at which a test holds it. */
export type Moment = 'reading' | 'deriving';

const lockFor: Readonly<Record<Moment, string>> = {
  reading: 'lock table column_plan in access exclusive mode',
  deriving: 'lock table level_hour in exclusive mode',
};

/**
 * Keeps a server's work from going past a moment, by a lock on a table that it needs next: so the moment of
 * a kill is no matter of speed.
 */
export class FrozenLoad {
  readonly #url: string;
  readonly #clients: Client[] = [];
  #moment: Moment = 'reading';

  constructor(url: string) {
    this.#url = url;
  }

  /** To be called before the file is sent. */
  async holdAt(moment: Moment): Promise<void> {
    await this.#hold(lockFor[moment]);
    this.#moment = moment;
  }

  /** Waits until an upload has come to the moment; of reading, until some of its rows are staged. */
  async arrived(uploadId: number): Promise<void> {
    await this.#waiting();
    if (this.#moment !== 'reading') return;
    // Progress is told of each 2 MiB, and this is where it is noted.
    await this.#hold(`select from upload where id = ${uploadId} for update`);
    await this.#clients.shift()?.end();
    await this.#waiting();
  }

  async letGo(): Promise<void> {
    for (const client of this.#clients.splice(0)) await client.end().catch(() => undefined);
  }

  async #hold(statement: string): Promise<void> {
    const client = new Client({ connectionString: this.#url });
    // It may be killed with the database.
    client.on('error', () => undefined);
    await client.connect();
    await client.query('begin');
    await client.query(statement);
    this.#clients.push(client);
  }

  /** Until somebody waits for what the newest connection holds: locks are seen as they are, sessions not. */
  async #waiting(): Promise<void> {
    const client = this.#clients.at(-1);
    for (;;) {
      const found = await client?.query(
        'select from pg_locks where not granted and pg_backend_pid() = any (pg_blocking_pids(pid))',
      );
      if (found?.rowCount) return;
    }
  }
}
