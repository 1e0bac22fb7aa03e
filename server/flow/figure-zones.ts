import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { zoneRules } from '../../shared/local-time.ts';
import type { Transaction } from '../db/client.ts';
import type { FigureZone, SiteReader } from './zone-reader.ts';

const date = z.coerce.date().nullable();
const zoneRow = z.object({
  id: z.number(),
  has_starts: z.boolean(),
  has_quantities: z.boolean(),
  data_until: date,
  warm_until: date,
});

/** A reader of a site's figures, with the site's local time. @throws where the site is gone */
export async function readerOfSite(
  tx: Transaction,
  organisationId: number,
  siteId: number,
): Promise<SiteReader> {
  const { rows } = await tx.execute(sql`/* site time zone */
    select time_zone from site where organisation_id = ${organisationId} and id = ${siteId}`);
  const { time_zone } = z.object({ time_zone: z.string() }).parse(rows[0]);
  return { tx, organisationId, siteId, rules: zoneRules(time_zone) };
}

/** Every zone of the site, or one, as reading figures needs it. */
export async function readFigureZones(
  { tx, organisationId, siteId }: SiteReader,
  onlyZone: number | null = null,
): Promise<FigureZone[]> {
  const { rows } = await tx.execute(sql`/* zones for figures */
    select id, has_starts, has_quantities, data_until, warm_until from zone
    where organisation_id = ${organisationId} and site_id = ${siteId}
      and (${onlyZone}::integer is null or id = ${onlyZone}::integer)
    order by id`);
  return z
    .array(zoneRow)
    .parse(rows)
    .map((row) => ({
      id: row.id,
      hasStarts: row.has_starts,
      hasQuantities: row.has_quantities,
      dataUntil: row.data_until?.getTime() ?? null,
      warmUntil: row.warm_until?.getTime() ?? null,
    }));
}
