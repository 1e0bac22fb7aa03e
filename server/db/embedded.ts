import { existsSync, readFileSync, rmSync } from 'node:fs';
import path from 'node:path';
import { findPostgresBinaries } from '../setup/postgres-binaries.mjs';
import { adoptRunning, isRunning } from './adopt-cluster.ts';
import { urlOf, type Cluster } from './cluster.ts';
import { clusterFolder, usedTestFolders, type ClusterKind } from './cluster-folder.ts';
import { enterCluster, isClusterInUse, leaveCluster, withClusterLock } from './cluster-users.ts';
import { clusterUser } from './cluster-user.ts';
import { makeCluster } from './make-cluster.ts';
import { ensureDatabase, haltCluster, startCluster } from './run-cluster.ts';

/** A PostgreSQL of our own on loopback. */
export interface EmbeddedDatabase {
  /** Address of the role that owns the schema. */
  migratingUrl: string;
  /** Leaves it; the last process to leave stops it. */
  stop(): Promise<void>;
  /** The same where nothing can be waited for: in the listener of a process's exit. */
  stopAtExit(): void;
}

/**
 * Starts the local cluster, making it first where it is not there; takes over one that a killed server
 * left running, and shares one that another living process uses.
 *
 * @throws Error with one sentence that says what to do
 */
export async function startEmbedded(options: {
  dataDir?: string;
  kind: ClusterKind;
  say: (line: string) => void;
}): Promise<EmbeddedDatabase> {
  const { kind, say } = options;
  if (process.platform !== 'linux')
    throw new Error('The local database is for Linux. Set DATABASE_URL to a PostgreSQL server.');
  if (kind === 'test') await removeAbandonedTests();
  const { folder, user } = clusterFolder(kind, options.dataDir);
  return withClusterLock(folder, async () => {
    const data = path.join(folder, 'data');
    const cluster = { bin: programsFor(data), user, folder, data, kind };
    if (!existsSync(data)) {
      say(`Making the local database in ${folder} …`);
      makeCluster(cluster);
    }
    const port = (await adoptRunning(cluster)) ?? (await startCluster(cluster));
    await ensureDatabase(cluster, port);
    enterCluster(folder);
    return {
      migratingUrl: urlOf(cluster, port),
      stop: () => stop(cluster),
      stopAtExit: () => {
        leave(cluster);
      },
    };
  });
}

/** A test run that was killed leaves its cluster behind, running; one that this process uses is none. */
async function removeAbandonedTests(): Promise<void> {
  const user = clusterUser();
  for (const folder of usedTestFolders(user)) {
    const data = path.join(folder, 'data');
    const cluster = { bin: programsFor(data), user, folder, data, kind: 'test' as const };
    await withClusterLock(folder, () => {
      endUnlessUsed(cluster);
    }).catch((error: unknown) => {
      // Another run may have removed it first.
      if (existsSync(folder)) throw error;
    });
  }
}

const stop = (cluster: Cluster) =>
  withClusterLock(cluster.folder, () => {
    leave(cluster);
  });

function leave(cluster: Cluster): void {
  leaveCluster(cluster.folder);
  endUnlessUsed(cluster);
}

function endUnlessUsed(cluster: Cluster): void {
  if (isClusterInUse(cluster.folder)) return;
  if (isRunning(cluster)) haltCluster(cluster);
  if (cluster.kind === 'test') rmSync(cluster.folder, { recursive: true, force: true });
}

/** Programs of the version that made the data, or the newest for new data. */
function programsFor(data: string): string {
  const versionFile = path.join(data, 'PG_VERSION');
  const version = existsSync(versionFile) ? readFileSync(versionFile, 'utf8').trim() : undefined;
  const bin = findPostgresBinaries(version);
  if (bin !== null) return bin;
  throw new Error(
    version === undefined
      ? 'PostgreSQL is not installed. As root, run: apt-get install postgresql'
      : `The local database was made by PostgreSQL ${version}, which is not installed. As root, run: apt-get install postgresql-${version}`,
  );
}
