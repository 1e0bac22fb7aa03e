import { and, eq } from 'drizzle-orm';
import { recordAct } from '../audit/record-act.ts';
import type { Transaction } from '../db/client.ts';
import { area, cap, zone } from '../db/schema/zones.ts';
import { withTenant } from '../db/tenant.ts';
import type { SiteWork } from '../jobs/site-work.ts';
import { bumpDataVersion } from '../sites/data-version.ts';
import { findZone } from '../sites/read-zones.ts';
import { ofSite } from '../sites/site-writer.ts';
import { createLoop } from '../sites/write-loops.ts';
import { agreedCap, span } from './plant/plan.ts';

/** The demo's depot, and the person in whose name things are done there. */
export interface Depot {
  organisationId: number;
  siteId: number;
  personId: number;
}

/**
 * Makes the loop whose cap was agreed, and declares that cap from the plant's first day on.
 *
 * @returns whether it did: a site that has a loop already is left as it is
 */
export async function declareAgreedCap({ db, clock }: SiteWork, depot: Depot): Promise<boolean> {
  const { organisationId, siteId, personId } = depot;
  return withTenant(db, organisationId, async (tx) => {
    const areaIds = await areasWithoutLoop(tx, depot);
    if (areaIds.length < agreedCap.areas.length) return false;
    const writer = { tx, organisationId, siteId };
    const zoneId = await createLoop(writer, { name: agreedCap.name, areaIds });
    const declared = {
      limit: String(agreedCap.limit),
      unit: 'jobs',
      note: agreedCap.note,
    } as const;
    await tx.insert(cap).values({
      ...{ organisationId, siteId, zoneId, ...declared },
      ...{ validFrom: new Date(span.from), declaredBy: personId, declaredAt: clock.now() },
    });
    await bumpDataVersion(writer);
    const after = await findZone(tx, organisationId, siteId, zoneId);
    for (const action of ['zone.create', 'cap.declare'])
      await recordAct(tx, {
        ...{ organisationId, siteId, at: clock.now(), actor: { kind: 'person', personId } },
        ...{ action, subjectKind: 'zone', subjectId: zoneId, after },
      });
    return true;
  });
}

/** The areas that the cap is for; none where the site has a loop already. */
async function areasWithoutLoop(tx: Transaction, depot: Depot): Promise<number[]> {
  const site = { tx, ...depot };
  const zones = await tx
    .select({ id: zone.id, kind: zone.kind, name: zone.name })
    .from(zone)
    .leftJoin(area, and(ofSite(site, area), eq(area.id, zone.id)))
    .where(ofSite(site, zone))
    .orderBy(area.position);
  if (zones.some(({ kind }) => kind === 'loop')) return [];
  return zones
    .filter(({ kind, name }) => kind === 'area' && agreedCap.areas.some((each) => each === name))
    .map(({ id }) => id);
}
