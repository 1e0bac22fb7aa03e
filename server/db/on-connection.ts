import type { Pool, PoolClient } from 'pg';

/**
 * Runs work on one connection of a pool. One that broke meanwhile is closed, any other given back; without a
 * listener its error would end the process.
 */
export async function onConnection<Result>(
  pool: Pool,
  work: (client: PoolClient) => Promise<Result>,
): Promise<Result> {
  const client = await pool.connect();
  let broken: Error | undefined;
  const onError = (error: Error) => (broken = error);
  client.on('error', onError);
  try {
    return await work(client);
  } finally {
    client.off('error', onError);
    client.release(broken);
  }
}
