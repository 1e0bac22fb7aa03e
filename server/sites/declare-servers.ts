import { and, eq } from 'drizzle-orm';
import { zoneFact } from '../db/schema/zones.ts';
import { ofSite, type SiteWriter } from './site-writer.ts';

/** The beginning of all data: what holds without a date holds from here on. */
export const beginning = new Date(Date.UTC(1950, 0, 1));

/**
 * Declares the number of servers of a zone from a moment on, until the next declaration.
 *
 * @param servers null takes every declaration back
 * @param from null is the beginning: no earlier declaration outlives it
 */
export async function declareServers(
  writer: SiteWriter,
  zoneId: number,
  servers: number | null,
  from: Date | null,
): Promise<void> {
  const { tx, organisationId, siteId } = writer;
  if (from === null)
    await tx
      .delete(zoneFact)
      .where(
        and(ofSite(writer, zoneFact), eq(zoneFact.zoneId, zoneId), eq(zoneFact.kind, 'servers')),
      );
  if (servers === null) return;
  const amount = String(servers);
  const validFrom = from ?? beginning;
  await tx
    .insert(zoneFact)
    .values({ organisationId, siteId, zoneId, kind: 'servers', validFrom, amount })
    .onConflictDoUpdate({
      target: [
        zoneFact.organisationId,
        zoneFact.siteId,
        zoneFact.zoneId,
        zoneFact.kind,
        zoneFact.validFrom,
      ],
      set: { amount },
    });
}
