import type { PoolClient } from 'pg';

const wishes = [
  // A machine that lost its power closes no connection.
  "set tcp_keepalives_idle = '30s'",
  "set tcp_keepalives_interval = '10s'",
  'set tcp_keepalives_count = 3',
  // While a statement runs PostgreSQL would not look otherwise (since version 14, not on every platform).
  "set client_connection_check_interval = '2s'",
];

/**
 * Asks PostgreSQL to notice soon when this server is gone, for a connection that holds a lock for as long as
 * its server lives: what it holds is then free for the next one. What a database cannot do is left out.
 */
export async function noticeDeath(client: PoolClient): Promise<void> {
  for (const wish of wishes) {
    await client.query(`/* notice death */ ${wish}`).catch((error: unknown) => {
      if (!(error instanceof Error && 'severity' in error && error.severity === 'ERROR'))
        throw error;
    });
  }
}
