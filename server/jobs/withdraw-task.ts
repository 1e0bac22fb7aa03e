import { and, eq } from 'drizzle-orm';
import { upload } from '../db/schema/uploads.ts';
import { withdrawRows } from '../intake/withdraw.ts';
import { inDerivation } from './derivation-of-site.ts';
import type { SiteTask } from './site-work.ts';

/** Withdraws an upload: rows, figures and status in one transaction. */
export async function withdrawUpload(task: SiteTask, uploadId: number): Promise<void> {
  const { organisationId, siteId } = task;
  await inDerivation(task.connection, organisationId, siteId, async (derivation) => {
    await withdrawRows(derivation, uploadId);
    await derivation.tx
      .update(upload)
      .set({ status: 'withdrawn', finishedAt: task.clock.now() })
      .where(
        and(
          eq(upload.organisationId, organisationId),
          eq(upload.siteId, siteId),
          eq(upload.id, uploadId),
        ),
      );
  });
}
