import { sql } from 'drizzle-orm';
import { z } from 'zod';
import type { SiteReader } from './zone-reader.ts';

/** An area as the trust map needs it. */
export interface TrustArea {
  id: number;
  name: string;
  /** Until then it fills up from an empty log; null where nothing is told of it. */
  warmUntil: number | null;
}

const areaRow = z.object({
  id: z.number(),
  name: z.string(),
  warm_until: z.coerce.date().nullable(),
});

/** The areas of a site in order of flow. */
export async function readTrustAreas({
  tx,
  organisationId,
  siteId,
}: SiteReader): Promise<TrustArea[]> {
  const { rows } = await tx.execute(sql`/* areas for the trust map */
    select zone.id, zone.name, zone.warm_until
    from zone join area using (organisation_id, site_id, id)
    where organisation_id = ${organisationId} and site_id = ${siteId}
    order by area.position, zone.id`);
  return z
    .array(areaRow)
    .parse(rows)
    .map(({ id, name, warm_until }) => ({
      id,
      name,
      warmUntil: warm_until?.getTime() ?? null,
    }));
}
