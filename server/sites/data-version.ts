import { and, eq, sql } from 'drizzle-orm';
import { site } from '../db/schema/sites.ts';
import type { SiteWriter } from './site-writer.ts';

/** Tells that answers about the site may differ from now on: kept ones are not given again. */
export async function bumpDataVersion({ tx, organisationId, siteId }: SiteWriter): Promise<void> {
  await tx
    .update(site)
    .set({ dataVersion: sql`${site.dataVersion} + 1` })
    .where(and(eq(site.organisationId, organisationId), eq(site.id, siteId)));
}
