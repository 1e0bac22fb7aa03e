import { breaks } from '../db/breaks.ts';
import type { Database, Transaction } from '../db/client.ts';
import { site, siteDirectory } from '../db/schema/sites.ts';
import { zone } from '../db/schema/zones.ts';
import { withTenant } from '../db/tenant.ts';
import { conflict } from '../errors.ts';

export interface NewSite {
  name: string;
  timeZone: string;
  lostFinish?: 'infer' | 'leave-open' | undefined;
}

/**
 * Makes a site with its site zone.
 *
 * @param then runs in the same transaction, for the audit trail and whatever else belongs to the site
 * @throws ApiError conflict where the organisation has a site of this name
 */
export async function createSiteIn(
  db: Pick<Database, 'transaction'>,
  organisationId: number,
  given: NewSite,
  createdAt: Date,
  then: (tx: Transaction, siteId: number) => Promise<void>,
): Promise<number> {
  try {
    return await withTenant(db, organisationId, async (tx) => {
      const [listed] = await tx.insert(siteDirectory).values({ organisationId }).returning();
      if (!listed) throw new Error('The site could not be listed.');
      const { siteId } = listed;
      await tx.insert(site).values({
        organisationId,
        id: siteId,
        name: given.name,
        timeZone: given.timeZone,
        lostFinish: given.lostFinish ?? 'infer',
        createdAt,
      });
      await tx.insert(zone).values({ organisationId, siteId, kind: 'site', name: given.name });
      await then(tx, siteId);
      return siteId;
    });
  } catch (error) {
    if (breaks(error, 'site_name_once'))
      throw conflict(`There is a site named “${given.name}” already. Choose another name.`);
    throw error;
  }
}
