import { and, eq, sql } from 'drizzle-orm';
import { z } from 'zod';
import { columnPlanSchema } from '../../shared/contracts/plan.ts';
import { upload } from '../db/schema/uploads.ts';
import { withTenant } from '../db/tenant.ts';
import { listSavedPlans } from '../intake/column-plans.ts';
import { IntakeFailure, stopped } from '../intake/failure.ts';
import { loadStagedRows } from '../intake/load.ts';
import { readIntoStage } from '../intake/pipeline.ts';
import { readReadingSite } from '../intake/reading-site.ts';
import { inDerivation } from './derivation-of-site.ts';
import { attemptLimit } from './fail-upload.ts';
import type { SiteTask } from './site-work.ts';

/**
 * Takes one upload in: reads its file into the stage, then loads the stage in one transaction. Whatever
 * ends it half-way, the site is as before, and the next attempt begins anew.
 *
 * @throws IntakeFailure with a sentence for the person who uploaded it
 */
export async function loadUpload(task: SiteTask, uploadId: number): Promise<void> {
  const begun = await begin(task, uploadId);
  if (begun.stopRequestedAt) throw stopped();
  if (begun.attempts > attemptLimit)
    throw new IntakeFailure(
      'internal-error',
      'The server ended several times while it read this file, so it was given up. Nothing of it was kept.',
    );
  const { organisationId, siteId } = task;
  const outcome = await readIntoStage(task.client, {
    organisationId,
    siteId,
    uploadId,
    receivedAt: begun.receivedAt,
    plan: begun.planGiven === null ? null : columnPlanSchema.parse(begun.planGiven),
    site: { timeZone: begun.timeZone },
    knownAreas: begun.knownAreas,
    savedPlans: await listSavedPlans(task.db, task),
    db: task.db,
    onProgress: (progress) => keepProgress(task, uploadId, progress),
  });
  const isAgain = begun.account !== null;
  const { plan, fileKind } = outcome;
  await setUpload(task, uploadId, { status: 'loading', fileKind, ...(isAgain ? {} : { plan }) });
  await cancelledByStop(task, uploadId, () =>
    inDerivation(task.connection, organisationId, siteId, async (derivation) => {
      const account = await loadStagedRows(derivation, { uploadId, isAgain, ...outcome });
      await derivation.tx
        .update(upload)
        // Last: until here the upload's row is free for whoever asks for a stop.
        .set({
          status: 'loaded',
          plan,
          account,
          latestAt: outcome.latestAt,
          finishedAt: task.clock.now(),
          error: null,
        })
        .where(thisUpload(task, uploadId));
    }),
  );
}

const thisUpload = ({ organisationId, siteId }: SiteTask, uploadId: number) =>
  and(
    eq(upload.organisationId, organisationId),
    eq(upload.siteId, siteId),
    eq(upload.id, uploadId),
  );

async function begin(task: SiteTask, uploadId: number) {
  const { organisationId, siteId } = task;
  return withTenant(task.db, organisationId, async (tx) => {
    const [row] = await tx
      .update(upload)
      .set({
        status: 'reading',
        attempts: sql`${upload.attempts} + 1`,
        progressRows: 0,
        progressBytes: 0,
      })
      .where(thisUpload(task, uploadId))
      .returning();
    if (!row) throw new Error(`Upload ${uploadId} is gone.`);
    return { ...row, ...(await readReadingSite(tx, { organisationId, siteId })) };
  });
}

async function setUpload(
  task: SiteTask,
  uploadId: number,
  values: Partial<typeof upload.$inferInsert>,
): Promise<void> {
  await withTenant(task.db, task.organisationId, (tx) =>
    tx.update(upload).set(values).where(thisUpload(task, uploadId)),
  );
}

/** Keeps how far the reading has come. @returns whether to go on: false once a stop was asked for */
async function keepProgress(
  task: SiteTask,
  uploadId: number,
  progress: { rows: number; bytes: number },
): Promise<boolean> {
  if (task.signal.aborted)
    throw new Error('The server is stopping; the upload is read again later.');
  const [row] = await withTenant(task.db, task.organisationId, (tx) =>
    tx
      .update(upload)
      .set({ progressRows: progress.rows, progressBytes: progress.bytes })
      .where(thisUpload(task, uploadId))
      .returning({ stopRequestedAt: upload.stopRequestedAt }),
  );
  return row?.stopRequestedAt === null;
}

const watchEveryMs = 1000;

/** Runs the load, and cancels its running statement when a stop is asked for or the server stops. */
async function cancelledByStop(
  task: SiteTask,
  uploadId: number,
  load: () => Promise<void>,
): Promise<void> {
  const { rows } = await task.connection.execute(
    sql`/* own backend */ select pg_backend_pid() as pid`,
  );
  const pid = z.number().parse(rows[0]?.pid);
  let asked = false;
  let looking = Promise.resolve();
  const watch = setInterval(() => {
    looking = (async () => {
      const [row] = await withTenant(task.db, task.organisationId, (tx) =>
        tx
          .select({ stopRequestedAt: upload.stopRequestedAt })
          .from(upload)
          .where(thisUpload(task, uploadId)),
      );
      asked = row?.stopRequestedAt !== null;
      if (!asked && !task.signal.aborted) return;
      await task.db.execute(sql`/* cancel a load */ select pg_cancel_backend(${pid})`);
    })().catch((error: unknown) => {
      task.log.warn({ err: error, uploadId }, 'watching a load for a stop');
    });
  }, watchEveryMs);
  try {
    await load();
  } catch (error) {
    if (asked) throw stopped();
    throw error;
  } finally {
    clearInterval(watch);
    // A cancellation that is on its way must not meet the connection's next statement.
    await looking;
  }
}
