import { drizzle, type NodePgDatabase } from 'drizzle-orm/node-postgres';
import { Pool, type PoolClient } from 'pg';
import { onConnection } from './on-connection.ts';

export type Database = NodePgDatabase & { $client: Pool };
/** A transaction as drizzle hands it on. */
export type Transaction = Parameters<Parameters<NodePgDatabase['transaction']>[0]>[0];

export interface ConnectOptions {
  /** Most connections at a time. */
  max?: number;
  /** Told of a connection lost while idle; without a listener that would end the process. */
  onIdleError?: (error: Error) => void;
}

/**
 * A pool of connections to one database under one role, with drizzle over it. A connection that breaks
 * within a transaction fails that transaction and leaves the pool, and does no harm beyond it.
 */
export function connect(url: string, options: ConnectOptions = {}): Database {
  const pool = new Pool({ connectionString: url, max: options.max ?? 10 });
  pool.on('error', (error) => options.onIdleError?.(error));
  const db = drizzle(pool, { casing: 'snake_case' });
  // Made once for each connection: it remembers how columns are called.
  const overClient = new WeakMap<PoolClient, NodePgDatabase>();
  const over = (client: PoolClient): NodePgDatabase => {
    const made = overClient.get(client) ?? drizzle(client, { casing: 'snake_case' });
    overClient.set(client, made);
    return made;
  };
  // Drizzle's own would keep a connection for ever whose first statement fails, and hear no errors of it.
  const transaction: Database['transaction'] = (work, config) =>
    onConnection(pool, (client) => over(client).transaction(work, config));
  return Object.assign(db, { transaction });
}
