import type { TestProject } from 'vitest/node';
import { startTestCluster, type TestDatabases } from './cluster.ts';

declare module 'vitest' {
  interface ProvidedContext {
    databases: TestDatabases;
  }
}

let started: ReturnType<typeof startForAll> | undefined;
let users = 0;

/** One cluster for all projects that need a database; the last to end stops it. */
export default async function setup(project: TestProject): Promise<() => Promise<void>> {
  users += 1;
  started ??= startForAll();
  const { cluster, migratingUrl, applicationUrl } = await started;
  project.provide('databases', { migratingUrl, applicationUrl });
  return async () => {
    users -= 1;
    if (users > 0) return;
    started = undefined;
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
