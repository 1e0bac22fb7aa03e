import type { TestProject } from 'vitest/node';
import { startTestCluster, type TestDatabases } from './cluster.ts';

declare module 'vitest' {
  interface ProvidedContext {
    databases: TestDatabases;
  }
}

interface Shared {
  started: ReturnType<typeof startForAll>;
  users: number;
}

/** Each project reads this file anew, all in one process: what they share lies outside of it. */
const place = globalThis as { weirmarkTestCluster?: Shared | undefined };

/** One cluster for all projects that need a database; the last to end stops it. */
export default async function setup(project: TestProject): Promise<() => Promise<void>> {
  const shared = (place.weirmarkTestCluster ??= { started: startForAll(), users: 0 });
  shared.users += 1;
  const { cluster, migratingUrl, applicationUrl } = await shared.started;
  project.provide('databases', { migratingUrl, applicationUrl });
  return async () => {
    shared.users -= 1;
    if (shared.users > 0) return;
    place.weirmarkTestCluster = undefined;
    process.off('exit', cluster.stopAtExit);
    await cluster.stop();
  };
}

async function startForAll() {
  const test = await startTestCluster();
  // Ctrl-C ends the run without what setup returns.
  process.once('exit', test.cluster.stopAtExit);
  return test;
}
