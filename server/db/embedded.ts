import { randomBytes } from 'node:crypto';
import { existsSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createServer, type AddressInfo } from 'node:net';
import path from 'node:path';
import { Client } from 'pg';
import { findPostgresBinaries } from '../setup/postgres-binaries.mjs';
import { clusterFolder, type ClusterKind } from './cluster-folder.ts';
import { clusterSettings } from './cluster-settings.ts';
import { runAsCluster, type ClusterUser } from './cluster-user.ts';

/** A PostgreSQL of our own on loopback. */
export interface EmbeddedDatabase {
  /** Address of the role that owns the schema. */
  migratingUrl: string;
  /** Whether this process is to stop it: false while another living server uses it. */
  owned: boolean;
  stop(): Promise<void>;
}

interface Cluster {
  bin: string;
  user: ClusterUser;
  /** Holds the data directory, and beside it the password, the port and the owner. */
  folder: string;
  data: string;
  kind: ClusterKind;
}

const databaseName = 'weirmark';
const portTries = 3;

/**
 * Starts the local cluster, making it first where it is not there; takes over one that a killed server
 * left running, and shares one that another living server owns.
 *
 * @throws Error with one sentence that says what to do
 */
export async function startEmbedded(options: {
  dataDir?: string;
  kind: ClusterKind;
  say: (line: string) => void;
}): Promise<EmbeddedDatabase> {
  const bin = findPostgresBinaries();
  if (bin === null)
    throw new Error('PostgreSQL is not installed. Run npm start, or: apt-get install postgresql');
  const { folder, user } = clusterFolder(options.kind, options.dataDir);
  const cluster = { bin, user, folder, data: path.join(folder, 'data'), kind: options.kind };
  if (!existsSync(path.join(cluster.data, 'PG_VERSION'))) {
    options.say('Making the local database …');
    makeCluster(cluster);
  }
  const running = await adoptRunning(cluster);
  const port = running ?? (await startCluster(cluster));
  const owned = takeOwnership(cluster);
  return {
    migratingUrl: urlOf(cluster, port),
    owned,
    stop: () => Promise.resolve(stopCluster(cluster)),
  };
}

const urlOf = (cluster: Cluster, port: number) =>
  `postgres://${databaseName}:${readFileSync(path.join(cluster.folder, 'password'), 'utf8')}@127.0.0.1:${port}/${databaseName}`;

/** A half-made data directory has no PG_VERSION of ours: it is removed and made anew. */
function makeCluster(cluster: Cluster): void {
  const { folder, data, user, bin } = cluster;
  const password = path.join(folder, 'password');
  const fresh = path.join(folder, 'data-in-the-making');
  rmSync(fresh, { recursive: true, force: true });
  rmSync(data, { recursive: true, force: true });
  writeFileSync(password, randomBytes(18).toString('base64url'), { mode: 0o600 });
  user.own(password);
  runAsCluster(user, path.join(bin, 'initdb'), [
    `--pgdata=${fresh}`,
    `--username=${databaseName}`,
    `--pwfile=${password}`,
    '--auth=scram-sha-256',
    '--encoding=UTF8',
    '--locale=C.UTF-8',
    ...(cluster.kind === 'test' ? ['--no-sync'] : []),
  ]);
  runAsCluster(user, '/bin/mv', [fresh, data]);
}

/** The port of a cluster that runs already and answers; null where none does. */
async function adoptRunning(cluster: Cluster): Promise<number | null> {
  const pidFile = path.join(cluster.data, 'postmaster.pid');
  if (!existsSync(pidFile)) return null;
  const port = Number(readFileSync(pidFile, 'utf8').split('\n')[3]);
  if (!Number.isInteger(port) || port <= 0) return null;
  return (await answers(urlOf(cluster, port).replace(/\/[^/]+$/, '/postgres'))) ? port : null;
}

async function answers(url: string): Promise<boolean> {
  const client = new Client({ connectionString: url, connectionTimeoutMillis: 3000 });
  try {
    await client.connect();
    await client.query('select 1');
    return true;
  } catch {
    return false;
  } finally {
    await client.end().catch(() => undefined);
  }
}

async function startCluster(cluster: Cluster): Promise<number> {
  const log = path.join(cluster.folder, 'postgresql.log');
  const settings = path.join(cluster.folder, 'settings.conf');
  let failure: unknown;
  for (let attempt = 0; attempt < portTries; attempt++) {
    const port = await freePort();
    writeFileSync(settings, clusterSettings(cluster.kind, port));
    cluster.user.own(settings);
    try {
      runAsCluster(cluster.user, path.join(cluster.bin, 'pg_ctl'), [
        'start',
        '--wait',
        '--timeout=120',
        `--pgdata=${cluster.data}`,
        `--log=${log}`,
        `--options=-c config_file=${settings} -c data_directory=${cluster.data} -c hba_file=${cluster.data}/pg_hba.conf -c ident_file=${cluster.data}/pg_ident.conf`,
      ]);
      await ensureDatabase(urlOf(cluster, port));
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

async function ensureDatabase(url: string): Promise<void> {
  const client = new Client({ connectionString: url.replace(/\/[^/]+$/, '/postgres') });
  await client.connect();
  try {
    const found = await client.query('select from pg_database where datname = $1', [databaseName]);
    if (found.rowCount === 0) await client.query(`create database ${databaseName}`);
  } finally {
    await client.end();
  }
}

/** Notes this process as the owner, unless another living one is. */
function takeOwnership(cluster: Cluster): boolean {
  const file = path.join(cluster.folder, 'owner.pid');
  const owner = existsSync(file) ? Number(readFileSync(file, 'utf8')) : 0;
  if (owner > 0 && owner !== process.pid && isLivingServer(owner)) return false;
  writeFileSync(file, String(process.pid));
  return true;
}

/** A process with this id that is a Node: ids are given again, and a shell is no server of ours. */
function isLivingServer(pid: number): boolean {
  try {
    process.kill(pid, 0);
    const command = `/proc/${pid}/cmdline`;
    return !existsSync(command) || readFileSync(command, 'utf8').includes('node');
  } catch {
    return false;
  }
}

function stopCluster(cluster: Cluster): void {
  if (existsSync(path.join(cluster.data, 'postmaster.pid'))) stopPostmaster(cluster);
  rmSync(path.join(cluster.folder, 'owner.pid'), { force: true });
  if (cluster.kind === 'test') rmSync(cluster.folder, { recursive: true, force: true });
}

/** One that was killed has left its file behind, and there is nothing to stop. */
function stopPostmaster(cluster: Cluster): void {
  const pid = Number(
    readFileSync(path.join(cluster.data, 'postmaster.pid'), 'utf8').split('\n')[0],
  );
  try {
    process.kill(pid, 0);
  } catch {
    return;
  }
  runAsCluster(cluster.user, path.join(cluster.bin, 'pg_ctl'), [
    'stop',
    '--wait',
    '--mode=fast',
    `--pgdata=${cluster.data}`,
  ]);
}
