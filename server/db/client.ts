import { drizzle, type NodePgDatabase } from 'drizzle-orm/node-postgres';
import { Pool } from 'pg';

export type Database = NodePgDatabase & { $client: Pool };
/** A transaction as drizzle hands it on. */
export type Transaction = Parameters<Parameters<NodePgDatabase['transaction']>[0]>[0];

export interface ConnectOptions {
  /** Most connections at a time. */
  max?: number;
  /** Told of a connection lost while idle; without a listener that would end the process. */
  onIdleError?: (error: Error) => void;
}

/** A pool of connections to one database under one role, with drizzle over it. */
export function connect(url: string, options: ConnectOptions = {}): Database {
  const pool = new Pool({ connectionString: url, max: options.max ?? 10 });
  pool.on('error', (error) => options.onIdleError?.(error));
  return drizzle(pool, { casing: 'snake_case' });
}
