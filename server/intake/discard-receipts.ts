import { and, eq, lt } from 'drizzle-orm';
import type { Database } from '../db/client.ts';
import { organisation } from '../db/schema/people.ts';
import { upload } from '../db/schema/uploads.ts';
import { withTenant } from '../db/tenant.ts';

/**
 * Removes files that were being received when their server ended.
 *
 * @param olderThan receipts that began before this moment; later ones may still be arriving
 * @returns how many there were
 */
export async function discardUnfinishedReceipts(db: Database, olderThan: Date): Promise<number> {
  const organisations = await db.select({ id: organisation.id }).from(organisation);
  let discarded = 0;
  for (const { id } of organisations) {
    const rows = await withTenant(db, id, (tx) =>
      tx
        .delete(upload)
        .where(
          and(
            eq(upload.organisationId, id),
            eq(upload.status, 'receiving'),
            lt(upload.receivedAt, olderThan),
          ),
        )
        .returning({ id: upload.id }),
    );
    discarded += rows.length;
  }
  return discarded;
}
