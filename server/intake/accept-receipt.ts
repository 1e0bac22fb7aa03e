import { and, eq } from 'drizzle-orm';
import type { ColumnPlan } from '../../shared/contracts/plan.ts';
import type { Transaction } from '../db/client.ts';
import { upload } from '../db/schema/uploads.ts';
import type { SiteKey } from './site-uploads.ts';
import type { StoredOriginal } from './store-original.ts';

/** Makes a file that was received whole an upload that waits to be read. */
export async function acceptReceipt(
  tx: Transaction,
  { organisationId, siteId }: SiteKey,
  { uploadId, byteSize, sha256 }: StoredOriginal,
  planGiven: ColumnPlan | null,
  receivedAt: Date,
): Promise<void> {
  await tx
    .update(upload)
    .set({ status: 'waiting', byteSize, sha256, planGiven, receivedAt })
    .where(
      and(
        eq(upload.organisationId, organisationId),
        eq(upload.siteId, siteId),
        eq(upload.id, uploadId),
      ),
    );
}
