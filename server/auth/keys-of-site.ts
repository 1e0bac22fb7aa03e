import { and, desc, eq, isNull } from 'drizzle-orm';
import type { Database, Transaction } from '../db/client.ts';
import { accessKey } from '../db/schema/people.ts';
import { conflict, notFound } from '../errors.ts';

export type AccessKeyRow = typeof accessKey.$inferSelect;
type Site = Pick<AccessKeyRow, 'organisationId' | 'siteId'>;

const ofSite = ({ organisationId, siteId }: Site) =>
  and(eq(accessKey.organisationId, organisationId), eq(accessKey.siteId, siteId));

/** The access keys of a site, newest first, revoked ones too. */
export const listKeysOfSite = (db: Database, site: Site): Promise<AccessKeyRow[]> =>
  db.select().from(accessKey).where(ofSite(site)).orderBy(desc(accessKey.id));

/** Keeps a new access key by its hash. */
export async function keepKey(
  tx: Transaction,
  key: Pick<
    AccessKeyRow,
    'organisationId' | 'siteId' | 'name' | 'keyHash' | 'createdBy' | 'createdAt' | 'expiresAt'
  >,
): Promise<AccessKeyRow> {
  const [row] = await tx.insert(accessKey).values(key).returning();
  if (!row) throw new Error('The access key could not be kept.');
  return row;
}

/**
 * Ends an access key at once.
 *
 * @throws ApiError not-found where the site has no such key, conflict where it was revoked already
 */
export async function revokeKey(
  tx: Transaction,
  site: Site,
  keyId: number,
  now: Date,
): Promise<{ before: AccessKeyRow; after: AccessKeyRow }> {
  const ofKey = and(ofSite(site), eq(accessKey.id, keyId));
  const [before] = await tx.select().from(accessKey).where(ofKey);
  if (!before) throw notFound('The access key');
  const [after] = await tx
    .update(accessKey)
    .set({ revokedAt: now })
    .where(and(ofKey, isNull(accessKey.revokedAt)))
    .returning();
  if (!after) throw conflict('This access key was revoked already.');
  return { before, after };
}
