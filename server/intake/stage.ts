import { finished } from 'node:stream/promises';
import type { PoolClient } from 'pg';
import { from as copyFrom } from 'pg-copy-streams';
import { BinaryCopy } from './binary-copy.ts';

const makeStagedRow = `/* stage of accepted rows */
create temporary table staged_row (
  line integer not null,
  part smallint not null default 0,
  job_key text collate "C" not null,
  area_number integer not null,
  event text,
  arrived timestamptz,
  started timestamptz,
  finished timestamptz,
  second_reading timestamptz,
  ending text,
  record_key text collate "C",
  quantity numeric,
  family text,
  due timestamptz,
  priority text,
  work_content numeric,
  value numeric,
  resource text,
  status text,
  parent text
)`;

const makeStagedRefused = `/* stage of refused rows */
create temporary table staged_refused (
  line integer not null,
  part smallint not null default 0,
  reason text not null,
  detail text not null,
  raw text not null
)`;

const refusedColumns = 'line, part, reason, detail, raw';
export const refusedFields = 5;

/** Bytes that are sent in one COPY. Two lots of each kind are in memory: one fills while one is sent. */
const lotBytes = 1_048_576;
const lotRoom = lotBytes + 524_288;

/** Where judged rows go. */
export interface RowSink {
  readonly rows: BinaryCopy;
  readonly refused: BinaryCopy;
  sendFull(): Promise<void>;
}

/**
 * The temporary tables of one load's connection, filled by COPY in lots: rows gather in memory, and a full
 * lot is sent while the next one gathers. A COPY of its own for each lot lets accepted and refused rows
 * take turns on the one connection.
 */
export class Stage implements RowSink {
  rows = new BinaryCopy(lotRoom);
  refused = new BinaryCopy(lotRoom);
  readonly #client: PoolClient;
  readonly #rowColumns: string;
  #spareRows = new BinaryCopy(lotRoom);
  #spareRefused = new BinaryCopy(lotRoom);
  #sending: Promise<void> = Promise.resolve();

  private constructor(client: PoolClient, rowColumns: readonly string[]) {
    this.#client = client;
    this.#rowColumns = rowColumns.join(', ');
  }

  /** @param rowColumns columns of `staged_row` that each row of `rows` fills */
  static async open(client: PoolClient, rowColumns: readonly string[]): Promise<Stage> {
    await Stage.drop(client);
    await client.query(makeStagedRow);
    await client.query(makeStagedRefused);
    return new Stage(client, rowColumns);
  }

  /** Removes what an earlier load left on the connection. */
  static async drop(client: PoolClient): Promise<void> {
    await client.query(
      '/* drop stage */ drop table if exists pg_temp.staged_row, pg_temp.staged_refused',
    );
  }

  /** Sends lots that are full; waits only where the lot before is still on its way. */
  async sendFull(): Promise<void> {
    if (this.rows.length >= lotBytes) await this.#sendRows();
    if (this.refused.length >= lotBytes) await this.#sendRefused();
  }

  /** Sends what is left and waits until everything stands in the tables. */
  async close(): Promise<void> {
    await this.#sendRows();
    await this.#sendRefused();
    await this.#sending;
  }

  /** Waits for what is on its way, whatever becomes of it: the connection can then be used again. */
  async settle(): Promise<void> {
    await this.#sending.catch(() => undefined);
  }

  async #sendRows(): Promise<void> {
    await this.#sending;
    const full = this.rows;
    this.rows = this.#spareRows;
    this.#spareRows = full;
    this.#send(`/* stage rows */ copy staged_row (${this.#rowColumns})`, full);
  }

  async #sendRefused(): Promise<void> {
    await this.#sending;
    const full = this.refused;
    this.refused = this.#spareRefused;
    this.#spareRefused = full;
    this.#send(`/* stage refused rows */ copy staged_refused (${refusedColumns})`, full);
  }

  #send(copy: string, lot: BinaryCopy): void {
    if (lot.rows === 0) return;
    const sending = copyLot(this.#client, `${copy} from stdin (format binary)`, lot.finish());
    this.#sending = sending.then(() => lot.clear());
    // It is awaited before the next lot; until then a failure must not count as unhandled.
    this.#sending.catch(() => undefined);
  }
}

async function copyLot(client: PoolClient, statement: string, bytes: Buffer): Promise<void> {
  const stream = client.query(copyFrom(statement));
  stream.end(bytes);
  await finished(stream);
}
