import { and, eq } from 'drizzle-orm';
import { site } from '../db/schema/sites.ts';
import type { SiteWriter } from './site-writer.ts';

/**
 * Asks that the findings be looked at again, because figures, caps, events or settings changed from which they
 * are made. Whoever asks wakes the work on the site after the transaction.
 */
export async function requestFindings(
  { tx, organisationId, siteId }: SiteWriter,
  now: Date,
): Promise<void> {
  await tx
    .update(site)
    .set({ findingsRequestedAt: now })
    .where(and(eq(site.organisationId, organisationId), eq(site.id, siteId)));
}
