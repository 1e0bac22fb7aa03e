import { and, eq } from 'drizzle-orm';
import type { z } from 'zod';
import type { changeSite, Site } from '../../shared/contracts/sites.ts';
import { breaks } from '../db/breaks.ts';
import { site } from '../db/schema/sites.ts';
import { zone } from '../db/schema/zones.ts';
import { conflict } from '../errors.ts';
import { ofSite, type SiteWriter } from './site-writer.ts';

export type SiteChanges = z.output<typeof changeSite.body>;

/**
 * Changes a site as asked; where every stay depends on the change, all are to be derived again.
 *
 * @throws ApiError conflict where the organisation has a site of this name
 */
export async function applySiteChanges(
  writer: SiteWriter,
  before: Site,
  { valuePerJob, ...changes }: SiteChanges,
  now: Date,
): Promise<void> {
  const { tx, organisationId, siteId } = writer;
  const value = valuePerJob === undefined ? {} : { valuePerJob: valuePerJob?.toString() ?? null };
  const rebuilds =
    (changes.lostFinish ?? before.lostFinish) !== before.lostFinish ||
    (changes.newPassAfterDays ?? before.newPassAfterDays) !== before.newPassAfterDays;
  try {
    await tx
      .update(site)
      .set({ ...changes, ...value, ...(rebuilds ? { rebuildRequestedAt: now } : {}) })
      .where(and(eq(site.organisationId, organisationId), eq(site.id, siteId)));
  } catch (error) {
    if (breaks(error, 'site_name_once'))
      throw conflict('There is a site of this name already. Choose another name.');
    throw error;
  }
  if (changes.name !== undefined)
    await tx
      .update(zone)
      .set({ name: changes.name })
      .where(and(ofSite(writer, zone), eq(zone.kind, 'site')));
}
