import { and, eq, sql } from 'drizzle-orm';
import type { Database } from '../db/client.ts';
import { organisation } from '../db/schema/people.ts';
import { upload } from '../db/schema/uploads.ts';
import { withTenant } from '../db/tenant.ts';
import { receiptLock } from './hold-receipt.ts';
import type { UploadKey } from './original.ts';

/** Removes an upload that was not wholly received, with what there is of its file. */
export async function discardReceipt(db: Database, key: UploadKey): Promise<void> {
  await withTenant(db, key.organisationId, (tx) =>
    tx
      .delete(upload)
      .where(
        and(
          eq(upload.organisationId, key.organisationId),
          eq(upload.siteId, key.siteId),
          eq(upload.id, key.uploadId),
          eq(upload.status, 'receiving'),
        ),
      ),
  );
}

/**
 * Removes files that were being received when their server, or its connection, ended: nobody holds the lock
 * of their receipt. Files that arrive at this or another server are left alone.
 *
 * @returns how many there were
 */
export async function discardAbandonedReceipts(db: Database): Promise<number> {
  const organisations = await db.select({ id: organisation.id }).from(organisation);
  let discarded = 0;
  for (const { id } of organisations) {
    discarded += await withTenant(db, id, async (tx) => {
      // Materialized: no lock is tried of an upload that is not arriving.
      const { rowCount } = await tx.execute(sql`/* discard abandoned receipts */
        with arriving as materialized (
          select id from upload where organisation_id = ${id} and status = 'receiving'
        ),
        abandoned as materialized (
          select id from arriving where pg_try_advisory_xact_lock(${receiptLock}, id)
        )
        delete from upload using abandoned
        where organisation_id = ${id} and upload.id = abandoned.id and status = 'receiving'`);
      return rowCount ?? 0;
    });
  }
  return discarded;
}
