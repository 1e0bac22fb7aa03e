import { and, eq } from 'drizzle-orm';
import type { Transaction } from '../db/client.ts';
import { site } from '../db/schema/sites.ts';
import { areaSpelling } from '../db/schema/zones.ts';
import { notFound } from '../errors.ts';
import type { SiteKey } from './site-uploads.ts';

/** What of a site the reading of a file depends on. */
export interface ReadingSite {
  timeZone: string;
  /** The site's areas by folded spelling. */
  knownAreas: Map<string, number>;
}

/** @throws ApiError not-found where there is no such site */
export async function readReadingSite(
  tx: Transaction,
  { organisationId, siteId }: SiteKey,
): Promise<ReadingSite> {
  const [found] = await tx
    .select({ timeZone: site.timeZone })
    .from(site)
    .where(and(eq(site.organisationId, organisationId), eq(site.id, siteId)));
  if (!found) throw notFound('The site');
  const spellings = await tx
    .select({ folded: areaSpelling.folded, areaId: areaSpelling.areaId })
    .from(areaSpelling)
    .where(and(eq(areaSpelling.organisationId, organisationId), eq(areaSpelling.siteId, siteId)));
  const knownAreas = new Map(spellings.map(({ folded, areaId }) => [folded, areaId]));
  return { timeZone: found.timeZone, knownAreas };
}
