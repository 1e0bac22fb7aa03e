import { writeFileSync } from 'node:fs';
import { createServer, type AddressInfo } from 'node:net';
import path from 'node:path';
import { Client } from 'pg';
import { databaseName, urlOf, type Cluster } from './cluster.ts';
import { clusterSettings } from './cluster-settings.ts';
import { runAsCluster } from './cluster-user.ts';

const portTries = 3;

/**
 * Starts a cluster that does not run, on a free port.
 *
 * @returns the port
 * @throws Error that names the log
 */
export async function startCluster(cluster: Cluster): Promise<number> {
  const { bin, user, folder, data, kind } = cluster;
  const settings = path.join(data, 'postgresql.conf');
  const log = path.join(folder, 'postgresql.log');
  let failure: unknown;
  for (let attempt = 0; attempt < portTries; attempt++) {
    const port = await freePort();
    writeFileSync(settings, clusterSettings(kind, port));
    try {
      runAsCluster(user, path.join(bin, 'pg_ctl'), [
        'start',
        '--wait',
        '--timeout=600',
        `--pgdata=${data}`,
        `--log=${log}`,
      ]);
      return port;
    } catch (error) {
      failure = error;
    }
  }
  throw new Error(`The local database did not start. Its log, ${log}, says why.`, {
    cause: failure,
  });
}

/** Free now; where another takes it in between, the start fails and the next port is tried. */
async function freePort(): Promise<number> {
  const server = createServer();
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.address() as AddressInfo;
  await new Promise<void>((resolve) => server.close(() => resolve()));
  return port;
}

/** Makes the database where it is not there: a kill may have come before it was made. */
export async function ensureDatabase(cluster: Cluster, port: number): Promise<void> {
  const client = new Client({ connectionString: urlOf(cluster, port, 'postgres') });
  await client.connect();
  try {
    const found = await client.query('select from pg_database where datname = $1', [databaseName]);
    if (found.rowCount === 0) await client.query(`create database ${databaseName}`);
  } finally {
    await client.end();
  }
}

/** @throws Error where it does not stop */
export function haltCluster({ user, bin, data }: Cluster): void {
  runAsCluster(user, path.join(bin, 'pg_ctl'), [
    'stop',
    '--wait',
    '--mode=fast',
    '--timeout=600',
    `--pgdata=${data}`,
  ]);
}
