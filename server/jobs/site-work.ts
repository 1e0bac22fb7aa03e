import { sql } from 'drizzle-orm';
import { drizzle } from 'drizzle-orm/node-postgres';
import type { PoolClient } from 'pg';
import type { Clock } from '../clock.ts';
import type { Database } from '../db/client.ts';
import { noticeDeath } from '../db/notice-death.ts';
import { IntakeFailure } from '../intake/failure.ts';
import { Stage } from '../intake/stage.ts';
import type { Logger } from '../log.ts';
import { deriveRequested, deriveRequestedZone } from './derive-task.ts';
import { failUpload } from './fail-upload.ts';
import { loadUpload } from './load-task.ts';
import { readNextWork, type NextWork } from './next-work.ts';
import { withdrawUpload } from './withdraw-task.ts';

/** What the work on sites needs. */
export interface SiteWork {
  db: Database;
  clock: Clock;
  log: Logger;
}

/** One task on one site, on the connection that holds the site's lock. */
export interface SiteTask extends SiteWork {
  organisationId: number;
  siteId: number;
  client: PoolClient;
  /** Over the same connection: temporary tables are seen by both. */
  connection: Database;
  /** Aborted when the server is to stop. */
  signal: AbortSignal;
}

/** First half of every site's lock, apart from other uses of advisory locks. */
const siteLock = 7_261_906;

/**
 * Does everything that waits at a site, one thing after the other, until nothing is left. Where another
 * process is at it already, that one does it: it looks once more after it has let go of the site.
 *
 * @returns whether nothing is left; false where another holds the site, which may be one that was killed
 */
export async function workOnSite(
  work: SiteWork,
  organisationId: number,
  siteId: number,
  signal: AbortSignal = new AbortController().signal,
): Promise<boolean> {
  for (;;) {
    if (!(await underLock(work, organisationId, siteId, signal))) return false;
    if (signal.aborted) return true;
    if ((await readNextWork(work.db, organisationId, siteId)) === null) return true;
  }
}

async function underLock(
  work: SiteWork,
  organisationId: number,
  siteId: number,
  signal: AbortSignal,
): Promise<boolean> {
  const client = await work.db.$client.connect();
  let broken: Error | undefined;
  const onError = (error: Error) => (broken = error);
  client.on('error', onError);
  try {
    const connection = drizzle(client, { casing: 'snake_case' }) as unknown as Database;
    const { rows } = await connection.execute(
      sql`/* site lock */ select pg_try_advisory_lock(${siteLock}, ${siteId}) as held`,
    );
    if (rows[0]?.held !== true) return false;
    await noticeDeath(client);
    const task = { ...work, organisationId, siteId, client, connection, signal };
    for (let next = await nextOf(task); next && !signal.aborted; next = await nextOf(task))
      await doTask(task, next);
    await connection.execute(
      sql`/* site unlock */ select pg_advisory_unlock(${siteLock}, ${siteId})`,
    );
    return true;
  } catch (error) {
    broken ??= error instanceof Error ? error : new Error(String(error));
    throw error;
  } finally {
    client.off('error', onError);
    // A connection that failed is closed, and its lock and temporary tables go with it.
    client.release(broken);
  }
}

const nextOf = (task: SiteTask) => readNextWork(task.db, task.organisationId, task.siteId);

async function doTask(task: SiteTask, next: NextWork): Promise<void> {
  switch (next.kind) {
    case 'load':
      await loadUpload(task, next.uploadId).catch((error: unknown) => {
        if (task.signal.aborted && !(error instanceof IntakeFailure)) throw error;
        return failUpload(task, next.uploadId, error);
      });
      // The connection goes back to the pool, where the stage would take room until its next load.
      return Stage.drop(task.client);
    case 'withdraw':
      return withdrawUpload(task, next.uploadId);
    case 'rebuild':
      return deriveRequested(task);
    case 'derive-zone':
      return deriveRequestedZone(task, next.zoneId);
  }
}
