import { existsSync, readFileSync, rmSync } from 'node:fs';
import path from 'node:path';
import { setTimeout as wait } from 'node:timers/promises';
import { Client } from 'pg';
import { urlOf, type Cluster } from './cluster.ts';
import { processesWorkingIn } from './cluster-user.ts';
import { commandOf } from './living-process.ts';

const pollMs = 50;
/** So long the processes of a killed server may take to end when asked. */
const patienceMs = 2000;
/** Not yet to be spoken to: starting, recovering or stopping. */
const passing = ['57P03', 'ECONNREFUSED', 'ECONNRESET'];

const pidFileOf = (cluster: Cluster) => path.join(cluster.data, 'postmaster.pid');

/** What the running server says of itself; null where none runs. */
function runningServer(cluster: Cluster): { port: number } | null {
  if (!existsSync(pidFileOf(cluster))) return null;
  const [pid = '', , , port = ''] = readFileSync(pidFileOf(cluster), 'utf8').split('\n');
  return commandOf(Number(pid)).includes(cluster.data) ? { port: Number(port) } : null;
}

export const isRunning = (cluster: Cluster) => runningServer(cluster) !== null;

/**
 * The port of the cluster where it runs already, once it answers; it may be recovering from a kill.
 *
 * @returns null where it does not run; what a killed one left behind is cleared away
 */
export async function adoptRunning(cluster: Cluster): Promise<number | null> {
  for (let server = runningServer(cluster); server; server = runningServer(cluster)) {
    if (server.port > 0 && (await answers(urlOf(cluster, server.port, 'postgres'))))
      return server.port;
    await wait(pollMs);
  }
  await endOrphans(cluster);
  rmSync(pidFileOf(cluster), { force: true });
  return null;
}

async function answers(url: string): Promise<boolean> {
  const client = new Client({ connectionString: url });
  client.on('error', () => undefined);
  try {
    await client.connect();
    return true;
  } catch (error) {
    if (error instanceof Error && 'code' in error && passing.includes(String(error.code)))
      return false;
    throw new Error(`The local database runs, but does not let us in: ${String(error)}.`, {
      cause: error,
    });
  } finally {
    await client.end().catch(() => undefined);
  }
}

/** A new server must not share the data with what is left of a killed one. */
async function endOrphans({ user, data }: Cluster): Promise<void> {
  const since = performance.now();
  for (;;) {
    const orphans = processesWorkingIn(user, data);
    if (orphans.length === 0) return;
    const signal = performance.now() - since < patienceMs ? 'SIGQUIT' : 'SIGKILL';
    for (const pid of orphans) endProcess(pid, signal);
    await wait(pollMs);
  }
}

function endProcess(pid: number, signal: NodeJS.Signals): void {
  try {
    process.kill(pid, signal);
  } catch {
    // It has ended in between.
  }
}
