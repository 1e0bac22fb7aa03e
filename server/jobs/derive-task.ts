import { and, eq, sql } from 'drizzle-orm';
import { zone } from '../db/schema/zones.ts';
import { withTenant } from '../db/tenant.ts';
import { deriveZone, rebuildSite } from '../flow/derive/derive.ts';
import { inDerivation } from './derivation-of-site.ts';
import type { SiteTask } from './site-work.ts';

/** Derives the whole site afresh, because a setting changed on which its stays depend. */
export async function deriveRequested(task: SiteTask): Promise<void> {
  const { organisationId, siteId } = task;
  // Read before the settings are: a wish that arrives later stays, and is granted next.
  const { rows } = await withTenant(task.connection, organisationId, (tx) =>
    tx.execute(sql`/* rebuild wish */
      select rebuild_requested_at::text as wish from site
      where organisation_id = ${organisationId} and id = ${siteId}`),
  );
  await inDerivation(task.connection, organisationId, siteId, async (derivation) => {
    const { tx } = derivation;
    await rebuildSite(derivation);
    await tx
      .update(zone)
      .set({ state: 'ready' })
      .where(and(eq(zone.organisationId, organisationId), eq(zone.siteId, siteId)));
    await tx.execute(sql`/* wish granted */
      update site set rebuild_requested_at = null
      where organisation_id = ${organisationId} and id = ${siteId}
        and rebuild_requested_at::text = ${rows[0]?.wish ?? null}`);
  });
}

/** Derives a zone of several areas that is new or changed. */
export async function deriveRequestedZone(task: SiteTask, zoneId: number): Promise<void> {
  const { organisationId, siteId } = task;
  await inDerivation(task.connection, organisationId, siteId, async (derivation) => {
    await deriveZone(derivation, zoneId);
    await derivation.tx
      .update(zone)
      .set({ state: 'ready' })
      .where(
        and(eq(zone.organisationId, organisationId), eq(zone.siteId, siteId), eq(zone.id, zoneId)),
      );
  });
}
