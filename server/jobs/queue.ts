import PgBoss from 'pg-boss';
import { z } from 'zod';
import { isLostConnection } from '../db/faults.ts';
import { discardAbandonedReceipts } from '../intake/discard-receipts.ts';
import type { Logger } from '../log.ts';
import type { SiteQueue } from './queues.ts';
import { findSitesWithWork } from './sites-with-work.ts';
import { workOnSite, type SiteWork } from './site-work.ts';

/** How many sites are worked on at once by one server process. */
const sitesAtOnce = 2;
const sweepEveryMs = 30_000;
/** A site that another holds, perhaps one that was killed, or that was lost with the database, is looked at again. */
const lookAgainAfterMs = 3000;
const siteJob = z.object({ organisationId: z.number(), siteId: z.number() });

export interface Worker extends SiteQueue {
  /** Stops taking work, lets what is at a safe point end, and puts the rest back. */
  stop(): Promise<void>;
}

/**
 * Starts the job queue under the application's role, and the work on sites.
 *
 * @param url address of the application's role; the queue's schema was made by the migrating role
 */
export async function startWorker(url: string, work: SiteWork, log: Logger): Promise<Worker> {
  const boss = new PgBoss({ connectionString: url, migrate: false, max: 4 });
  boss.on('error', (error) => {
    log.warn({ err: error }, 'job queue');
  });
  await boss.start();
  const workerIds: string[] = [];
  const stopping = new AbortController();
  const waiting = new Map<number, NodeJS.Timeout>();
  const lookAgain = (organisationId: number, siteId: number) => {
    if (waiting.has(siteId) || stopping.signal.aborted) return;
    const look = () => {
      waiting.delete(siteId);
      wake(organisationId, siteId).catch(() => {
        lookAgain(organisationId, siteId);
      });
    };
    waiting.set(siteId, setTimeout(look, lookAgainAfterMs));
  };
  const workOn = async (organisationId: number, siteId: number) => {
    try {
      const isDone = await workOnSite(work, organisationId, siteId, stopping.signal);
      if (!isDone) lookAgain(organisationId, siteId);
    } catch (error) {
      log.warn({ err: error, siteId }, 'work on a site broke off');
      if (isLostConnection(error)) lookAgain(organisationId, siteId);
      throw error;
    }
  };
  for (let index = 0; index < sitesAtOnce; index++) {
    const id = await boss.work('site-work', { pollingIntervalSeconds: 2 }, async (jobs) => {
      for (const job of jobs) {
        const { organisationId, siteId } = siteJob.parse(job.data);
        await workOn(organisationId, siteId);
      }
    });
    workerIds.push(id);
  }
  const wake = async (organisationId: number, siteId: number) => {
    // A site's work may take hours; the database, not the queue, knows whether it was broken off.
    await boss.send('site-work', { organisationId, siteId }, { expireInHours: 20, retryLimit: 0 });
    for (const id of workerIds) boss.notifyWorker(id);
  };
  const sweep = async () => {
    await discardAbandonedReceipts(work.db);
    for (const site of await findSitesWithWork(work.db))
      await wake(site.organisationId, site.siteId);
  };
  await sweep();
  const timer = setInterval(() => {
    sweep().catch((error: unknown) => {
      log.warn({ err: error }, 'sweep for waiting work');
    });
  }, sweepEveryMs);
  return {
    wake,
    async stop() {
      clearInterval(timer);
      for (const timeout of waiting.values()) clearTimeout(timeout);
      stopping.abort();
      await boss.stop({ graceful: true, wait: true, timeout: 20_000 });
    },
  };
}
