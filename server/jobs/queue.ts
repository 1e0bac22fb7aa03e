import PgBoss from 'pg-boss';
import { z } from 'zod';
import { discardUnfinishedReceipts } from '../intake/discard-receipts.ts';
import type { Logger } from '../log.ts';
import type { SiteQueue } from './queues.ts';
import { findSitesWithWork } from './sites-with-work.ts';
import { workOnSite, type SiteWork } from './site-work.ts';

/** How many sites are worked on at once by one server process. */
const sitesAtOnce = 2;
const sweepEveryMs = 30_000;
/** A file still arriving after so long was broken off with the server that took it. */
const unfinishedAfterMs = 6 * 3_600_000;
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
  for (let index = 0; index < sitesAtOnce; index++) {
    const id = await boss.work('site-work', { pollingIntervalSeconds: 2 }, async (jobs) => {
      for (const job of jobs) {
        const { organisationId, siteId } = siteJob.parse(job.data);
        await workOnSite(work, organisationId, siteId, stopping.signal);
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
    const broken = new Date(work.clock.now().getTime() - unfinishedAfterMs);
    await discardUnfinishedReceipts(work.db, broken);
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
      stopping.abort();
      await boss.stop({ graceful: true, wait: true, timeout: 20_000 });
    },
  };
}
